//! Names in formats that end a name at white space or at the end of a line.

use std::fmt;

/// A name with everything percent-encoded (RFC 3986) that the format would
/// misread: control characters and `%` always, and on request white space and
/// `#` too. Different names stay different.
#[derive(Debug)]
pub(super) struct Encoded<'a> {
    name: &'a str,
    one_word: bool,
}

impl<'a> Encoded<'a> {
    /// For the rest of a line.
    pub(super) fn line(name: &'a str) -> Self {
        Self {
            name,
            one_word: false,
        }
    }

    /// For one word.
    pub(super) fn word(name: &'a str) -> Self {
        Self {
            name,
            one_word: true,
        }
    }
}

impl fmt::Display for Encoded<'_> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        use fmt::Write;
        for c in self.name.chars() {
            if c.is_control() || c == '%' || (self.one_word && (c.is_whitespace() || c == '#')) {
                let mut bytes = [0; 4];
                for byte in c.encode_utf8(&mut bytes).bytes() {
                    write!(f, "%{byte:02X}")?;
                }
            } else {
                f.write_char(c)?;
            }
        }
        Ok(())
    }
}

/// The name that was encoded; what is no encoding stays as it is.
pub(super) fn decoded(text: &str) -> String {
    let mut bytes = Vec::with_capacity(text.len());
    let mut rest = text.as_bytes();
    while let Some((&byte, tail)) = rest.split_first() {
        let code = tail
            .get(..2)
            .filter(|hex| byte == b'%' && hex.iter().all(u8::is_ascii_hexdigit))
            .and_then(|hex| u8::from_str_radix(std::str::from_utf8(hex).ok()?, 16).ok());
        bytes.push(code.unwrap_or(byte));
        rest = &tail[if code.is_some() { 2 } else { 0 }..];
    }
    String::from_utf8_lossy(&bytes).into_owned()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_come_back() {
        for name in [
            "wing/1",
            "front wing\n1",
            "50%",
            "100%25",
            "Kotflügel\u{85}",
            "%",
        ] {
            assert_eq!(decoded(&Encoded::line(name).to_string()), name);
            assert_eq!(decoded(&Encoded::word(name).to_string()), name);
        }
    }

    #[test]
    fn names_stay_on_their_line_and_apart() {
        assert_eq!(Encoded::word("wing/1").to_string(), "wing/1");
        assert_eq!(
            Encoded::word("front wing#2").to_string(),
            "front%20wing%232"
        );
        assert_eq!(Encoded::word("front%20wing").to_string(), "front%2520wing");
        assert_eq!(Encoded::line("front wing\n1").to_string(), "front wing%0A1");
        assert_eq!(Encoded::word("Kotflügel").to_string(), "Kotflügel");
    }
}
