//! The program as a stranger meets it: what goes to which stream, exit codes,
//! and the words in which wrong usage is refused.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use std::fs;
use std::io::Read;
use std::path::Path;
use std::process::Stdio;

use assert_cmd::Command;
use serde_json::Value;

/// Exit code, standard output and standard error of a run in the project's
/// folder, with nothing on standard input.
fn run(arguments: &[&str]) -> (i32, String, String) {
    run_with(arguments, "")
}

fn run_with(arguments: &[&str], input: &str) -> (i32, String, String) {
    let output = Command::cargo_bin("chordwise")
        .unwrap()
        .current_dir(env!("CARGO_MANIFEST_DIR"))
        .args(arguments)
        .write_stdin(input)
        .output()
        .unwrap();
    (
        output.status.code().unwrap(),
        String::from_utf8_lossy(&output.stdout).into_owned(),
        String::from_utf8_lossy(&output.stderr).into_owned(),
    )
}

/// The refusal of a `tessellate` run that must end with 2 and print nothing.
fn refused(arguments: &[&str]) -> String {
    let all: Vec<&str> = [&["tessellate"], arguments].concat();
    let (code, out, err) = run(&all);
    assert_eq!((code, out.as_str()), (2, ""), "{arguments:?}: {err}");
    err
}

fn json(text: &str) -> Value {
    serde_json::from_str(text).unwrap()
}

#[test]
fn the_bare_program_shows_help_and_ends_with_2() {
    let (code, out, err) = run(&[]);
    assert_eq!((code, out.as_str()), (2, ""));
    assert!(err.starts_with("Examples:\n"), "{err}");
}

#[test]
fn help_begins_with_examples_and_ends_with_0() {
    for command in [
        "tessellate",
        "seams",
        "check",
        "compare",
        "demo",
        "completions",
        "man",
    ] {
        let (code, out, err) = run(&[command, "--help"]);
        assert_eq!((code, err.as_str()), (0, ""), "{command}");
        assert!(out.starts_with("Examples:\n  "), "{command}: {out}");
    }
    let (code, out, _) = run(&["--version"]);
    assert_eq!(code, 0);
    assert_eq!(out, concat!("chordwise ", env!("CARGO_PKG_VERSION"), "\n"));
}

#[test]
fn wrong_usage_is_refused_in_plain_words() {
    let folder = tempfile::tempdir().unwrap();
    let inside = folder.path().to_str().unwrap();
    let mesh = folder.path().join("mesh.glb");
    let mesh = mesh.to_str().unwrap();
    let set = "patches/box.ron";
    let elsewhere = format!("{inside}/no/mesh.glb");
    let cases: &[(&[&str], &str)] = &[
        (
            &["no.ron", "-o", mesh],
            "error: no.ron: the file cannot be read: ",
        ),
        (
            &["patches", "-o", mesh],
            "error: patches: the file cannot be read: ",
        ),
        (&[set, "-o", inside], "is a folder; name a file in it"),
        (&[set, "-o", &elsewhere], "make it first"),
        (
            &[set, "-o", set, "--as", "obj"],
            "error: patches/box.ron: is the input itself",
        ),
        (
            &[set, "-o", "mesh.xyz"],
            "error: --output mesh.xyz: no format is known for this extension; name it stl, obj, ply, glb or vtu, or give --as",
        ),
        (
            &[set, "-o", "mesh"],
            "no format is known for this extension",
        ),
        (
            &[set, "-o", "-"],
            "give the format with --as stl, obj, ply, glb or vtu",
        ),
        (
            &[set, "-o", mesh, "--as", "xyz"],
            "[possible values: stl, obj, ply, glb, vtu]",
        ),
        (
            &[set, "-o", mesh, "--as", "stl", "--layout", "strips"],
            "error: stl: layout strips cannot be stored; choose triangles, or write glb",
        ),
        (
            &[set, "-o", mesh, "--as", "stl", "--normals"],
            "error: --normals: stl has no vertex normals",
        ),
        (
            &[set, "-o", mesh, "--panel", "bo"],
            "error: --panel bo: the set has no such panel, did you mean `box`?; its panel is `box`",
        ),
        (
            &[set, "-o", mesh, "--panel", "roof"],
            "error: --panel roof: the set has no such panel; its panel is `box`",
        ),
        (
            &[set, "-o", mesh, "--chord", "0"],
            "`0` is no length; write a positive number",
        ),
        (
            &[set, "-o", mesh, "--chord", "-1"],
            "`-1` is no length; write a positive number",
        ),
        (&[set, "-o", mesh, "--chord", "nan"], "`nan` is no length"),
        (
            &[set, "-o", mesh, "--chord", "1e999"],
            "`1e999` is no length",
        ),
        (
            &[set, "-o", mesh, "--chord", "0.1 ells"],
            "with m, cm, mm or in behind it",
        ),
        (&[set, "-o", mesh, "--chord", "0,1"], "`0,1` is no length"),
        (&[set, "-o", mesh, "--max-edge", "0"], "`0` is no length"),
        (
            &[set, "-o", mesh, "--normal-angle", "0"],
            "`0` is no normal angle; write degrees, from 0.01 to 180",
        ),
        (
            &[set, "-o", mesh, "--normal-angle", "-5"],
            "`-5` is no normal angle",
        ),
        (
            &[set, "-o", mesh, "--normal-angle", "wide"],
            "`wide` is no normal angle",
        ),
        (&[set, "-o", mesh, "--jobs", "0"], "0 is not in 1..=65535"),
        (
            &[set, "-o", mesh, "--format", "yaml"],
            "[possible values: text, json]",
        ),
        (
            &[set, "-o", mesh, "--hord", "1"],
            "a similar argument exists: '--chord'",
        ),
        (&[set], "--output <FILE>"),
        (
            &["patches/README.md", "-o", mesh],
            "this is no patch set; a set begins with `(`",
        ),
    ];
    for (arguments, wording) in cases {
        let err = refused(arguments);
        assert!(err.contains(wording), "{arguments:?}: {err}");
        assert!(!err.contains('\u{1b}'), "no colour into a pipe: {err}");
    }
    assert!(!Path::new(mesh).exists(), "nothing is written");
}

#[test]
fn a_mistyped_command_gets_a_hint() {
    let (code, _, err) = run(&["tesselate", "patches/box.ron"]);
    assert_eq!(code, 2);
    assert!(
        err.contains("a similar subcommand exists: 'tessellate'"),
        "{err}"
    );
    let (code, _, err) = run(&["man", "tesselate"]);
    assert_eq!(code, 2);
    assert!(
        err.ends_with("the commands are tessellate, audit, seams, draw, report, check, compare, mend, demo, completions, man\n"),
        "{err}"
    );
}

#[test]
fn limits_beyond_all_measure_are_refused_before_the_work() {
    for limit in [
        &["--chord", "1e-7"],
        &["--max-edge", "0.001"],
        &["--normal-angle", "0.01"],
    ] {
        let set = "(patches: [(name: \"a\", surface: Sphere(radius: 50)), (name: \"b\", surface: Sphere(radius: 9))])";
        let folder = tempfile::tempdir().unwrap();
        let file = folder.path().join("set.ron");
        fs::write(&file, set).unwrap();
        let file = file.to_str().unwrap();
        let err = refused(&[&[file, "-o", "-", "--as", "ply"], &limit[..]].concat());
        assert!(
            err.contains("triangles are needed; at most 5.0e7 are to be made"),
            "{limit:?}: {err}"
        );
    }
}

#[test]
fn an_empty_file_is_no_set() {
    let (code, _, err) = run_with(&["tessellate", "-", "--as", "obj", "-o", "-"], "");
    assert_eq!(code, 2);
    assert!(err.contains("standard input:1:1"), "{err}");
    assert!(
        err.contains("expected `(`; a structure stands in round brackets"),
        "{err}"
    );
    assert!(!err.contains("SetFile"), "{err}");
}

#[test]
fn a_faulty_set_is_refused_with_line_and_column() {
    let text = "(patches: [(name: \"a\", surface: Sphere(radius: -1))])";
    let (code, out, err) = run_with(&["tessellate", "-", "--as", "obj", "-o", "-"], text);
    assert_eq!((code, out.as_str()), (2, ""));
    assert!(err.contains("standard input:1:"), "{err}");
    assert!(
        err.contains("standard input: 1 fault; the set is not used"),
        "{err}"
    );
}

#[test]
fn the_summary_goes_where_the_mesh_does_not() {
    let set = fs::read_to_string(concat!(env!("CARGO_MANIFEST_DIR"), "/patches/box.ron")).unwrap();
    let (code, mesh, err) = run_with(&["tessellate", "-", "--as", "obj", "-o", "-"], &set);
    assert_eq!(code, 0);
    assert_eq!(mesh.lines().filter(|l| l.starts_with("f ")).count(), 12);
    assert!(err.contains("12 triangles, 8 vertices"), "{err}");
    assert!(err.contains("6 in 1 panel, "), "{err}");
    assert!(
        err.trim_end().ends_with(chordwise::report::CAUTION),
        "{err}"
    );

    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join("box.OBJ");
    let (code, out, err) = run(&[
        "tessellate",
        "patches/box.ron",
        "-o",
        file.to_str().unwrap(),
    ]);
    assert_eq!((code, err.as_str()), (0, ""));
    assert!(out.contains("12 triangles, 8 vertices"), "{out}");
    assert_eq!(fs::read_to_string(file).unwrap(), mesh);
}

#[test]
fn json_has_the_fields_that_are_documented() {
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join("torus.glb");
    let name = file.to_str().unwrap();
    let (code, out, _) = run(&[
        "tessellate",
        "patches/torus.ron",
        "-o",
        name,
        "--chord",
        "1",
        "--format",
        "json",
    ]);
    assert_eq!(code, 0);
    let told = json(&out);
    assert_eq!(told["schema_version"], 1);
    assert_eq!(
        (&told["euler"], &told["components"]),
        (&Value::from(0), &Value::from(1))
    );
    assert_eq!(
        (&told["closed"], &told["open_loops"]),
        (&Value::from(true), &Value::from(0))
    );
    assert_eq!(told["written"]["bytes"], fs::metadata(&file).unwrap().len());
    assert_eq!(told["written"]["layout"], "strips");
    assert_eq!(told["caution"], chordwise::report::CAUTION);
    // Whatever the file's precision, the promise holds for what is read back.
    let deviation = &told["deviation"];
    assert!(deviation["rounding"].as_f64().unwrap() > 0.0);
    assert!(deviation["proved"].as_f64().unwrap() <= 1.0, "{deviation}");
    assert!(deviation["attained"].as_f64() <= deviation["proved"].as_f64());

    let read = |name: &str| {
        fs::read_to_string(std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join(name)).unwrap()
    };
    let readme = read("README.md") + &read("patches/SEAMS.md");
    let documented = |field: &str| {
        assert!(
            readme.contains(&format!("`{field}`")),
            "README.md does not tell of {field}"
        );
    };
    let every = |value: &Value| {
        for field in value.as_object().unwrap().keys() {
            documented(field);
        }
    };
    every(&told);
    for group in ["deviation", "storage", "written", "seconds", "quality"] {
        every(&told[group]);
    }
    let quality = &told["quality"];
    every(&quality["shortest_edge"]);
    for line in quality["measures"].as_array().unwrap() {
        every(line);
        every(&line["histogram"]);
        every(&line["worst"][0]);
    }
    let (_, out, _) = run(&["seams", "patches/front_quarter.ron", "--format", "json"]);
    let seams = json(&out);
    every(&seams);
    for group in ["tolerances", "summary"] {
        every(&seams[group]);
    }
    every(&seams["seams"][0]);
    every(&seams["seams"][0]["gap"]);
    every(&seams["seams"][0]["gap"]["at"]);
    every(&seams["near_misses"][0]);
    every(&seams["open_loops"][0]);
    let (_, out, _) = run(&["check", "patches/cone.ron", "--format", "json"]);
    let check = json(&out);
    every(&check);
    every(&check["summary"]);
    every(&check["warnings"][0]);
}

#[test]
fn rounding_in_the_file_leaves_the_promise_whole() {
    let folder = tempfile::tempdir().unwrap();
    for (format, chord) in [("stl", 0.1), ("glb", 0.1), ("glb", 0.01), ("ply", 0.1)] {
        let file = folder.path().join(format!("quarter.{format}"));
        let (code, out, err) = run(&[
            "tessellate",
            "patches/front_quarter.ron",
            "-o",
            file.to_str().unwrap(),
            "--chord",
            &chord.to_string(),
            "--panel",
            "bonnet",
            "--format",
            "json",
        ]);
        assert_eq!(code, 0, "{err}");
        let told = json(&out);
        let proved = told["deviation"]["proved"].as_f64().unwrap();
        assert!(proved <= chord, "{format} at {chord}: {proved}");
        assert!(told["chord"].as_f64().unwrap() >= chord);
    }
}

#[test]
fn ply_gets_normals_when_asked() {
    let (_, plain, _) = run(&["tessellate", "patches/box.ron", "--as", "ply", "-o", "-"]);
    let (code, with, err) = run(&[
        "tessellate",
        "patches/box.ron",
        "--as",
        "ply",
        "-o",
        "-",
        "--normals",
    ]);
    assert_eq!(code, 0);
    assert!(!plain.contains("property double nx"));
    assert!(with.contains("property double nx"));
    // A corner of a box has three normals.
    assert!(with.contains("element vertex 24"), "{err}");
    assert!(err.contains("8 vertices (24 in the file)"), "{err}");
}

#[test]
fn the_result_is_the_same_for_any_number_of_threads() {
    let meshes: Vec<Vec<u8>> = ["1", "2", "7"]
        .iter()
        .map(|jobs| {
            let output = Command::cargo_bin("chordwise")
                .unwrap()
                .current_dir(env!("CARGO_MANIFEST_DIR"))
                .args([
                    "tessellate",
                    "patches/front_quarter.ron",
                    "--as",
                    "glb",
                    "-o",
                    "-",
                    "--jobs",
                    jobs,
                ])
                .output()
                .unwrap();
            assert!(output.status.success());
            output.stdout
        })
        .collect();
    assert!(meshes[0].len() > 100_000);
    assert!(meshes.iter().all(|mesh| *mesh == meshes[0]));
}

#[test]
fn a_reader_who_leaves_early_is_no_fault() {
    let mut child = std::process::Command::new(assert_cmd::cargo::cargo_bin("chordwise"))
        .current_dir(env!("CARGO_MANIFEST_DIR"))
        .args([
            "tessellate",
            "patches/front_quarter.ron",
            "--as",
            "obj",
            "-o",
            "-",
        ])
        .stdin(Stdio::null())
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .unwrap();
    let mut few = [0; 16];
    let mut out = child.stdout.take().unwrap();
    out.read_exact(&mut few).unwrap();
    drop(out);
    let output = child.wait_with_output().unwrap();
    assert_eq!(output.status.code(), Some(0));
    let err = String::from_utf8(output.stderr).unwrap();
    assert!(!err.contains("error"), "{err}");
}

/// Worked out from the published net: six open loops, four parts, of which two
/// meet in one point.
#[test]
fn the_parts_of_the_teapot_touch_in_one_point() {
    let (code, out, _) = run(&[
        "tessellate",
        "patches/teapot.ron",
        "--as",
        "ply",
        "-o",
        "/dev/null",
        "--format",
        "json",
    ]);
    assert_eq!(code, 0);
    let told = json(&out);
    for (field, value) in [
        ("open_loops", 6),
        ("components", 4),
        ("touching", 1),
        ("euler", 2),
    ] {
        assert_eq!(told[field], value, "{field}");
    }
}
