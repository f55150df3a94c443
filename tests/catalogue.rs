//! Every error and every warning, provoked once: what the user reads, as a
//! snapshot that is reviewed like code. `CHORDWISE_REWRITE=1` writes it anew,
//! and the test fails all the same, so that nobody takes that for a check.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use std::collections::BTreeSet;
use std::fmt::Write as _;
use std::fs;
use std::path::{Path, PathBuf};
use std::process::Command;

use chordwise::format::{Format, WriteOptions, write};
use chordwise::mesh::Mesh;
use chordwise::scalar::{LengthUnit, Tolerance};

#[path = "catalogue/cases.rs"]
mod cases;

fn root() -> &'static Path {
    Path::new(env!("CARGO_MANIFEST_DIR"))
}

fn snapshot() -> PathBuf {
    root().join("tests/catalogue/messages.txt")
}

/// Runs a case in a folder of its own; its command line, what it said and its
/// exit code.
fn played(case: &cases::Case) -> String {
    let folder = tempfile::tempdir().unwrap();
    for (name, bytes) in &case.files {
        let path = folder.path().join(name);
        match bytes.strip_prefix(b"-> ") {
            #[cfg(unix)]
            Some(to) => {
                std::os::unix::fs::symlink(str::from_utf8(to).unwrap(), path).unwrap();
            }
            _ => fs::write(path, bytes).unwrap(),
        }
    }
    let output = Command::new(assert_cmd::cargo::cargo_bin!("chordwise"))
        .args(&case.arguments)
        .current_dir(folder.path())
        .env("NO_COLOR", "1")
        .env("COLUMNS", "100")
        .output()
        .unwrap();
    let said = String::from_utf8(output.stderr).unwrap();
    let said: Vec<&str> = said.trim_end().lines().collect();
    let from = if case.name.ends_with("the last five lines") {
        said.len() - 5
    } else if case.name.starts_with("warned") {
        0
    } else {
        // Warnings of the set stand before what it is refused for.
        let error = said.iter().position(|line| line.starts_with("error: "));
        error.unwrap_or(0)
    };
    let mut text = format!(
        "-- {}\n$ chordwise {}\n",
        case.name,
        case.arguments.join(" ")
    );
    for line in &said[from..] {
        writeln!(text, "{}", without_places(line.trim_end())).unwrap();
    }
    let code = output.status.code().unwrap();
    let litter = fs::read_dir(folder.path()).unwrap().count();
    assert_eq!(litter, case.files.len(), "{text}: something was written");
    assert!(
        code == 2 || (code == 0 && said.iter().any(|line| line.starts_with("warning: "))),
        "{text}exit {code}: nothing is wrong"
    );
    writeln!(text, "exit {code}\n").unwrap();
    text
}

/// A line with the figures taken out that any change of the mesher moves: those
/// with six decimals.
fn without_places(line: &str) -> String {
    let mut out = String::new();
    let mut number = String::new();
    for letter in line.chars().chain(std::iter::once('\n')) {
        if letter.is_ascii_digit() || (letter == '.' && !number.is_empty()) {
            number.push(letter);
            continue;
        }
        match number.split_once('.') {
            Some((_, decimals)) if decimals.len() == 6 => out.push_str("0.######"),
            _ => out.push_str(&number),
        }
        number.clear();
        out.push(letter);
    }
    out.trim_end().to_owned()
}

/// What the program finds out before it comes to it: provoked from the library.
fn of_the_library() -> String {
    let empty = Mesh {
        name: String::new(),
        unit: LengthUnit::Millimetre,
        panels: Vec::new(),
        points: Vec::new(),
        vertices: Vec::new(),
        triangles: Vec::new(),
        parts: Vec::new(),
        evidence: None,
        corner_parts: None,
    };
    let options = WriteOptions::new(Tolerance::new(0.1).unwrap());
    let error = write(&empty, Format::Stl, &options, &mut std::io::sink()).unwrap_err();
    format!("==== of the library ====\n\n{error}\n")
}

fn catalogue() -> String {
    let mut text = String::new();
    let mut names = BTreeSet::new();
    for (chapter, cases) in cases::all() {
        writeln!(text, "==== {chapter} ====\n").unwrap();
        for case in &cases {
            assert!(
                names.insert(case.name.clone()),
                "{} is there twice",
                case.name
            );
            text += &played(case);
        }
    }
    text + &of_the_library()
}

#[test]
fn every_message_is_as_reviewed() {
    let now = catalogue();
    let before = fs::read_to_string(snapshot()).unwrap_or_default();
    if now == before {
        return;
    }
    if std::env::var_os("CHORDWISE_REWRITE").is_some() {
        fs::write(snapshot(), &now).unwrap();
        panic!("tests/catalogue/messages.txt is written anew: review it, and run again");
    }
    let differs = now.lines().zip(before.lines()).find(|(a, b)| a != b);
    panic!("messages differ from tests/catalogue/messages.txt, first here:\n{differs:#?}");
}

/// The fixed parts of every `#[error("...")]` in the sources.
fn templates() -> Vec<(String, Vec<String>)> {
    let mut found = Vec::new();
    let mut folders = vec![root().join("src")];
    while let Some(folder) = folders.pop() {
        for entry in fs::read_dir(folder).unwrap() {
            let path = entry.unwrap().path();
            if path.is_dir() {
                folders.push(path);
                continue;
            }
            let text = fs::read_to_string(&path).unwrap();
            for part in text.split("#[error(").skip(1) {
                let Some(literal) = part.trim_start().strip_prefix('"') else {
                    continue;
                };
                let literal = &literal[..literal.find("\"").unwrap()];
                let mut fixed = vec![String::new()];
                let mut depth = 0;
                for letter in literal.chars() {
                    match letter {
                        '{' => {
                            depth += 1;
                            fixed.push(String::new());
                        }
                        '}' => depth -= 1,
                        _ if depth == 0 => fixed.last_mut().unwrap().push(letter),
                        _ => {}
                    }
                }
                fixed.retain(|part| part.trim().len() > 1);
                found.push((format!("{}: {literal}", path.display()), fixed));
            }
        }
    }
    found.sort();
    found
}

/// Messages of the library alone, which no command passes on.
const NOT_OF_THE_PROGRAM: [&str; 8] = [
    // A guard: no set is known whose mending spoils a seam.
    "would not be as demanded any more",
    // The program makes its meshes with evidence where it draws them.
    "src/picture/scene.rs",
    // What the parser of nets says is said of the patch set's fields instead.
    "src/bezier/net.rs",
    // The command line has lengths that are none refused before.
    "not a length; a ",
    // A guard: no patch is known that a fan could not fill.
    "its border could not be filled with triangles of the size",
    // Broken invariants, for tests.
    "src/topology/check.rs",
    // The command line only lets names through that are known.
    "is no mesh format; write",
    "is no layout; write",
];

/// A new message needs a case that provokes it.
#[test]
fn no_message_is_missing() {
    let text = fs::read_to_string(snapshot()).unwrap();
    let lines: Vec<&str> = text.lines().collect();
    let templates = templates();
    assert!(templates.len() > 60, "{} templates found", templates.len());
    let missing: Vec<&String> = templates
        .iter()
        .filter(|(name, _)| !NOT_OF_THE_PROGRAM.iter().any(|part| name.contains(part)))
        .filter(|(_, parts)| {
            let said = |line: &&str| {
                let mut rest = *line;
                parts.iter().all(|part| match rest.find(part.as_str()) {
                    Some(at) => {
                        rest = &rest[at + part.len()..];
                        true
                    }
                    None => false,
                })
            };
            !parts.is_empty() && !lines.iter().any(said)
        })
        .map(|(name, _)| name)
        .collect();
    assert!(missing.is_empty(), "no case provokes {missing:#?}");
}

/// Place, fault, rule: the wording all messages of ours have in common.
#[test]
fn messages_are_in_the_house_style() {
    let text = fs::read_to_string(snapshot()).unwrap();
    let ours = text.split("==== usage ====").next().unwrap();
    let mut seen = 0;
    for line in ours.lines() {
        let Some(message) = line
            .strip_prefix("error: ")
            .or_else(|| line.strip_prefix("warning: "))
        else {
            continue;
        };
        seen += 1;
        if message.contains("(os error") {
            // The system has its own words.
            continue;
        }
        assert!(!message.ends_with('.'), "{message}: a full stop");
        let first = message.rsplit(": ").next().unwrap().chars().next().unwrap();
        assert!(!first.is_uppercase(), "{message}: a capital");
    }
    assert!(seen > 50, "{seen} messages seen");
}
