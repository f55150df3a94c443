//! `--orient` and `--close-gaps` from end to end, and the audit of what they made.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use std::path::Path;
use std::process::Command;

use serde_json::Value;

fn chordwise(folder: &Path, arguments: &[&str]) -> (i32, String, String) {
    let run = Command::new(env!("CARGO_BIN_EXE_chordwise"))
        .current_dir(folder)
        .args(arguments)
        .output()
        .unwrap();
    (
        run.status.code().unwrap(),
        String::from_utf8(run.stdout).unwrap(),
        String::from_utf8(run.stderr).unwrap(),
    )
}

fn json(folder: &Path, arguments: &[&str]) -> (i32, Value) {
    let all = [arguments, &["--format", "json"]].concat();
    let (code, text, told) = chordwise(folder, &all);
    (
        code,
        serde_json::from_str(&text).unwrap_or_else(|_| panic!("{told}")),
    )
}

/// A cube of 10 mm whose faces all face outwards, but for those named.
fn cube(turned: &[&str]) -> String {
    let faces = [
        ("bottom", "(0,0,0)", "(0,10,0)", "(10,0,0)"),
        ("top", "(0,0,10)", "(10,0,0)", "(0,10,0)"),
        ("front", "(0,0,0)", "(10,0,0)", "(0,0,10)"),
        ("back", "(0,10,0)", "(0,0,10)", "(10,0,0)"),
        ("left", "(0,0,0)", "(0,0,10)", "(0,10,0)"),
        ("right", "(10,0,0)", "(0,10,0)", "(0,0,10)"),
    ];
    let face = |(name, origin, u, v): (&str, &str, &str, &str)| {
        let flip = turned.contains(&name);
        format!(
            "(name: \"cube/{name}\", flip: {flip}, surface: Plane(origin: {origin}, u: {u}, v: {v})),\n"
        )
    };
    let faces: String = faces.into_iter().map(face).collect();
    format!("(name: \"cube\", units: mm, patches: [\n{faces}])")
}

/// Two plates 0.04 mm apart, the gap tolerance being 0.01 mm.
const PLATES: &str = r#"(name: "plates", units: mm, patches: [
    (name: "plate, left/1", surface: Plane(origin: (0, 0, 0), u: (100, 0, 0), v: (0, 50, 0))),
    (name: "plate right/1", surface: Plane(origin: (100, 0, 0.04), u: (80, 0, 0), v: (0, 50, 0))),
])"#;

#[test]
fn orient_turns_a_cube_outwards_in_reports_and_meshes() {
    let folder = tempfile::tempdir().unwrap();
    let folder = folder.path();
    let all = ["bottom", "top", "front", "back", "left", "right"];
    let cases: [&[&str]; 4] = [&[], &["top"], &["front", "left"], &all];
    for turned in cases {
        std::fs::write(folder.join("cube.ron"), cube(turned)).unwrap();
        let names: Vec<String> = turned.iter().map(|name| format!("cube/{name}")).collect();
        let sorted = |value: &Value| {
            let list = value.as_array().unwrap().iter();
            let mut list: Vec<String> = list.map(|n| n.as_str().unwrap().to_owned()).collect();
            list.sort();
            list
        };
        let mut expected = names.clone();
        expected.sort();
        let (code, plain) = json(folder, &["seams", "cube.ron"]);
        assert_eq!(code, 0);
        assert_eq!(sorted(&plain["orientation"]["flipped"]), expected);
        let opposed = plain["summary"]["normals_opposed"].as_u64().unwrap();
        assert_eq!(opposed > 0, !turned.is_empty() && turned.len() < 6);
        let (code, settled) = json(folder, &["seams", "cube.ron", "--orient"]);
        assert_eq!(code, 0);
        assert_eq!(settled["summary"]["normals_opposed"], 0);
        assert_eq!(settled["orientation"]["closed"], 1);
        assert!(sorted(&settled["orientation"]["flipped"]).is_empty());
        assert_eq!(sorted(&settled["orientation"]["turned_over"]), expected);

        let mesh = ["tessellate", "cube.ron", "-o", "cube.ply", "--evidence"];
        let (code, made) = json(folder, &[&mesh[..], &["--orient"]].concat());
        assert_eq!(code, 0);
        assert_eq!(made["closed"], true);
        assert!((made["volume"].as_f64().unwrap() - 1000.0).abs() < 1e-9);
        assert_eq!(sorted(&made["turned_over"]), expected);

        // The audit has to be told.
        let (code, audit) = json(folder, &["audit", "cube.ply", "cube.ron", "--orient"]);
        assert_eq!(code, 0, "{audit}");
        let (code, audit) = json(folder, &["audit", "cube.ply", "cube.ron"]);
        assert_eq!(code, i32::from(!turned.is_empty()), "{turned:?} {audit}");
    }
}

#[test]
fn gaps_are_closed_when_asked_for_and_told_of() {
    let folder = tempfile::tempdir().unwrap();
    let folder = folder.path();
    std::fs::write(folder.join("plates.ron"), PLATES).unwrap();
    let mesh = ["tessellate", "plates.ron", "-o", "plates.ply", "--evidence"];
    let (_, open) = json(folder, &mesh);
    assert_eq!(open["open_loops"], 2);
    assert_eq!(open["bridged"].as_array().unwrap().len(), 0);
    let lengths = |value: &Value| -> Vec<f64> {
        let list = value["open_loop_lengths"].as_array().unwrap().iter();
        list.map(|l| l.as_f64().unwrap()).collect()
    };
    let near = |found: &[f64], expected: &[f64]| {
        found.len() == expected.len()
            && found
                .iter()
                .zip(expected)
                .all(|(a, b)| (a - b).abs() < 1e-9)
    };
    // Round a plate of 100 x 50 and one of 80 x 50.
    assert!(near(&lengths(&open), &[300.0, 260.0]), "{open}");

    let closing = [&mesh[..], &["--close-gaps", "0.05mm"]].concat();
    let (code, closed) = json(folder, &closing);
    assert_eq!(code, 0);
    assert_eq!(closed["open_loops"], 1);
    let [bridged] = closed["bridged"].as_array().unwrap().as_slice() else {
        panic!("{closed}")
    };
    assert_eq!(bridged["between"][0], "plate right/1");
    let gap = bridged["gap"].as_f64().unwrap();
    assert!((0.04..0.04 * 1.02).contains(&gap));
    // What was bridged counts: one plate's corners stand 0.04 off the other.
    let proved = closed["deviation"]["proved"].as_f64().unwrap();
    assert!((0.04..=0.1).contains(&proved), "{closed}");
    let (code, text, _) = chordwise(folder, &closing);
    assert_eq!(code, 0);
    assert!(text.contains("bridged     1 gap, as asked for:"), "{text}");

    let (code, audit) = json(
        folder,
        &["audit", "plates.ply", "plates.ron", "--close-gaps", "0.05"],
    );
    assert_eq!(code, 0, "{audit}");
    let (code, audit) = json(folder, &["audit", "plates.ply", "plates.ron"]);
    assert_eq!(code, 1);
    assert_eq!(audit["findings"][0]["fault"], "off_surface", "{audit}");

    let seams = ["seams", "plates.ron"];
    let (code, report) = json(folder, &[&seams[..], &["--close-gaps", "0.05"]].concat());
    assert_eq!(code, 1, "a closed gap stays a fault");
    assert_eq!(report["summary"]["bridged"], 1);
    assert_eq!(report["summary"]["near_misses"], 0);
    assert_eq!(report["bridged"][0]["gap_limit"], 0.01);
    assert_eq!(report["tolerances"]["close_gaps"], 0.05);
    let (code, report) = json(folder, &seams);
    assert_eq!(code, 1);
    assert_eq!(report["summary"]["near_misses"], 1);
    assert_eq!(report["near_misses"][0]["length"], 50.0);
}

#[test]
fn only_lengths_that_can_be_closed_are_taken() {
    let folder = tempfile::tempdir().unwrap();
    let folder = folder.path();
    std::fs::write(folder.join("plates.ron"), PLATES).unwrap();
    for length in ["0", "-1", "nan"] {
        for command in [
            &["seams", "plates.ron"][..],
            &["tessellate", "plates.ron", "-o", "plates.ply"],
            &["audit", "plates.ply", "plates.ron"],
        ] {
            let (code, out, told) =
                chordwise(folder, &[command, &["--close-gaps", length]].concat());
            assert_eq!((code, out.as_str()), (2, ""), "{length} {told}");
        }
    }
    // Across a gap as wide as the chord nothing can be proved.
    let (code, _, told) = chordwise(
        folder,
        &[
            "tessellate",
            "plates.ron",
            "-o",
            "plates.ply",
            "--close-gaps",
            "0.05",
            "--chord",
            "0.03",
        ],
    );
    assert_eq!(code, 2);
    assert!(told.contains("plate right/1"), "{told}");
}

/// A part of a set is open where the rest was, with its own lengths.
#[test]
fn a_panel_alone_has_lengths_of_its_own() {
    let folder = tempfile::tempdir().unwrap();
    let folder = folder.path();
    std::fs::write(folder.join("cube.ron"), cube(&[])).unwrap();
    let text = cube(&[]).replace("cube/top", "lid/top");
    std::fs::write(folder.join("cube.ron"), text).unwrap();
    let mesh = ["tessellate", "cube.ron", "-o", "lid.ply", "--panel", "lid"];
    let (code, made) = json(folder, &mesh);
    assert_eq!(code, 0);
    assert_eq!(made["open_loops"], 1);
    assert_eq!(made["open_loop_lengths"], serde_json::json!([40.0]));
    let words = made["watertight"].as_str().unwrap();
    assert!(words.starts_with("no: 1 open loop, 40.0 mm in all"));
}

#[test]
fn csv_has_a_line_a_seam_and_quotes_names() {
    let folder = tempfile::tempdir().unwrap();
    let folder = folder.path();
    std::fs::write(folder.join("plates.ron"), PLATES).unwrap();
    let (code, csv, _) = chordwise(folder, &["seams", "plates.ron", "--format", "csv"]);
    assert_eq!(code, 1);
    let [head, row, ""] = csv.split("\r\n").collect::<Vec<_>>()[..] else {
        panic!("{csv}")
    };
    let columns: Vec<&str> = head.split(',').collect();
    let row = row.replace("\"plate, left/1\"", "plate left/1");
    let cells: Vec<&str> = row.split(',').collect();
    assert_eq!(columns.len(), cells.len(), "{csv}");
    let cell = |name: &str| cells[columns.iter().position(|c| *c == name).unwrap()];
    assert_eq!(cell("number"), "1");
    assert_eq!(cell("between_patch"), "plate right/1");
    assert_eq!(cell("and_patch"), "plate left/1");
    assert_eq!(cell("verdict"), "fault");
    assert_eq!(cell("finding"), "gap");
    assert_eq!(cell("demand_source"), "inferred");
    assert_eq!(cell("gap_limit"), "0.01");
    assert_eq!(cell("gap_limit_source"), "default");
    assert_eq!(cell("curvature_limit_per_mm"), "");
    let gap: f64 = cell("gap_attained").parse().unwrap();
    assert!((gap - 0.04).abs() < 1e-12);
    assert_eq!(cell("failing_length"), "50");
}
