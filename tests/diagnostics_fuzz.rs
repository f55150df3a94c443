//! No text makes the reader panic.
#![allow(
    clippy::unwrap_used,
    clippy::float_cmp,
    reason = "a panic is how a test fails, and exact values are meant"
)]

use chordwise::patch_set::PatchSet;
use proptest::prelude::*;

const SEEDS: [&str; 7] = [
    include_str!("../patches/octant.ron"),
    include_str!("../patches/bspline.ron"),
    include_str!("../patches/coons.ron"),
    include_str!("../patches/mirrored_pair.ron"),
    include_str!("../patches/two_boxes.ron"),
    include_str!("../patches/revolution.ron"),
    include_str!("../patches/README.md"),
];

/// Reads the text and draws whatever is found.
fn read(text: &str) {
    match PatchSet::from_ron(text, "fuzz.ron") {
        Ok(reading) => {
            for warning in &reading.warnings {
                let _ = warning.render("fuzz.ron", true);
            }
        }
        Err(faults) => {
            assert!(!faults.list.is_empty());
            let _ = (faults.render(true), faults.to_string());
        }
    }
}

const WORDS: [&str; 34] = [
    "NaN",
    "inf",
    "-inf",
    "1e999",
    "-1",
    "0",
    "5e-324",
    "1e308",
    "18446744073709551615",
    "255",
    "(",
    ")",
    "[",
    "]",
    "[]",
    "()",
    ",",
    ":",
    "\"",
    "\"wing\"",
    "Some(",
    "None",
    "/*",
    "*/",
    "//",
    "r#\"",
    "U0",
    "Sphere(radius: 3)",
    "true",
    "\u{feff}",
    "ß",
    "\0",
    "\\",
    "#![enable(x)]",
];

proptest! {
    #![proptest_config(ProptestConfig { cases: 3000, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn mutated_sets_never_panic(
        seed in 0..SEEDS.len(),
        edits in prop::collection::vec((any::<prop::sample::Index>(), 0..6_usize, 0..WORDS.len(), 0..12_usize), 1..6),
    ) {
        let mut text: Vec<char> = SEEDS[seed].chars().collect();
        for (at, action, word, length) in edits {
            if text.is_empty() {
                break;
            }
            let at = at.index(text.len());
            let end = (at + length).min(text.len());
            match action {
                0 => { text.splice(at..end, WORDS[word].chars()); }
                1 => { text.splice(at..at, WORDS[word].chars()); }
                2 => { text.drain(at..end); }
                3 => { let part = text[at..end].to_vec(); text.splice(at..at, part); }
                4 => text.truncate(at),
                _ => {
                    // A number in place of a number is what slips past the parser.
                    if let Some(digit) = text[at..].iter().position(char::is_ascii_digit) {
                        text.splice(at + digit..=at + digit, WORDS[word % 10].chars());
                    }
                }
            }
        }
        read(&text.into_iter().collect::<String>());
    }

    #[test]
    fn any_text_never_panics(text in "\\PC{0,200}") {
        read(&text);
    }
}

#[test]
fn every_truncation_reads_or_is_refused() {
    for seed in &SEEDS[..6] {
        for at in 0..seed.len() {
            if seed.is_char_boundary(at) {
                read(&seed[..at]);
            }
        }
    }
}
