//! The line of progress, on a terminal and nowhere else.
#![cfg(target_os = "linux")]
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use std::path::Path;
use std::process::Command;

/// What a command writes to a terminal, lines of progress too. `script` (util-linux)
/// gives it one; `None` where that is missing.
fn on_a_terminal(folder: &Path, line: &str) -> Option<String> {
    let program = assert_cmd::cargo::cargo_bin!("chordwise");
    let output = Command::new("script")
        .current_dir(folder)
        .args([
            "-qec",
            &format!("{} {line}", program.display()),
            "/dev/null",
        ])
        .output()
        .ok()?;
    Some(String::from_utf8_lossy(&output.stdout).into_owned())
}

#[test]
fn stages_longer_than_a_second_show_rate_and_time_left() {
    let folder = tempfile::tempdir().unwrap();
    let program = assert_cmd::cargo::cargo_bin!("chordwise");
    let run = |line: &str| {
        let output = Command::new(program)
            .current_dir(folder.path())
            .args(line.split(' '))
            .output()
            .unwrap();
        assert!(output.status.code() != Some(2));
        String::from_utf8(output.stderr).unwrap()
    };
    run("demo --panels 12000 -o set.ron");
    let line = "tessellate set.ron -o a.obj --chord 0.02";
    let Some(shown) = on_a_terminal(folder.path(), line) else {
        return;
    };
    // Some stage was at it when the line appeared, and told how fast and how long.
    assert!(shown.contains("triangles a second)"), "{shown:?}");
    assert!(shown.contains(" s left ("), "{shown:?}");
    // The report follows on a clean line.
    assert!(shown.contains("deviation   "));
    // No line where nobody looks.
    assert_eq!(run(line), "");
}
