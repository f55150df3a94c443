//! `tessellate --family`: files, limits, and what is told of them.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use std::fs;
use std::path::Path;

use approx::assert_relative_eq;
use assert_cmd::Command;
use serde_json::Value;

fn run(folder: &Path, arguments: &[&str]) -> (i32, String, String) {
    let set = format!("{}/patches/sphere.ron", env!("CARGO_MANIFEST_DIR"));
    let output = Command::cargo_bin("chordwise")
        .unwrap()
        .current_dir(folder)
        .args(["tessellate", &set])
        .args(arguments)
        .output()
        .unwrap();
    (
        output.status.code().unwrap(),
        String::from_utf8(output.stdout).unwrap(),
        String::from_utf8(output.stderr).unwrap(),
    )
}

fn names(folder: &Path) -> Vec<String> {
    let mut names: Vec<String> = fs::read_dir(folder)
        .unwrap()
        .map(|entry| entry.unwrap().file_name().into_string().unwrap())
        .collect();
    names.sort();
    names
}

#[test]
fn every_level_is_as_it_would_be_alone() {
    let folder = tempfile::tempdir().unwrap();
    let folder = folder.path();
    let options = [
        "-o",
        "ball.ply",
        "--chord",
        "1",
        "--max-edge",
        "90",
        "--family",
        "3",
    ];
    let (code, out, err) = run(folder, &[&options[..], &["--format", "json"]].concat());
    assert_eq!(code, 0, "{err}");
    assert_eq!(names(folder), ["ball_1.ply", "ball_2.ply", "ball_3.ply"]);
    let told: Value = serde_json::from_str(&out).unwrap();
    assert_eq!(
        (&told["factor"], &told["schema_version"]),
        (&1.5.into(), &1.into())
    );
    let levels = told["levels"].as_array().unwrap();
    assert_eq!(levels.len(), 3);
    for (level, k) in levels.iter().zip(1..) {
        let summary = &level["summary"];
        assert_eq!(level["level"], k);
        assert_eq!(level["file"], format!("ball_{k}.ply"));
        let chord = 1.5_f64.powi(-2 * (k - 1));
        assert_relative_eq!(
            summary["chord"].as_f64().unwrap(),
            chord,
            max_relative = 1e-14
        );
        let edge = 90.0 * 1.5_f64.powi(1 - k);
        assert_relative_eq!(
            summary["max_edge"].as_f64().unwrap(),
            edge,
            max_relative = 1e-14
        );
        assert!(summary["deviation"]["proved"].as_f64().unwrap() <= chord);
        let file = fs::read(folder.join(format!("ball_{k}.ply"))).unwrap();
        assert_eq!(summary["written"]["bytes"], file.len());
        let alone = [
            "-o",
            "alone.ply",
            "--chord",
            &format!("{:?}", summary["chord"].as_f64().unwrap()),
        ]
        .map(str::to_owned);
        let edge = format!("{:?}", summary["max_edge"].as_f64().unwrap());
        let mut arguments: Vec<&str> = alone.iter().map(String::as_str).collect();
        arguments.extend(["--max-edge", &edge]);
        assert_eq!(run(folder, &arguments).0, 0);
        assert!(
            file == fs::read(folder.join("alone.ply")).unwrap(),
            "level {k}"
        );
    }
    // Finer by the factor, as far as the number of triangles lets it.
    let edges: Vec<f64> = levels
        .iter()
        .map(|l| l["mean_edge"].as_f64().unwrap())
        .collect();
    for pair in edges.windows(2) {
        assert!((1.35..1.65).contains(&(pair[0] / pair[1])), "{edges:?}");
    }
    let (_, text, _) = run(folder, &options);
    assert!(
        text.contains("3 meshes, each 1.5 times finer in length"),
        "{text}"
    );
    for k in 1..=3 {
        assert!(text.contains(&format!("level {k}, ball_{k}.ply")), "{text}");
    }
    assert_eq!(text.matches(chordwise::report::CAUTION).count(), 1);
}

/// The third level takes more than it may: none of the files is there, old ones are
/// as they were, and nothing is left behind.
#[test]
fn nothing_is_half_written() {
    let folder = tempfile::tempdir().unwrap();
    let folder = folder.path();
    fs::write(folder.join("ball_2.stl"), "old").unwrap();
    let few = ["--chord", "1", "--max-triangles", "6000", "--family", "3"];
    let (code, out, err) = run(folder, &[&["-o", "ball.stl"], &few[..]].concat());
    assert_eq!((code, out.as_str()), (2, ""), "{err}");
    assert!(err.contains("at most 6.0e3 are to be made"), "{err}");
    assert_eq!(names(folder), ["ball_2.stl"]);
    assert_eq!(
        fs::read_to_string(folder.join("ball_2.stl")).unwrap(),
        "old"
    );
    // A level's file that cannot be made is found before the work.
    fs::create_dir(folder.join("ball_3.stl")).unwrap();
    let (code, _, err) = run(folder, &["-o", "ball.stl", "--family", "3"]);
    assert_eq!(code, 2);
    assert!(
        err.contains("ball_3.stl: is a folder; name a file in it"),
        "{err}"
    );
    let (code, _, err) = run(folder, &["-o", "-", "--as", "stl", "--family", "3"]);
    assert_eq!(code, 2);
    assert!(err.contains("--family: a file a level is written"), "{err}");
    let (code, _, err) = run(folder, &["-o", "ball.stl", "--family", "0"]);
    assert_eq!(code, 2);
    assert!(err.contains("0 is not in 1..=20"), "{err}");
}

/// A family by size: edges 1.5 times shorter from level to level, those of a panel
/// with a size of its own too, and sizes that grow as much less an edge.
#[test]
fn families_by_size_are_finer_everywhere() {
    let folder = tempfile::tempdir().unwrap();
    let text = r#"(name: "two", sizes: [(of: "fine", size: 6)], patches: [
        (name: "fine/1", surface: Plane(origin: (0, 0, 0), u: (90, 0, 0), v: (0, 90, 0))),
        (name: "wide/1", surface: Plane(origin: (90, 0, 0), u: (90, 0, 0), v: (0, 90, 0))),
    ])"#;
    fs::write(folder.path().join("two.ron"), text).unwrap();
    let output = Command::cargo_bin("chordwise")
        .unwrap()
        .current_dir(folder.path())
        .args(["tessellate", "two.ron", "-o", "two.vtu", "--size", "12"])
        .args(["--family", "3", "--format", "json"])
        .output()
        .unwrap();
    let said = String::from_utf8_lossy(&output.stderr);
    assert!(output.status.success(), "{said}");
    let told: Value = serde_json::from_slice(&output.stdout).unwrap();
    let levels = told["levels"].as_array().unwrap();
    for (level, k) in levels.iter().zip(0..) {
        let finer = 1.5_f64.powi(k);
        let summary = &level["summary"];
        let sized = &summary["sized"];
        assert_relative_eq!(
            sized["size"].as_f64().unwrap(),
            12.0 / finer,
            max_relative = 1e-14
        );
        let growth = 1.0 + 0.2 / finer;
        assert_relative_eq!(
            sized["growth"].as_f64().unwrap(),
            growth,
            max_relative = 1e-14
        );
        let quality = &summary["quality"];
        assert_eq!(
            (&quality["whole"], &quality["asked_growth"]),
            (&true.into(), &sized["growth"])
        );
        let measures = quality["measures"].as_array().unwrap();
        let of = |name: &str| measures.iter().find(|m| m["measure"] == name).unwrap();
        let grading = of("grading");
        assert!(
            grading["maximum"].as_f64().unwrap() <= growth + 1e-9,
            "{grading}"
        );
        // The smaller half of all edges is of the panel with its own size.
        let shortest = of("edge_length")["one_percent"].as_f64().unwrap();
        assert!(
            (0.6..1.05).contains(&(shortest * finer / 6.0)),
            "{shortest} at {k}"
        );
        let longest = of("edge_length")["maximum"].as_f64().unwrap();
        assert!(
            (0.95..1.6).contains(&(longest * finer / 12.0)),
            "{longest} at {k}"
        );
    }
    let edges = levels.iter().map(|l| l["mean_edge"].as_f64().unwrap());
    let edges: Vec<f64> = edges.collect();
    for pair in edges.windows(2) {
        assert!((1.4..1.6).contains(&(pair[0] / pair[1])), "{edges:?}");
    }
}
