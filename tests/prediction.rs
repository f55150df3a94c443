//! What a dry run says, against the run; and that limits hold before the work.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]
#![allow(
    clippy::cast_precision_loss,
    clippy::cast_possible_truncation,
    reason = "counts far below 2^52"
)]

use std::fs;
use std::path::Path;
use std::process::{Command, Output};
use std::time::{Duration, Instant};

use chordwise::demo::write_panels;
use chordwise::format::{Counts, Format, Layout, WriteOptions, bytes_of, write};
use chordwise::scalar::Tolerance;
use serde_json::Value;

mod refute;
use refute::{meshed, shipped};

fn chordwise(arguments: &[&str]) -> Output {
    Command::new(assert_cmd::cargo::cargo_bin!("chordwise"))
        .current_dir(env!("CARGO_MANIFEST_DIR"))
        .args(arguments)
        .output()
        .unwrap()
}

fn told(output: &Output) -> Value {
    serde_json::from_slice(&output.stdout)
        .unwrap_or_else(|_| panic!("{}", String::from_utf8_lossy(&output.stderr)))
}

/// Runs dry and then for good, and compares triangles and bytes.
fn compare(set: &str, format: &str, options: &[&str]) {
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join(format!("mesh.{format}"));
    let file = file.to_str().unwrap();
    let arguments = [
        &["tessellate", set, "-o", file, "--format", "json"],
        options,
    ]
    .concat();
    let dry = chordwise(&[&arguments[..], &["--dry-run"]].concat());
    assert_eq!(dry.status.code(), Some(0));
    assert!(!Path::new(file).exists(), "a dry run writes nothing");
    assert_eq!(fs::read_dir(folder.path()).unwrap().count(), 0);
    let (dry, run) = (told(&dry), told(&chordwise(&arguments)));
    let written = fs::metadata(file).unwrap().len();
    assert_eq!(run["written"]["bytes"], written);
    let exact = dry["exact"].as_bool().unwrap();
    for (what, predicted, came) in [
        ("triangles", &dry["triangles"], &run["triangles"]),
        ("vertices", &dry["vertices"], &run["vertices"]),
        ("bytes", &dry["written"]["bytes"], &run["written"]["bytes"]),
    ] {
        let (predicted, came) = (predicted.as_f64().unwrap(), came.as_f64().unwrap());
        let off = (predicted / came - 1.0).abs();
        println!("{set} {format} {options:?}: {what} {predicted} for {came}");
        assert!(
            off <= if exact { 1e-12 } else { 0.2 },
            "{set} {format} {options:?}: {what} {predicted} predicted, {came} made"
        );
    }
    assert!(dry["seconds"].as_f64().unwrap() > 0.0);
}

#[test]
fn a_dry_run_is_within_a_fifth() {
    compare("patches/front_quarter.ron", "glb", &[]);
    compare("patches/front_quarter.ron", "obj", &[]);
    compare(
        "patches/front_quarter.ron",
        "ply",
        &["--chord", "0.04", "--normals"],
    );
    compare(
        "patches/front_quarter.ron",
        "glb",
        &["--layout", "indexed", "--max-edge", "15"],
    );
    compare(
        "patches/front_quarter.ron",
        "ply",
        &["--panel", "wing", "--panel", "bonnet"],
    );
    compare("patches/teapot.ron", "stl", &["--chord", "0.0005"]);
    compare(
        "patches/teapot.ron",
        "obj",
        &["--normal-angle", "8", "--evidence"],
    );
    compare("patches/sphere.ron", "stl", &["--chord", "0.01"]);
    compare("patches/torus.ron", "glb", &["--chord", "0.01"]);
    compare("patches/box.ron", "ply", &["--max-edge", "1"]);
    compare("patches/cone.ron", "glb", &[]);
}

#[test]
fn many_patches_are_predicted_from_few() {
    let folder = tempfile::tempdir().unwrap();
    let set = folder.path().join("panels.ron");
    write_panels(3000, &mut fs::File::create(&set).unwrap()).unwrap();
    let set = set.to_str().unwrap();
    compare(set, "glb", &[]);
    compare(set, "ply", &["--evidence", "--layout", "triangles"]);
}

/// STL and PLY to the byte from counts alone.
#[test]
fn bytes_follow_from_the_counts() {
    for (name, set) in shipped() {
        let chord = set.tolerances().chord.get() * 2.0;
        let mut mesh = meshed(&set, chord).mesh;
        for (normals, layout) in [
            (false, Layout::Indexed),
            (true, Layout::Indexed),
            (false, Layout::Triangles),
            (true, Layout::Triangles),
        ] {
            for format in [Format::Stl, Format::Ply] {
                let options = WriteOptions {
                    layout: (format == Format::Ply).then_some(layout),
                    normals,
                    ..WriteOptions::new(Tolerance::new(chord).unwrap())
                };
                let counts = Counts {
                    outline: &mesh,
                    points: mesh.points.len() as u64,
                    vertices: mesh.vertices.len() as u64,
                };
                let said = bytes_of(&counts, format, &options);
                let mut bytes = Vec::new();
                write(&mesh, format, &options, &mut bytes).unwrap();
                assert_eq!(said, Some(bytes.len() as u64), "{name} {format}");
            }
        }
        mesh.evidence = Some(vec![[[0.5; 2]; 3]; mesh.triangles.len()]);
        let options = WriteOptions::new(Tolerance::new(chord).unwrap());
        let counts = Counts {
            outline: &mesh,
            points: mesh.points.len() as u64,
            vertices: mesh.vertices.len() as u64,
        };
        let said = bytes_of(&counts, Format::Ply, &options);
        let mut bytes = Vec::new();
        write(&mesh, Format::Ply, &options, &mut bytes).unwrap();
        assert_eq!(said, Some(bytes.len() as u64), "{name} with evidence");
    }
}

/// Billions of triangles are refused in no time, with a prediction and what to
/// change; so is what would not fit the memory allowed.
#[test]
fn what_would_run_away_is_refused_before_it_begins() {
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join("mesh.stl");
    let file = file.to_str().unwrap();
    for (options, said) in [
        (&["--chord", "1e-8"][..], "--max-triangles"),
        (
            &["--chord", "0.1", "--max-triangles", "10k"],
            "at most 1.0e4 are to be made",
        ),
        (
            &["--chord", "0.001", "--max-memory", "100MB"],
            "--max-memory",
        ),
        (
            &["--max-edge", "0.01"],
            "a larger chord, normal angle or edge, fewer panels",
        ),
    ] {
        let start = Instant::now();
        let run = chordwise(
            &[
                &["tessellate", "patches/front_quarter.ron", "-o", file],
                options,
            ]
            .concat(),
        );
        let err = String::from_utf8(run.stderr).unwrap();
        assert_eq!(run.status.code(), Some(2), "{options:?}");
        assert!(err.contains("error: mesh: ") && err.contains(said), "{err}");
        assert!(start.elapsed() < Duration::from_secs(20), "{options:?}");
        assert!(!Path::new(file).exists());
    }
    // A dry run says so too, after the prediction.
    let dry = chordwise(&[
        "tessellate",
        "patches/front_quarter.ron",
        "-o",
        file,
        "--dry-run",
        "--format",
        "json",
        "--max-triangles",
        "1k",
    ]);
    assert_eq!(dry.status.code(), Some(2));
    assert!(
        told(&dry)["refused"]
            .as_str()
            .unwrap()
            .contains("--max-triangles")
    );
    assert!(
        String::from_utf8(dry.stderr)
            .unwrap()
            .contains("at most 1.0e3")
    );
}

/// What is predicted covers what a run takes at its peak.
#[cfg(target_os = "linux")]
#[test]
fn memory_stays_below_what_is_predicted() {
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join("mesh.ply");
    let arguments = [
        "tessellate",
        "patches/front_quarter.ron",
        "--chord",
        "0.004",
        "--format",
        "json",
        "--evidence",
        "-o",
        file.to_str().unwrap(),
    ];
    let dry = told(&chordwise(&[&arguments[..], &["--dry-run"]].concat()));
    let mut run = Command::new(assert_cmd::cargo::cargo_bin!("chordwise"))
        .current_dir(env!("CARGO_MANIFEST_DIR"))
        .args(arguments)
        .stdout(std::process::Stdio::null())
        .spawn()
        .unwrap();
    let status = format!("/proc/{}/status", run.id());
    let mut peak = 0_u64;
    while run.try_wait().unwrap().is_none() {
        let text = fs::read_to_string(&status).unwrap_or_default();
        let line = text.lines().find_map(|line| line.strip_prefix("VmHWM:"));
        let own = line.and_then(|line| line.trim().strip_suffix(" kB")?.trim().parse().ok());
        peak = peak.max(1024 * own.unwrap_or(0_u64));
        std::thread::sleep(Duration::from_millis(2));
    }
    let predicted = dry["memory"].as_u64().unwrap();
    println!("{predicted} bytes predicted, {peak} taken");
    assert!(peak > 10_000_000, "{peak}");
    assert!(peak <= predicted, "{peak} taken, {predicted} predicted");
    assert!(3 * peak > predicted, "{peak} taken, {predicted} predicted");
}
