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

/// What is stopped while it writes leaves the old file and, unless it is killed
/// outright, nothing else; an interrupt exits with 130.
#[cfg(target_os = "linux")]
#[test]
fn a_stopped_run_leaves_the_old_file() {
    use std::process::Command;
    use std::time::Duration;
    for (signal, code) in [("INT", Some(130)), ("TERM", Some(130)), ("KILL", None)] {
        let folder = tempfile::tempdir().unwrap();
        let target = folder.path().join("large.ron");
        std::fs::write(&target, "old").unwrap();
        let half_written = || {
            let entries = std::fs::read_dir(folder.path()).unwrap();
            let mut paths = entries.map(|entry| entry.unwrap().path());
            paths.find(|path| path.extension().is_some_and(|e| e == "part"))
        };
        // Whoever runs the tests may ignore signals, and we would inherit that.
        let mut run = Command::new("env")
            .arg("--default-signal=INT,TERM,HUP")
            .arg(assert_cmd::cargo::cargo_bin!("chordwise"))
            .args(["demo", "--panels", "100000000", "-o"])
            .arg(&target)
            .spawn()
            .unwrap();
        while half_written().is_none_or(|path| path.metadata().is_ok_and(|file| file.len() == 0)) {
            assert!(run.try_wait().unwrap().is_none());
            std::thread::sleep(Duration::from_millis(1));
        }
        let kill = Command::new("kill")
            .args(["-s", signal, &run.id().to_string()])
            .status()
            .unwrap();
        assert!(kill.success());
        assert_eq!(run.wait().unwrap().code(), code, "{signal}");
        assert_eq!(half_written().is_none(), code.is_some(), "{signal}");
        assert_eq!(std::fs::read_to_string(&target).unwrap(), "old");
    }
}

/// A full device is an error with a message.
#[cfg(target_os = "linux")]
#[test]
fn a_full_device_is_reported() {
    let run = chordwise()
        .args(["completions", "bash", "-o", "/dev/full"])
        .assert()
        .code(2);
    let text = String::from_utf8(run.get_output().stderr.clone()).unwrap();
    assert!(text.starts_with("error: /dev/full: cannot write it; "));
    let full = std::fs::OpenOptions::new()
        .write(true)
        .open("/dev/full")
        .unwrap();
    let run = std::process::Command::new(assert_cmd::cargo::cargo_bin!("chordwise"))
        .args(["completions", "bash"])
        .stdout(full)
        .output()
        .unwrap();
    assert_eq!(run.status.code(), Some(2));
    assert!(
        String::from_utf8(run.stderr)
            .unwrap()
            .contains("standard output: cannot write it; ")
    );
}
