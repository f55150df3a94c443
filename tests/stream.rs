//! Triangles written as they are proved: the same file, in less memory.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use std::fs;
use std::path::Path;
use std::process::{Command, Output};

fn run(folder: &Path, line: &str) -> Output {
    Command::new(assert_cmd::cargo::cargo_bin!("chordwise"))
        .current_dir(folder)
        .args(line.split(' '))
        .output()
        .unwrap()
}

fn text(bytes: &[u8]) -> String {
    String::from_utf8_lossy(bytes).into_owned()
}

#[test]
fn a_stream_is_the_file_to_the_byte() {
    let folder = tempfile::tempdir().unwrap();
    let patches = Path::new(env!("CARGO_MANIFEST_DIR")).join("patches");
    for set in fs::read_dir(&patches).unwrap().map(|e| e.unwrap().path()) {
        if set.extension().is_none_or(|e| e != "ron") {
            continue;
        }
        fs::copy(&set, folder.path().join("set.ron")).unwrap();
        for file in ["whole.stl", "part.stl --stream"] {
            let line = format!("tessellate set.ron --format json -o {file}");
            let output = run(folder.path(), &line);
            assert!(output.status.success(), "{set:?}: {}", text(&output.stderr));
            let told: serde_json::Value = serde_json::from_slice(&output.stdout).unwrap();
            let size = fs::metadata(folder.path().join(file.split(' ').next().unwrap()));
            assert_eq!(told["written"]["bytes"], size.unwrap().len());
            assert!(told["deviation"]["proved"].as_f64() <= told["chord"].as_f64());
        }
        let bytes = |name: &str| fs::read(folder.path().join(name)).unwrap();
        assert!(bytes("whole.stl") == bytes("part.stl"), "{set:?}");
    }
    assert!(fs::read_dir(folder.path()).unwrap().count() == 3, "litter");
}

/// A field of many batches: the same file, and the peak of memory far below what the
/// whole takes.
#[cfg(target_os = "linux")]
#[test]
fn a_stream_holds_a_part_only() {
    let folder = tempfile::tempdir().unwrap();
    assert!(
        run(folder.path(), "demo --panels 200 -o set.ron")
            .status
            .success()
    );
    // One edge length for all: triangles follow from it.
    let line = "tessellate set.ron -o a.stl --max-edge 1.6 --jobs 2";
    let peak = |line: &str| {
        let mut child = Command::new(assert_cmd::cargo::cargo_bin!("chordwise"))
            .current_dir(folder.path())
            .args(line.split(' '))
            .stdout(std::process::Stdio::null())
            .spawn()
            .unwrap();
        let status = format!("/proc/{}/status", child.id());
        let mut most = 0_u64;
        loop {
            if let Ok(text) = fs::read_to_string(&status)
                && let Some(line) = text.lines().find_map(|l| l.strip_prefix("VmHWM:"))
            {
                most = most.max(line.trim().trim_end_matches(" kB").parse().unwrap());
            }
            if let Some(ended) = child.try_wait().unwrap() {
                assert!(ended.success(), "{line}");
                return most * 1024;
            }
            std::thread::sleep(std::time::Duration::from_millis(5));
        }
    };
    let whole = peak(line);
    let before = fs::read(folder.path().join("a.stl")).unwrap();
    let part = peak(&format!("{line} --stream"));
    assert!(before == fs::read(folder.path().join("a.stl")).unwrap());
    let triangles = (before.len() as u64 - 84) / 50;
    assert!(triangles > 1_000_000, "{triangles}");
    assert!(2 * part < whole, "{part} {whole}");
}

#[test]
fn what_cannot_be_streamed_is_refused() {
    let folder = tempfile::tempdir().unwrap();
    let set = Path::new(env!("CARGO_MANIFEST_DIR")).join("patches/box.ron");
    fs::copy(set, folder.path().join("set.ron")).unwrap();
    for (line, words) in [
        (
            "tessellate set.ron -o a.ply --stream",
            "needs the whole mesh before its first byte",
        ),
        (
            "tessellate set.ron --as stl -o - --stream",
            "name a plain file",
        ),
        (
            "tessellate set.ron -o a.stl --stream --dry-run",
            "cannot be used with",
        ),
        (
            "tessellate set.ron -o a.stl --stream --max-triangles 5",
            "more than 1.2e1 triangles are needed",
        ),
    ] {
        let output = run(folder.path(), line);
        let said = text(&output.stderr);
        assert_eq!(output.status.code(), Some(2), "{line}: {said}");
        assert!(said.contains(words), "{line}: {said}");
    }
    assert_eq!(fs::read_dir(folder.path()).unwrap().count(), 1, "litter");
}
