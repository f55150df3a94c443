//! `chordwise check`: exit codes, what goes to which stream, and the JSON.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use assert_cmd::Command;
use serde_json::Value;

/// Exit code, standard output and standard error.
fn check(arguments: &[&str], input: &str) -> (i32, String, String) {
    let output = Command::cargo_bin("chordwise")
        .unwrap()
        .current_dir(env!("CARGO_MANIFEST_DIR"))
        .arg("check")
        .args(arguments)
        .write_stdin(input)
        .output()
        .unwrap();
    (
        output.status.code().unwrap(),
        String::from_utf8(output.stdout).unwrap(),
        String::from_utf8(output.stderr).unwrap(),
    )
}

const FAULTY: &str = "(patches: [\n  (name: \"a\", surface: Sphere(radius: 0)),\n  (name: \"a\", surface: Cone(radius: 1, height: -2)),\n])";

#[test]
fn a_valid_set_gets_one_line_and_exit_code_0() {
    let (code, out, err) = check(&["patches/box.ron"], "");
    assert_eq!(code, 0);
    assert_eq!(
        out,
        "box: valid; 1 panel, 6 patches, 6 Bezier pieces, 24 control points; \
         box of the nets (0, 0, 0) to (100, 60, 40) mm\n"
    );
    assert_eq!(err, "");
}

#[test]
fn warnings_go_to_standard_error_and_leave_exit_code_0() {
    let (code, out, err) = check(&["patches/cone.ron"], "");
    assert_eq!(code, 0);
    assert_eq!(out.lines().count(), 1);
    assert!(
        err.contains("warning: patch `cone`: edge V1 is collapsed to a point"),
        "{err}"
    );
    assert!(err.contains("patches/cone.ron:4:"), "{err}");
    assert!(!err.contains('\u{1b}'), "no colour into a pipe");
}

#[test]
fn faults_go_to_standard_error_with_exit_code_2() {
    let (code, out, err) = check(&["-"], FAULTY);
    assert_eq!((code, out.as_str()), (2, ""));
    for expected in [
        "standard input:2:39",
        "radius is 0; it must be positive",
        "standard input:3:10",
        "the name `a` is taken",
        "height is -2; it must not be negative",
        "standard input: 3 faults; the set is not used",
    ] {
        assert!(err.contains(expected), "{expected} is not in {err}");
    }
    let (code, _, err) = check(&["no/such.ron"], "");
    assert_eq!(code, 2);
    assert!(err.contains("the file cannot be read"));
    let (code, _, _) = check(&[], "");
    assert_eq!(code, 2);
}

#[test]
fn json_has_everything_on_standard_output() {
    let (code, out, err) = check(&["-", "--format", "json"], FAULTY);
    assert_eq!((code, err.as_str()), (2, ""));
    let report: Value = serde_json::from_str(&out).unwrap();
    assert_eq!(report["schema_version"], 1);
    assert_eq!(report["valid"], false);
    let faults = report["faults"].as_array().unwrap();
    assert_eq!(faults.len(), 3);
    assert_eq!(
        (&faults[0]["line"], &faults[0]["column"]),
        (&2.into(), &39.into())
    );
    assert_eq!(faults[0]["place"], "patch `a`, radius");
    assert!(report["summary"].is_null());

    let (code, out, err) = check(&["patches/sphere.ron", "--format", "json"], "");
    assert_eq!((code, err.as_str()), (0, ""));
    let report: Value = serde_json::from_str(&out).unwrap();
    assert_eq!(report["valid"], true);
    assert_eq!(report["warnings"].as_array().unwrap().len(), 2);
    assert_eq!(report["summary"]["pieces"], 8);
    assert_eq!(report["summary"]["unit"], "mm");
}
