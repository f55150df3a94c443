//! README keeps its word: its excerpts are the program's, its examples run.
//!
//! `CHORDWISE_REWRITE=1 cargo test --test readme` writes the excerpts anew, and
//! still fails, so that nobody takes it for a check.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use std::fs;
use std::path::{Path, PathBuf};

use assert_cmd::Command;

fn root() -> &'static Path {
    Path::new(env!("CARGO_MANIFEST_DIR"))
}

fn readme() -> String {
    fs::read_to_string(root().join("README.md")).unwrap()
}

/// What a command of README prints, run in `folder`; paths of shipped sets are
/// made absolute.
fn output(command: &str, folder: &Path) -> String {
    let arguments = command.split(' ').skip(1).map(|word| {
        if word.starts_with("patches/") {
            root().join(word)
        } else {
            PathBuf::from(word)
        }
    });
    let output = Command::cargo_bin("chordwise")
        .unwrap()
        .current_dir(folder)
        .args(arguments)
        .output()
        .unwrap();
    String::from_utf8(output.stdout).unwrap()
}

/// The lines worth showing: of a seam report the faults, two seams that are
/// met, and how the open edges are told.
fn excerpt(command: &str, text: &str) -> String {
    let lines: Vec<&str> = text.lines().map(str::trim_end).collect();
    let last = lines
        .iter()
        .rposition(|line| line.is_empty())
        .expect("a line stands before the caution");
    if !command.contains(" seams ") {
        return lines[..last].join("\n");
    }
    let met = lines
        .iter()
        .position(|l| l.split_whitespace().nth(1) == Some("met"))
        .unwrap();
    let misses = lines
        .iter()
        .position(|l| l.starts_with("near misses"))
        .unwrap();
    let loops = lines
        .iter()
        .position(|l| l.starts_with("open loops"))
        .unwrap();
    let mut shown = lines[..met + 2].to_vec();
    shown.extend(["...", ""]);
    shown.extend(&lines[misses..loops + 3]);
    shown.push("...");
    shown.join("\n")
}

/// First words of all lines: figures may move, what is told may not.
fn labels(text: &str) -> Vec<&str> {
    text.lines()
        .filter_map(|line| line.split_whitespace().next())
        .collect()
}

#[test]
fn excerpts_are_what_the_program_prints() {
    let mut text = readme();
    let folder = tempfile::tempdir().unwrap();
    let begin = "<!-- begin: ";
    let commands: Vec<String> = text
        .split(begin)
        .skip(1)
        .map(|after| after.split(" -->").next().unwrap().to_owned())
        .collect();
    assert_eq!(commands.len(), 3);
    let mut wrong = Vec::new();
    for command in &commands {
        let printed = excerpt(command, &output(command, folder.path()));
        let start = text.find(&format!("{begin}{command} -->")).unwrap();
        let start = start + text[start..].find("```text\n").unwrap() + "```text\n".len();
        let end = start + text[start..].find("```\n<!-- end -->").unwrap();
        if labels(&text[start..end]) != labels(&printed) {
            wrong.push(format!("{command} prints\n{printed}"));
        }
        text.replace_range(start..end, &(printed + "\n"));
    }
    if std::env::var_os("CHORDWISE_REWRITE").is_some() {
        fs::write(root().join("README.md"), text).unwrap();
        panic!("README.md is rewritten; look at it and run the test again");
    }
    assert!(
        wrong.is_empty(),
        "README.md is out of date: {}",
        wrong.join("\n\n")
    );
}

/// The code blocks of a language.
fn blocks<'a>(text: &'a str, language: &str) -> Vec<&'a str> {
    text.split(&format!("\n```{language}\n"))
        .skip(1)
        .map(|after| after.split("\n```").next().unwrap())
        .collect()
}

#[test]
fn the_set_in_the_readme_is_valid() {
    let text = readme();
    let sets = blocks(&text, "ron");
    assert_eq!(sets.len(), 1);
    let reading = chordwise::patch_set::PatchSet::from_ron(sets[0], "README.md").unwrap();
    assert_eq!(reading.warnings.len(), 0);
    assert_eq!(reading.set.patches().len(), 3);
}

/// Runs where there is a Python with NumPy; `CHORDWISE_PYTHON` names one that
/// must do.
#[test]
fn the_python_example_writes_a_valid_set() {
    let text = readme();
    let scripts = blocks(&text, "python");
    assert_eq!(scripts.len(), 1);
    let lines = scripts[0].lines().filter(|line| !line.is_empty()).count();
    assert_eq!(lines, 10, "README promises ten lines");
    let named = std::env::var_os("CHORDWISE_PYTHON");
    let python = named.clone().unwrap_or_else(|| "python3".into());
    let has_numpy = std::process::Command::new(&python)
        .args(["-c", "import numpy"])
        .output()
        .is_ok_and(|output| output.status.success());
    if !has_numpy {
        assert!(named.is_none(), "CHORDWISE_PYTHON has no NumPy");
        eprintln!("skipped: no Python with NumPy here");
        return;
    }
    let folder = tempfile::tempdir().unwrap();
    let ran = std::process::Command::new(&python)
        .current_dir(folder.path())
        .args(["-c", scripts[0]])
        .output()
        .unwrap();
    assert!(
        ran.status.success(),
        "{}",
        String::from_utf8_lossy(&ran.stderr)
    );
    let told = output("chordwise check roof.ron", folder.path());
    assert!(
        told.starts_with("roof: valid; 1 panel, 12 patches, 12 Bezier pieces, 192 control points; box of the nets (0, 0, "),
        "{told}"
    );
}

#[test]
fn the_caution_is_the_one_that_reports_carry() {
    let text = readme().split_whitespace().collect::<Vec<_>>().join(" ");
    assert!(text.contains(chordwise::report::CAUTION));
}
