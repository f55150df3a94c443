//! `chordwise compare` from end to end.
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

/// Compares two texts; the report, and the exit code.
fn compared(old: &str, new: &str, more: &[&str]) -> (i32, Value) {
    let folder = tempfile::tempdir().unwrap();
    std::fs::write(folder.path().join("old.ron"), old).unwrap();
    std::fs::write(folder.path().join("new.ron"), new).unwrap();
    let all = [&["compare", "old.ron", "new.ron", "--format", "json"], more].concat();
    let (code, text, told) = chordwise(folder.path(), &all);
    let report = serde_json::from_str(&text).unwrap_or_else(|_| panic!("{told}"));
    (code, report)
}

fn shipped(name: &str) -> String {
    let path = format!("{}/patches/{name}.ron", env!("CARGO_MANIFEST_DIR"));
    std::fs::read_to_string(path).unwrap()
}

fn list<'a>(value: &'a Value, name: &str) -> &'a [Value] {
    value[name].as_array().unwrap()
}

#[test]
fn a_set_is_the_same_as_itself() {
    for name in ["front_quarter", "teapot", "torus", "coons", "units_inch"] {
        let text = shipped(name);
        let (code, report) = compared(&text, &text, &[]);
        assert_eq!(code, 0, "{name} {report}");
        assert_eq!(report["changed"], false);
        assert!(list(&report, "patches").is_empty() && list(&report, "seams").is_empty());
        assert_eq!(report["schema_version"], 1);
        assert_eq!(report["caution"], chordwise::report::CAUTION);
    }
}

/// The gap that is in the front quarter on purpose, opened by another 0.05 mm
/// in its height: one point of `sill/3`'s net lifted.
#[test]
fn a_moved_point_is_told_with_its_patch_and_its_seams() {
    let old = shipped("front_quarter");
    let at = old.find("(name: \"sill/3\"").unwrap();
    let net = at + old[at..].find("net: [").unwrap();
    let net = net + old[net..].find('(').unwrap();
    let end = net + old[net..].find(')').unwrap() + 1;
    let point = &old[net..end];
    let numbers: Vec<f64> = point
        .trim_matches(['(', ')'])
        .split(',')
        .map(|x| x.trim().parse().unwrap())
        .collect();
    let lifted = format!("({}, {}, {})", numbers[0], numbers[1], numbers[2] + 0.05);
    let new = format!("{}{lifted}{}", &old[..net], &old[end..]);
    let (code, report) = compared(&old, &new, &[]);
    assert_eq!(code, 1);
    let [patch] = list(&report, "patches") else {
        panic!("{report}")
    };
    assert_eq!(patch["name"], "sill/3");
    assert_eq!(patch["state"], "moved");
    // A corner of the patch: it moves by as much as its control point.
    let far = |name: &str| patch[name].as_f64().unwrap();
    assert!(
        far("attained") > 0.049 && far("attained") <= 0.05 + 1e-9,
        "{patch}"
    );
    assert!(far("proved") <= far("attained") * 1.02, "{patch}");
    assert_eq!(report["summary"]["same"], 118);
    let [seam] = list(&report, "seams") else {
        panic!("{report}")
    };
    assert_eq!(seam["between"][0], "sill/2");
    assert_eq!(seam["and"][0], "sill/3");
    let severity = |which: &str| seam[which]["severity"].as_f64().unwrap();
    assert!(severity("old") > 5.9 && severity("new") > 7.5);
    assert_eq!(seam["trend"], "worse");
    // Backwards it is an improvement.
    let (_, back) = compared(&new, &old, &[]);
    assert_eq!(list(&back, "seams")[0]["trend"], "better");
    // The old net against itself in another file of the same patches.
    let (code, _) = compared(&old, &new, &["--tolerance", "0.2mm"]);
    assert_eq!(
        code, 0,
        "the verdict of the seam is a fault before and after"
    );
}

/// Knots put in by the rule of Boehm (1980): one spline, written with more.
fn with_knot(
    degree: usize,
    knots: &[f64],
    points: &[[f64; 3]],
    t: f64,
) -> (Vec<f64>, Vec<[f64; 3]>) {
    let span = knots.iter().rposition(|k| *k <= t).unwrap();
    let mut more = knots.to_vec();
    more.insert(span + 1, t);
    let mut found = Vec::new();
    for i in 0..=points.len() {
        let a = if i + degree <= span {
            1.0
        } else if i > span {
            0.0
        } else {
            (t - knots[i]) / (knots[i + degree] - knots[i])
        };
        let here = points[i.min(points.len() - 1)];
        let before = points[i.saturating_sub(1)];
        found.push(std::array::from_fn(|k| a * here[k] + (1.0 - a) * before[k]));
    }
    (more, found)
}

#[test]
fn inserted_knots_and_other_kinds_make_no_other_surface() {
    let rows: Vec<Vec<[f64; 3]>> = (0..5)
        .map(|i| {
            (0..4)
                .map(|j| {
                    let (x, y) = (f64::from(i) * 25.0, f64::from(j) * 20.0);
                    [x, y, 6.0 * (0.05 * x).sin() * (0.04 * y).cos()]
                })
                .collect()
        })
        .collect();
    let spline = |rows: &[Vec<[f64; 3]>], u: &[f64]| {
        let row = |row: &Vec<[f64; 3]>| {
            let points = row
                .iter()
                .map(|p| format!("({:?}, {:?}, {:?})", p[0], p[1], p[2]));
            format!("[{}]", points.collect::<Vec<_>>().join(", "))
        };
        let net = rows.iter().map(row).collect::<Vec<_>>().join(", ");
        let (u, v) = (format!("{u:?}"), "[0.0, 0.0, 0.0, 0.0, 1.0, 1.0, 1.0, 1.0]");
        format!(
            "(name: \"roof\", surface: BSpline(degree: (3, 3), knots: ({u}, {v}), net: [{net}]))"
        )
    };
    let knots = [0.0, 0.0, 0.0, 0.0, 2.0, 5.0, 5.0, 5.0, 5.0];
    // Knots along u: every column is a spline of its own.
    let mut denser = knots.to_vec();
    let mut columns: Vec<Vec<[f64; 3]>> = (0..4)
        .map(|j| rows.iter().map(|r| r[j]).collect())
        .collect();
    for t in [1.25, 3.5, 3.5] {
        let grown: Vec<_> = columns
            .iter()
            .map(|c| with_knot(3, &denser, c, t))
            .collect();
        denser = grown[0].0.clone();
        columns = grown.into_iter().map(|g| g.1).collect();
    }
    let more: Vec<Vec<[f64; 3]>> = (0..columns[0].len())
        .map(|i| columns.iter().map(|c| c[i]).collect())
        .collect();
    let set = |patches: &str| format!("(name: \"x\", units: mm, patches: [{patches}])");
    let plane =
        r#"(name: "floor", surface: Plane(origin: (0, 0, -20), u: (100, 0, 0), v: (0, 60, 0)))"#;
    let net = r#"(name: "floor", flip: true, surface: Bezier(net: [
        [(0, 0, -20), (50, 0, -20), (100, 0, -20)], [(0, 60, -20), (50, 60, -20), (100, 60, -20)]]))"#;
    let tube = r#"(name: "tube", surface: Cylinder(center: (0, 0, 100), radius: 12, height: 50))"#;
    let old = set(&[&spline(&rows, &knots), plane, tube].join(", "));
    let new = set(&[&spline(&more, &denser), net, tube].join(", "));
    let (code, report) = compared(&old, &new, &[]);
    assert_eq!(code, 0, "{report}");
    assert_eq!(report["summary"]["same"], 3);
    let [floor, roof] = list(&report, "patches") else {
        panic!("{report}")
    };
    assert_eq!(floor["old"]["kind"], "Plane");
    assert_eq!(floor["new"]["kind"], "Bezier");
    assert_eq!(floor["exchanged"], true);
    // Exchanged and flipped: it faces where it faced.
    assert_eq!(floor["turned_over"], false);
    assert_eq!(roof["old"]["pieces"], serde_json::json!([2, 1]));
    assert_eq!(roof["new"]["pieces"], serde_json::json!([4, 1]));
    assert!(roof["proved"].as_f64().unwrap() < 1e-9);
}

#[test]
fn text_exit_codes_and_refusals() {
    let folder = tempfile::tempdir().unwrap();
    let folder = folder.path();
    let plate = |z: f64, name: &str, units: &str| {
        format!(
            "(units: {units}, patches: [(name: \"{name}\", surface: Plane(origin: (0, 0, {z}), u: (100, 0, 0), v: (0, 50, 0)))])"
        )
    };
    std::fs::write(folder.join("a.ron"), plate(0.0, "plate/1", "mm")).unwrap();
    std::fs::write(folder.join("b.ron"), plate(0.25, "plate/1", "mm")).unwrap();
    std::fs::write(folder.join("c.ron"), plate(0.0, "plate/2", "mm")).unwrap();
    std::fs::write(folder.join("d.ron"), plate(0.0, "plate/1", "inch")).unwrap();
    std::fs::write(folder.join("e.ron"), "(patches: [").unwrap();

    let (code, text, _) = chordwise(folder, &["compare", "a.ron", "a.ron"]);
    assert_eq!(code, 0);
    assert!(text.starts_with("patches: 1 same, 0 moved"), "{text}");
    assert!(text.trim_end().ends_with("local codes that apply."));

    let (code, text, _) = chordwise(folder, &["compare", "a.ron", "b.ron"]);
    assert_eq!(code, 1);
    assert!(
        text.contains("  plate/1: 0.2500 (0.2501) mm at ("),
        "{text}"
    );
    let (code, ..) = chordwise(folder, &["compare", "a.ron", "b.ron", "--tolerance", "0.3"]);
    assert_eq!(code, 0);

    let (code, text, _) = chordwise(folder, &["compare", "a.ron", "c.ron"]);
    assert_eq!(code, 1);
    assert!(text.contains("\nadded: plate/2\n") && text.contains("\nremoved: plate/1\n"));

    for (arguments, wording) in [
        (
            &["a.ron", "d.ron"][..],
            "error: the old set is in mm, the new one in in; both must have one unit",
        ),
        (
            &["-", "-"],
            "error: both sets are standard input; one of them must be a file",
        ),
        (&["a.ron", "e.ron"], "e.ron: 1 fault; the set is not used"),
        (&["a.ron", "none.ron"], "the file cannot be read"),
        (&["a.ron", "b.ron", "--tolerance", "-1"], "-1"),
        (&["a.ron"], "required"),
    ] {
        let all = [&["compare"], arguments].concat();
        let (code, out, told) = chordwise(folder, &all);
        assert_eq!((code, out.as_str()), (2, ""), "{arguments:?} {told}");
        assert!(told.contains(wording), "{arguments:?} {told}");
    }
}

/// Every field is explained in README.
#[test]
fn json_has_the_fields_that_are_documented() {
    let readme = concat!(env!("CARGO_MANIFEST_DIR"), "/README.md");
    let readme = std::fs::read_to_string(readme).unwrap();
    let set = |z: f64| {
        format!(
            r#"(units: mm, patches: [
            (name: "p/1", surface: Plane(origin: (0, 0, 0), u: (100, 0, 0), v: (0, 50, 0))),
            (name: "p/2", surface: Plane(origin: (100, 0, 0), u: (100, 0, {z}), v: (0, 50, 0)))])"#
        )
    };
    let (_, report) = compared(&set(0.0), &set(3.0), &[]);
    let every = |value: &Value| {
        for field in value.as_object().unwrap().keys() {
            assert!(readme.contains(&format!("`{field}`")), "{field}");
        }
    };
    every(&report);
    every(&report["summary"]);
    every(&report["patches"][0]);
    every(&report["patches"][0]["old"]);
    every(&report["seams"][0]);
    every(&report["seams"][0]["new"]);
}
