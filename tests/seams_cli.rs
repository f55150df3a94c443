//! The `seams` command: exit codes, streams, wording.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use assert_cmd::Command;

fn seams(arguments: &[&str]) -> std::process::Output {
    let mut command = Command::cargo_bin("chordwise").expect("the program is built");
    command
        .current_dir(env!("CARGO_MANIFEST_DIR"))
        .arg("seams")
        .args(arguments)
        .output()
        .expect("the program runs")
}

fn text(bytes: &[u8]) -> String {
    String::from_utf8_lossy(bytes).into_owned()
}

#[test]
fn exit_codes_tell_findings_from_errors() {
    assert_eq!(seams(&["patches/box.ron"]).status.code(), Some(0));
    assert_eq!(seams(&["patches/front_quarter.ron"]).status.code(), Some(1));
    assert_eq!(seams(&["patches/no_such_set.ron"]).status.code(), Some(2));
    assert_eq!(seams(&[]).status.code(), Some(2));
}

#[test]
fn the_text_report_names_faults_first_and_ends_with_the_caution() {
    let out = text(&seams(&["patches/front_quarter.ron"]).stdout);
    let first = out.find("bumper/waist 1 U1 | bumper/waist 2 U0").unwrap();
    assert!(out.find("bonnet").is_none_or(|other| first < other));
    assert!(out.contains("3 faults"));
    assert!(out.contains("0.8000"));
    assert!(out.contains("near misses, open in the mesh:"));
    assert!(out.contains("open loops: "));
    assert!(out.trim_end().ends_with("local codes that apply."));
}

#[test]
fn json_goes_to_a_file_and_can_be_narrowed_to_a_panel() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("seams.json");
    let arguments = [
        "patches/front_quarter.ron",
        "--format",
        "json",
        "--panel",
        "sill",
        "-o",
        path.to_str().unwrap(),
    ];
    let run = seams(&arguments);
    assert_eq!(run.status.code(), Some(1));
    assert!(run.stdout.is_empty());
    let json: serde_json::Value =
        serde_json::from_str(&std::fs::read_to_string(&path).unwrap()).unwrap();
    assert_eq!(json["schema_version"], 2);
    let list = json["seams"].as_array().unwrap();
    assert_eq!(list[0]["finding"], "gap");
    assert_eq!(list[0]["verdict"], "fault");
    assert_eq!(list[0]["demand"], "G1");
    assert_eq!(json["near_misses"].as_array().unwrap().len(), 1);
    for seam in list {
        let [a, b] = [&seam["between"][0], &seam["and"][0]].map(|n| n.as_str().unwrap());
        assert!(a.starts_with("sill/") || b.starts_with("sill/"));
    }
}

#[test]
fn a_mistyped_panel_is_refused_with_a_hint() {
    let run = seams(&["patches/front_quarter.ron", "--panel", "bonet"]);
    assert_eq!(run.status.code(), Some(2));
    assert!(text(&run.stderr).contains("did you mean `bonnet`?"));
}
