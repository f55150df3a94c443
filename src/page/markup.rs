//! Text for HTML: escaping, figures, bytes as text.

use std::fmt::Write;

/// A text with the letters escaped that mean something in HTML.
#[must_use]
pub(super) fn escape(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for letter in text.chars() {
        match letter {
            '&' => out.push_str("&amp;"),
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '"' => out.push_str("&quot;"),
            // Nothing invisible gets into the page.
            c if c.is_control() => out.push(' '),
            c => out.push(c),
        }
    }
    out
}

/// Bytes in base 64 (RFC 4648).
#[must_use]
pub(super) fn base64(bytes: &[u8]) -> String {
    const DIGITS: &[u8; 64] = b"ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/";
    let mut out = String::with_capacity(bytes.len().div_ceil(3) * 4);
    for chunk in bytes.chunks(3) {
        let byte = |i: usize| u32::from(chunk.get(i).copied().unwrap_or(0));
        let word = byte(0) << 16 | byte(1) << 8 | byte(2);
        for i in 0..4 {
            if i <= chunk.len() {
                out.push(char::from(DIGITS[(word >> (18 - 6 * i)) as usize & 63]));
            } else {
                out.push('=');
            }
        }
    }
    out
}

/// A figure in four digits, with an exponent only where it must be.
#[must_use]
pub(super) fn figure(value: f64) -> String {
    let size = value.abs();
    if size > 0.0 && !(1e-3..1e7).contains(&size) {
        return format!("{value:.3e}");
    }
    let decimals = match size {
        s if s >= 1000.0 || s <= 0.0 => 0,
        s if s >= 100.0 => 1,
        s if s >= 10.0 => 2,
        s if s >= 1.0 => 3,
        s if s >= 0.1 => 4,
        _ => 5,
    };
    let text = format!("{value:.decimals$}");
    if text.contains('.') {
        text.trim_end_matches('0').trim_end_matches('.').to_owned()
    } else {
        text
    }
}

/// Rows of a list of terms.
#[must_use]
pub(super) fn terms(rows: &[(&str, String)]) -> String {
    let mut out = String::from("<dl class=\"facts\">\n");
    for (term, text) in rows {
        // Writing to a string cannot fail.
        let _ = writeln!(
            out,
            "<div><dt>{}</dt><dd>{}</dd></div>",
            escape(term),
            escape(text)
        );
    }
    out + "</dl>\n"
}

#[cfg(test)]
mod tests {
    use super::*;

    /// The vectors of RFC 4648, section 10.
    #[test]
    fn base64_is_that_of_the_standard() {
        for (text, code) in [
            ("", ""),
            ("f", "Zg=="),
            ("fo", "Zm8="),
            ("foo", "Zm9v"),
            ("foob", "Zm9vYg=="),
            ("fooba", "Zm9vYmE="),
            ("foobar", "Zm9vYmFy"),
        ] {
            assert_eq!(base64(text.as_bytes()), code);
        }
    }

    #[test]
    fn nothing_of_a_name_is_taken_for_markup() {
        assert_eq!(
            escape("<a href=\"x\">&\n"),
            "&lt;a href=&quot;x&quot;&gt;&amp; "
        );
    }
}
