//! Lettering: strokes drawn for this program, no font file.
//!
//! A letter is a list of strokes on a grid of 10 rows: baseline 2, small letters
//! up to 6, capitals up to 8. Each point is two digits, column and row; a point
//! alone is a dot.

/// Rows from the baseline to the top of a capital.
const CAPITAL: f64 = 6.0;

/// The row of the baseline.
const BASELINE: f64 = 2.0;

/// Columns between letters.
const SPACING: f64 = 1.6;

/// A stroke: points with x to the right and y down from the baseline, in units of
/// the height of a capital.
pub(super) type Stroke = Vec<[f64; 2]>;

/// The strokes of a letter and its columns.
fn glyph(letter: char) -> (&'static str, f64) {
    let strokes = match letter {
        'A' => "02 28 42,15 35",
        'B' => "02 08 38 47 46 35 05,35 44 43 32 02",
        'C' => "47 38 18 07 03 12 32 43",
        'D' => "02 08 28 46 44 22 02",
        'E' => "48 08 02 42,05 35",
        'F' => "48 08 02,05 35",
        'G' => "47 38 18 07 03 12 32 43 45 25",
        'H' => "02 08,42 48,05 45",
        'I' => return ("12 18", 2.0),
        'J' => "38 33 22 12 03",
        'K' => "02 08,48 05 42",
        'L' => "08 02 42",
        'M' => return ("02 08 34 68 62", 6.0),
        'N' => "02 08 42 48",
        'O' => "12 32 43 47 38 18 07 03 12",
        'P' => "02 08 38 47 46 35 05",
        'Q' => "12 32 43 47 38 18 07 03 12,24 51",
        'R' => "02 08 38 47 46 35 05,25 42",
        'S' => "47 38 18 07 06 15 35 44 43 32 12 03",
        'T' => "08 48,28 22",
        'U' => "08 03 12 32 43 48",
        'V' => "08 22 48",
        'W' => return ("08 12 36 52 68", 6.0),
        'X' => "02 48,08 42",
        'Y' => "08 25 48,25 22",
        'Z' => "08 48 02 42",
        'a' => "46 42,45 36 16 05 03 12 32 43",
        'b' => "08 02,05 16 36 45 43 32 12 03",
        'c' => "45 36 16 05 03 12 32 43",
        'd' => "48 42,45 36 16 05 03 12 32 43",
        'e' => "04 44 45 36 16 05 03 12 32 43",
        'f' => return ("38 28 17 12,06 26", 3.0),
        'g' => "46 41 30 10 01,45 36 16 05 03 12 32 43",
        'h' => "08 02,05 16 36 45 42",
        'i' => return ("02 06,08", 0.0),
        'j' => return ("16 11 00,18", 1.0),
        'k' => return ("08 02,36 04 32", 3.0),
        'l' => return ("08 03 12", 1.0),
        'm' => return ("06 02,05 16 26 35 32,35 46 56 65 62", 6.0),
        'n' => "06 02,05 16 36 45 42",
        'o' => "12 32 43 45 36 16 05 03 12",
        'p' => "06 00,05 16 36 45 43 32 12 03",
        'q' => "46 40,45 36 16 05 03 12 32 43",
        'r' => return ("06 02,04 15 26 36", 3.0),
        's' => "45 36 16 05 14 34 43 32 12 03",
        't' => return ("18 13 22 32,06 36", 3.0),
        'u' => "06 03 12 32 43,46 42",
        'v' => "06 22 46",
        'w' => return ("06 12 35 52 66", 6.0),
        'x' => "06 42,46 02",
        'y' => "06 22,46 10",
        'z' => "06 46 02 42",
        '0' => "12 32 43 47 38 18 07 03 12,24 26",
        '1' => "07 28 22,02 42",
        '2' => "07 18 38 47 46 02 42",
        '3' => "07 18 38 47 46 35 15,35 44 43 32 12 03",
        '4' => "32 38 04 44",
        '5' => "48 08 05 35 44 43 32 12 03",
        '6' => "47 38 18 07 03 12 32 43 44 35 15 04",
        '7' => "08 48 12",
        '8' => "15 06 07 18 38 47 46 35 15 04 03 12 32 43 44 35",
        '9' => "46 35 15 06 07 18 38 47 43 32 12 03",
        '.' => return ("02", 0.0),
        ',' => return ("12 01", 1.0),
        ':' => return ("02,05", 0.0),
        ';' => return ("12 01,15", 1.0),
        '-' => return ("04 34", 3.0),
        '+' => "05 45,23 27",
        '=' => "04 44,06 46",
        '/' => "01 49",
        '|' => return ("00 09", 0.0),
        '(' => return ("29 07 03 21", 2.0),
        ')' => return ("09 27 23 01", 2.0),
        '[' => return ("29 09 01 21", 2.0),
        ']' => return ("09 29 21 01", 2.0),
        '<' => "47 05 43",
        '>' => "07 45 03",
        '%' => "02 48,07 18 07,43 32 43",
        '_' => "01 41",
        '*' => "13 37,17 33,05 45",
        '^' => return ("06 28 46", 4.0),
        '\'' => return ("08 07", 0.0),
        '"' => return ("08 07,28 27", 2.0),
        '!' => return ("08 04,02", 0.0),
        '?' => "07 18 38 47 46 25 24,22",
        '#' => "11 17,31 37,03 43,05 45",
        '&' => "42 07 18 27 04 03 12 22 44",
        ' ' => return ("", 2.4),
        // A box for what is not drawn.
        _ => "02 08 48 42 02",
    };
    (strokes, 4.0)
}

/// The width of a line of text, in heights of a capital.
pub(super) fn width(text: &str) -> f64 {
    let columns: f64 = text.chars().map(|c| glyph(c).1 + SPACING).sum();
    (columns - SPACING).max(0.0) / CAPITAL
}

/// All strokes of a line of text.
pub(super) fn strokes(text: &str) -> Vec<Stroke> {
    let mut found = Vec::new();
    let mut at = 0.0;
    for letter in text.chars() {
        let (strokes, columns) = glyph(letter);
        for stroke in strokes.split(',').filter(|s| !s.is_empty()) {
            let digit = |byte: u8| f64::from(byte - b'0');
            let points = stroke.split(' ').map(|pair| {
                let pair = pair.as_bytes();
                [
                    (at + digit(pair[0])) / CAPITAL,
                    (BASELINE - digit(pair[1])) / CAPITAL,
                ]
            });
            found.push(points.collect());
        }
        at += columns + SPACING;
    }
    found
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_letter_of_a_label_is_drawn_within_its_columns() {
        for letter in (b' '..=b'~').map(char::from) {
            let (strokes, columns) = glyph(letter);
            for pair in strokes.split([',', ' ']).filter(|p| !p.is_empty()) {
                let digits = pair.as_bytes();
                assert!(
                    digits.len() == 2 && digits.iter().all(u8::is_ascii_digit),
                    "{letter}: {pair}"
                );
                let slack = if letter == 'Q' { 1.0 } else { 0.0 };
                assert!(f64::from(digits[0] - b'0') <= columns + slack, "{letter}");
            }
        }
        let plain = ('a'..='z').chain('A'..='Z').chain('0'..='9');
        let boxed = glyph('\u{1}').0;
        assert!(
            plain
                .chain(".,:;-+=/()[]<>%'^_".chars())
                .all(|c| glyph(c).0 != boxed)
        );
    }
}
