//! Finding the place of a value in the text.
//!
//! A good parse keeps no positions, so the text is walked again, but only when
//! there is something to point at. The walk knows brackets, strings and
//! comments; the parser has already accepted the text.

use std::ops::Range;

use crate::surface::{Place, Step};

/// A field at the top of the file, and its entries if it is a list.
#[derive(Debug)]
struct TopField<'a> {
    name: &'a str,
    range: Range<usize>,
    items: Vec<Range<usize>>,
}

/// A text ready for look-ups: the entries of the lists at the top are found
/// once, so that a look-up walks one entry only.
#[derive(Debug)]
pub(crate) struct Locator<'a> {
    text: &'a str,
    whole: Range<usize>,
    fields: Vec<TopField<'a>>,
}

impl<'a> Locator<'a> {
    pub(crate) fn new(text: &'a str) -> Self {
        let mut walk = Walk { text, at: 0 };
        walk.skip_attributes();
        let start = walk.at;
        walk.skip_value();
        let whole = start..walk.at;
        let fields = fields(text, start)
            .into_iter()
            .map(|(name, range)| TopField {
                name,
                items: items(text, range.start),
                range,
            })
            .collect();
        Self {
            text,
            whole,
            fields,
        }
    }

    /// The bytes of the value, or of the nearest value around it that is there.
    pub(crate) fn locate(&self, place: &Place) -> Range<usize> {
        let Some((&Step::Field(name), rest)) = place.0.split_first() else {
            return self.whole.clone();
        };
        let Some(field) = self.fields.iter().find(|field| field.name == name) else {
            return self.whole.clone();
        };
        match rest.split_first() {
            Some((&Step::Item(index), rest)) if index < field.items.len() => {
                self.within(field.items[index].clone(), rest)
            }
            _ => self.within(field.range.clone(), rest),
        }
    }

    fn within(&self, mut range: Range<usize>, steps: &[Step]) -> Range<usize> {
        for step in steps {
            let found = match step {
                Step::Field(name) => fields(self.text, range.start)
                    .into_iter()
                    .find(|(found, _)| found == name)
                    .map(|(_, range)| range),
                Step::Item(index) => items(self.text, range.start).get(*index).cloned(),
            };
            match found {
                Some(inner) => range = inner,
                None => break,
            }
        }
        range
    }
}

/// The named fields of the struct or struct variant that starts at `at`.
fn fields(text: &str, at: usize) -> Vec<(&str, Range<usize>)> {
    let mut walk = Walk { text, at };
    let mut found = Vec::new();
    if !walk.enter(b'(') {
        return found;
    }
    loop {
        walk.skip_blank();
        let name = walk.identifier();
        walk.skip_blank();
        if name.is_empty() || walk.peek() != Some(b':') {
            return found;
        }
        walk.at += 1;
        walk.skip_blank();
        let start = walk.at;
        walk.skip_value();
        found.push((name, start..walk.at));
        walk.skip_blank();
        if walk.peek() != Some(b',') {
            return found;
        }
        walk.at += 1;
    }
}

/// The entries of the list or tuple that starts at `at`.
fn items(text: &str, at: usize) -> Vec<Range<usize>> {
    let mut walk = Walk { text, at };
    let mut found = Vec::new();
    if !walk.enter(b'[') && !walk.enter(b'(') {
        return found;
    }
    loop {
        walk.skip_blank();
        let start = walk.at;
        walk.skip_value();
        if walk.at == start {
            return found;
        }
        found.push(start..walk.at);
        walk.skip_blank();
        if walk.peek() != Some(b',') {
            return found;
        }
        walk.at += 1;
    }
}

struct Walk<'a> {
    text: &'a str,
    at: usize,
}

impl<'a> Walk<'a> {
    fn peek(&self) -> Option<u8> {
        self.text.as_bytes().get(self.at).copied()
    }

    fn rest(&self) -> &'a str {
        self.text.get(self.at..).unwrap_or("")
    }

    fn skip_blank(&mut self) {
        loop {
            let rest = self.rest();
            let blank = rest.len() - rest.trim_start().len();
            self.at += blank;
            let rest = self.rest();
            if rest.starts_with("//") {
                self.at += rest.find('\n').unwrap_or(rest.len());
            } else if rest.starts_with("/*") {
                self.skip_block_comment();
            } else {
                return;
            }
        }
    }

    fn skip_block_comment(&mut self) {
        let bytes = self.text.as_bytes();
        let mut depth = 0_usize;
        while self.at < bytes.len() {
            match (bytes[self.at], bytes.get(self.at + 1)) {
                (b'/', Some(b'*')) => {
                    depth += 1;
                    self.at += 2;
                }
                (b'*', Some(b'/')) => {
                    depth -= 1;
                    self.at += 2;
                    if depth == 0 {
                        return;
                    }
                }
                _ => self.at += 1,
            }
        }
    }

    /// `#![enable(...)]` lines at the top.
    fn skip_attributes(&mut self) {
        self.skip_blank();
        while self.rest().starts_with("#!") {
            self.at += self.rest().find(']').map_or(self.rest().len(), |at| at + 1);
            self.skip_blank();
        }
    }

    fn identifier(&mut self) -> &'a str {
        let rest = self.rest();
        let end = rest
            .find(|c: char| !(c.is_alphanumeric() || c == '_'))
            .unwrap_or(rest.len());
        self.at += end;
        &rest[..end]
    }

    /// Steps behind the opening bracket of a value, past its name; `Some(` is
    /// seen through if what it holds has the bracket.
    fn enter(&mut self, bracket: u8) -> bool {
        let start = self.at;
        let name = self.identifier();
        self.skip_blank();
        if name == "Some" && self.peek() == Some(b'(') {
            self.at += 1;
            self.skip_blank();
            if self.enter(bracket) {
                return true;
            }
        } else if self.peek() == Some(bracket) {
            self.at += 1;
            return true;
        }
        self.at = start;
        false
    }

    /// To the end of the value: the next comma or closing bracket outside all
    /// brackets, less the blanks before it.
    fn skip_value(&mut self) {
        let bytes = self.text.as_bytes();
        let mut depth = 0_usize;
        let mut end = self.at;
        while let Some(&byte) = bytes.get(self.at) {
            match byte {
                b'(' | b'[' | b'{' => depth += 1,
                b')' | b']' | b'}' if depth == 0 => break,
                b')' | b']' | b'}' => depth -= 1,
                b',' if depth == 0 => break,
                b'"' => self.skip_string(),
                b'r' if self.rest().starts_with("r#") || self.rest().starts_with("r\"") => {
                    self.skip_raw_string();
                }
                b'/' | b' ' | b'\t' | b'\n' | b'\r' => {
                    let before = self.at;
                    self.skip_blank();
                    if self.at > before {
                        continue;
                    }
                }
                _ => {}
            }
            self.at += 1;
            end = self.at;
        }
        self.at = end.min(bytes.len());
    }

    /// To the closing quote.
    fn skip_string(&mut self) {
        let bytes = self.text.as_bytes();
        self.at += 1;
        while let Some(&byte) = bytes.get(self.at) {
            match byte {
                b'\\' => self.at += 1,
                b'"' => return,
                _ => {}
            }
            self.at += 1;
        }
    }

    /// To the last character of r#"..."#.
    fn skip_raw_string(&mut self) {
        let rest = self.rest();
        let hashes = rest[1..].bytes().take_while(|&b| b == b'#').count();
        if rest.as_bytes().get(1 + hashes) != Some(&b'"') {
            return; // a raw identifier
        }
        let close = format!("\"{}", "#".repeat(hashes));
        let body = 2 + hashes;
        self.at += match rest[body..].find(&close) {
            Some(at) => body + at + close.len() - 1,
            None => rest.len(),
        };
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_place_is_found_past_comments_strings_and_optional_names() {
        let text = r##"#![enable(implicit_some)]
            ( name: "a, (b", /* , /* ) */ */ patches: [
            (name: r#"x")"#, surface: Bezier(net: [[(0,0,0)], [(1, 2 , NaN), ]])), // , [
            (name: "y", surface: Some(Plane(origin: (1,2,3)))) ] )"##;
        let locator = Locator::new(text);
        let find = |steps: &[Step]| &text[locator.locate(&Place(steps.to_vec()))];
        let patch = |k| vec![Step::Field("patches"), Step::Item(k)];
        let net = [Step::Field("surface"), Step::Field("net"), Step::Item(1)];
        let row = [patch(0), net.to_vec()].concat();
        assert_eq!(find(&row), "[(1, 2 , NaN), ]");
        let number = [row, vec![Step::Item(0), Step::Item(2)]].concat();
        assert_eq!(find(&number), "NaN");
        let name = [patch(0), vec![Step::Field("name")]].concat();
        assert_eq!(find(&name), r##"r#"x")"#"##);
        let origin = [Step::Field("surface"), Step::Field("origin"), Step::Item(1)];
        assert_eq!(find(&[patch(1), origin.to_vec()].concat()), "2");
        assert_eq!(find(&[Step::Field("name")]), "\"a, (b\"");
        let missing = [patch(1), vec![Step::Field("flip")]].concat();
        assert!(find(&missing).starts_with("(name: \"y\""));
    }

    #[test]
    fn broken_text_does_not_stop_the_walk() {
        for text in [
            "", "(", "(a", "(a:", "(a: [", "(a: \"", "(a: r#\"", "(/*", "#![", ")", "(((([",
        ] {
            let locator = Locator::new(text);
            let _ = locator.locate(&Place(vec![Step::Field("a"), Step::Item(0)]));
        }
    }
}
