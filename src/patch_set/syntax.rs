//! What the parser of RON finds, in our words: fault, rule, and a hint where there
//! is one.

use ron::error::{Error as RonError, SpannedError};

use super::diagnostic::{Diagnostic, Finding, Lines, Position};
use super::fault::SetFault;
use super::name::nearest;
use crate::surface::Place;

/// The parser's fault as a diagnostic.
pub(super) fn syntax(error: &SpannedError, text: &str) -> Diagnostic {
    let lines = Lines::new(text);
    let span = &error.span;
    let start = lines.byte(text, span.start.line, span.start.col);
    // The parser points before the blanks it was about to skip.
    let rest = &text[start..];
    let start = start + (rest.len() - rest.trim_start().len());
    let end = lines.byte(text, span.end.line, span.end.col).max(start);
    let (message, hint) = if ends_early(&error.code, end, text) {
        let said = "the text ends too early; a bracket is not closed";
        (said.to_owned(), None)
    } else {
        words(&error.code)
    };
    Diagnostic {
        finding: Finding::Fault(SetFault::Syntax(message)),
        place: String::new(),
        hint,
        position: Some(Position::new(text, start..end, &lines)),
        path: Place::default(),
    }
}

fn ends_early(code: &RonError, end: usize, text: &str) -> bool {
    let open = matches!(
        code,
        RonError::Eof
            | RonError::ExpectedComma
            | RonError::ExpectedArrayEnd
            | RonError::ExpectedStructLikeEnd
    );
    open && end >= text.trim_end().len()
}

/// The fault with its rule, and a hint.
fn words(code: &RonError) -> (String, Option<String>) {
    if let Some(said) = fixed(code) {
        return (said.to_owned(), None);
    }
    let among = |list: &[&str]| {
        let quoted: Vec<String> = list.iter().map(|name| format!("`{name}`")).collect();
        quoted.join(", ")
    };
    let meant = |found: &str, list: &[&'static str]| {
        nearest(found, list.iter().copied()).map(|name| format!("did you mean `{name}`?"))
    };
    match code {
        RonError::NoSuchStructField {
            expected, found, ..
        } => (
            format!(
                "unknown field `{found}`; the fields here are {}",
                among(expected)
            ),
            meant(found, expected),
        ),
        RonError::NoSuchEnumVariant {
            expected, found, ..
        } => (
            format!(
                "unknown word `{found}`; it must be one of {}",
                among(expected)
            ),
            meant(found, expected),
        ),
        RonError::MissingStructField { field, .. } => (
            format!("the field `{field}` is missing; it has no default"),
            None,
        ),
        RonError::DuplicateStructField { field, .. } => (
            format!("the field `{field}` is given twice; once is enough"),
            None,
        ),
        RonError::ExpectedDifferentStructName { found, .. } => (
            format!("`{found}` is not known here; a structure begins with `(`"),
            None,
        ),
        RonError::ExpectedDifferentLength { expected, found }
            if expected == "an array of length 3" =>
        {
            (
                format!("{found} numbers; a point has three, (x, y, z)"),
                None,
            )
        }
        RonError::ExpectedDifferentLength { expected, found } => {
            (format!("{found} items; it must be {expected}"), None)
        }
        RonError::InvalidIntegerDigit { digit, .. } => (
            format!("`{digit}` is no digit; whole numbers are written in decimal digits"),
            None,
        ),
        RonError::NoSuchExtension(name) => (
            format!("the extension `{name}` is not known; a set needs none"),
            None,
        ),
        RonError::UnexpectedChar(letter) => (
            format!("{letter:?} cannot stand here; a value is a number, a text or in brackets"),
            None,
        ),
        RonError::InvalidValueForType { expected, found } => {
            (format!("{found} stands here; it must be {expected}"), None)
        }
        // Our own words, by way of serde.
        other => (small_first(&other.to_string()), None),
    }
}

/// What needs no names.
fn fixed(code: &RonError) -> Option<&'static str> {
    Some(match code {
        RonError::ExpectedArray => "expected `[`; a list stands in square brackets",
        RonError::ExpectedArrayEnd => "expected `]`; items of a list are parted by commas",
        RonError::ExpectedAttribute => {
            "this is no patch set; a set begins with `(`, comments with `//`"
        }
        RonError::ExpectedAttributeEnd => {
            "expected `)]`; so an attribute ends, and a set needs none"
        }
        RonError::ExpectedBoolean => "expected `true` or `false`; a flag is one of the two",
        RonError::ExpectedComma => "expected a comma; fields and items are parted by commas",
        RonError::ExpectedFloat => "expected a number; it is written as 12, -0.5 or 1e-3",
        RonError::FloatUnderscore | RonError::UnderscoreAtBeginning => {
            "an underscore in a number; digits stand side by side"
        }
        RonError::ExpectedInteger => "expected a whole number; it is written in decimal digits",
        RonError::IntegerOutOfBounds => "the number is too large; indices are below 2^64",
        RonError::ExpectedMapColon => "expected `:`; a field is written as name: value",
        RonError::ExpectedStructLike | RonError::ExpectedNamedStructLike(_) => {
            "expected `(`; a structure stands in round brackets"
        }
        RonError::ExpectedOptionEnd | RonError::ExpectedStructLikeEnd => {
            "expected `)`; fields of a structure are parted by commas"
        }
        RonError::ExpectedString => "expected a text; it stands in double quotes",
        RonError::ExpectedStringEnd => "the text is not closed; it ends with a double quote",
        RonError::ExpectedIdentifier
        | RonError::InvalidIdentifier(_)
        | RonError::SuggestRawIdentifier(_) => {
            "expected the name of a field; it is written as name: value"
        }
        RonError::InvalidEscape(_) => {
            "a backslash is not understood; it stands before n, t, u{...}, another or a quote"
        }
        RonError::UnclosedBlockComment => {
            "a comment is not closed; what begins with /* ends with */"
        }
        RonError::TrailingCharacters => "the set ends before this; a file holds one set",
        RonError::ExceededRecursionLimit => {
            "the brackets are nested too deeply; 128 levels are read"
        }
        RonError::Eof => "the text ends too early; a value is missing",
        _ => return None,
    })
}

fn small_first(text: &str) -> String {
    let mut letters = text.chars();
    letters.next().map_or_else(String::new, |first| {
        first.to_lowercase().chain(letters).collect()
    })
}
