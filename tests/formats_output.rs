//! The program's files: completions and manual pages, and how they get to
//! where they should.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use assert_cmd::Command;

fn chordwise() -> Command {
    Command::cargo_bin("chordwise").unwrap()
}

#[test]
fn completions_name_the_commands() {
    for shell in ["bash", "zsh", "fish", "elvish", "powershell"] {
        let run = chordwise().args(["completions", shell]).assert().code(0);
        let script = String::from_utf8(run.get_output().stdout.clone()).unwrap();
        assert!(script.contains("completions"), "{shell}");
        assert!(run.get_output().stderr.is_empty());
    }
    chordwise().args(["completions", "ed"]).assert().code(2);
}

#[test]
fn manual_pages_are_roff() {
    let folder = tempfile::tempdir().unwrap();
    let page = folder.path().join("chordwise.1");
    let run = chordwise().arg("man").arg("-o").arg(&page).assert().code(0);
    assert!(run.get_output().stdout.is_empty());
    let text = std::fs::read_to_string(&page).unwrap();
    assert!(text.contains(".TH chordwise 1"));
    assert!(text.contains("completions"));
    let run = chordwise().args(["man", "completions"]).assert().code(0);
    let text = String::from_utf8(run.get_output().stdout.clone()).unwrap();
    assert!(
        text.contains(".SH EXAMPLES\n.nf\nchordwise completions bash"),
        "{text}"
    );
    let run = chordwise().args(["man", "nothing"]).assert().code(2);
    let text = String::from_utf8(run.get_output().stderr.clone()).unwrap();
    assert!(text.starts_with("error: `nothing` is no command; the commands are "));
}

#[test]
fn a_folder_is_refused() {
    let folder = tempfile::tempdir().unwrap();
    let run = chordwise()
        .arg("man")
        .arg("-o")
        .arg(folder.path())
        .assert()
        .code(2);
    let text = String::from_utf8(run.get_output().stderr.clone()).unwrap();
    assert!(text.starts_with("error: ") && text.contains(": is a folder; name a file in it"));
}

#[cfg(unix)]
#[test]
fn a_reader_that_leaves_is_no_fault() {
    use std::os::fd::OwnedFd;
    use std::process::Stdio;
    let (reader, writer) = std::io::pipe().unwrap();
    drop(reader);
    let status = std::process::Command::new(assert_cmd::cargo::cargo_bin!("chordwise"))
        .args(["completions", "bash"])
        .stdout(Stdio::from(OwnedFd::from(writer)))
        .stderr(Stdio::piped())
        .output()
        .unwrap();
    assert_eq!(status.status.code(), Some(0));
    assert!(status.stderr.is_empty());
}
