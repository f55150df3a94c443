//! The program gives the same bytes for 1, 2 and 8 jobs, over and over: every
//! format, every report. Only seconds differ, where they are told.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use std::fs;
use std::path::Path;
use std::process::Command;

/// Runs in a folder; what went to standard output, and to the file `out`.
fn run(folder: &Path, arguments: &[&str]) -> (Vec<u8>, Option<Vec<u8>>) {
    let output = Command::new(assert_cmd::cargo::cargo_bin!("chordwise"))
        .current_dir(folder)
        .args(arguments)
        .env("RAYON_NUM_THREADS", "3")
        .output()
        .unwrap();
    assert_ne!(
        output.status.code(),
        Some(2),
        "{}",
        String::from_utf8_lossy(&output.stderr)
    );
    let text = String::from_utf8(output.stdout).unwrap();
    let timeless: String = text
        .lines()
        .filter(|line| !line.contains("seconds"))
        .collect();
    // JSON tells its seconds on the lines that follow.
    let timeless = match timeless.find("\"reading\":") {
        Some(at) => timeless[..at].to_owned(),
        None => timeless,
    };
    let out = folder.join(
        arguments
            .iter()
            .position(|a| *a == "-o")
            .map_or("", |at| arguments[at + 1]),
    );
    (timeless.into_bytes(), fs::read(out).ok())
}

fn folder() -> tempfile::TempDir {
    let folder = tempfile::tempdir().unwrap();
    for set in ["teapot", "front_quarter", "nearly_closed"] {
        let from = format!("{}/patches/{set}.ron", env!("CARGO_MANIFEST_DIR"));
        fs::copy(from, folder.path().join(format!("{set}.ron"))).unwrap();
    }
    folder
}

#[test]
fn every_format_at_one_two_and_eight_jobs() {
    let folder = folder();
    for (file, more) in [
        ("a.stl", &[][..]),
        ("a.obj", &["--evidence"]),
        ("a.ply", &["--normals", "--evidence"]),
        ("a.glb", &[]),
        ("b.glb", &["--layout", "indexed"]),
        ("c.glb", &["--layout", "triangles"]),
    ] {
        let runs = ["1", "2", "8"].map(|jobs| {
            let arguments = [
                "tessellate",
                "front_quarter.ron",
                "-o",
                file,
                "--chord",
                "0.5",
                "--jobs",
                jobs,
            ];
            run(folder.path(), &[&arguments[..], more].concat())
        });
        assert!(runs[0].1.as_ref().unwrap().len() > 10_000);
        assert!(runs[1] == runs[0] && runs[2] == runs[0], "{file}");
    }
}

/// Twenty runs for each of 1, 2 and 8 jobs: every format, a seam report, a picture,
/// a section and a page.
#[test]
fn twenty_runs_are_one() {
    let folder = folder();
    for line in [
        "tessellate teapot.ron -o a.stl --chord 0.02",
        "tessellate teapot.ron -o b.stl --chord 0.02 --stream",
        "tessellate teapot.ron -o a.obj --chord 0.02",
        "tessellate teapot.ron -o a.ply --chord 0.02 --evidence",
        "tessellate teapot.ron -o a.glb --chord 0.02 --extra seams --extra combs",
        "seams teapot.ron --format json -o a.json",
        "draw teapot.ron -o a.png --chord 0.05 --seams --shading reflection --size 320x200",
        "draw teapot.ron -o a.svg --chord 0.05 --section y=0",
        "report nearly_closed.ron -o a.html",
    ] {
        let mut first = None;
        for jobs in ["1", "2", "8"] {
            for again in 0..20 {
                let arguments: Vec<&str> = line.split(' ').chain(["--jobs", jobs]).collect();
                let got = run(folder.path(), &arguments);
                let first = first.get_or_insert_with(|| got.clone());
                assert!(first.1.as_ref().unwrap().len() > 1000);
                assert!(got == *first, "{line}: run {again} with {jobs} jobs");
            }
        }
    }
}

#[test]
fn every_report() {
    let folder = folder();
    run(
        folder.path(),
        &["tessellate", "teapot.ron", "-o", "pot.ply", "--evidence"],
    );
    for arguments in [
        &["seams", "front_quarter.ron"][..],
        &[
            "seams",
            "front_quarter.ron",
            "--format",
            "json",
            "-o",
            "seams.json",
        ],
        &["check", "front_quarter.ron", "--format", "json"],
        &["audit", "pot.ply", "teapot.ron", "--format", "json"],
        &[
            "tessellate",
            "front_quarter.ron",
            "-o",
            "b.glb",
            "--dry-run",
        ],
        &[
            "tessellate",
            "teapot.ron",
            "-o",
            "a.stl",
            "--format",
            "json",
        ],
        &["demo", "-o", "demo.ron"],
        &["draw", "teapot.ron", "-o", "pot.png", "--size", "160x120"],
    ] {
        let runs = [(); 4].map(|()| run(folder.path(), arguments));
        assert!(runs[0].0.len() + runs[0].1.as_ref().map_or(0, Vec::len) > 100);
        assert!(runs.iter().all(|again| *again == runs[0]), "{arguments:?}");
    }
}
