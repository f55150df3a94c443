//! `tessellate --size` as typed: the file, the summary, the audit of the file.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use assert_cmd::Command;

fn chordwise(arguments: &[&str], folder: &std::path::Path) -> std::process::Output {
    Command::cargo_bin("chordwise")
        .unwrap()
        .args(arguments)
        .current_dir(folder)
        .output()
        .unwrap()
}

fn json(output: &std::process::Output) -> serde_json::Value {
    serde_json::from_slice(&output.stdout).unwrap()
}

#[test]
fn a_sized_mesh_is_written_told_and_audited() {
    let folder = tempfile::tempdir().unwrap();
    let text = r#"(patches: [(name: "ball", surface: Sphere(radius: 50))])"#;
    std::fs::write(folder.path().join("ball.ron"), text).unwrap();
    let run = |arguments: &str| {
        let arguments: Vec<&str> = arguments.split(' ').collect();
        chordwise(&arguments, folder.path())
    };
    let made = run("tessellate ball.ron -o ball.ply --size 5 --evidence --format json");
    assert!(made.status.success(), "{made:?}");
    let summary = json(&made);
    assert!(summary["chord"].is_null());
    assert_eq!(summary["closed"], true);
    let sized = &summary["sized"];
    assert_eq!(sized["size"], 5.0);
    assert!(sized["share_above_30"].as_f64().unwrap() >= 0.99);
    assert!(sized["forced"].as_array().unwrap().is_empty());
    let audit = run("audit ball.ply ball.ron --chord 0.2 --format json");
    assert!(audit.status.success(), "{audit:?}");
    assert_eq!(json(&audit)["verdict"], "proved");
    let tight = run("audit ball.ply ball.ron --chord 0.01 --format json");
    assert_eq!(tight.status.code(), Some(1));
    // Held to a chord, all formats; a family is finer from level to level.
    for name in ["a.stl", "a.glb", "a.vtu", "a.obj"] {
        let made = run(&format!(
            "tessellate ball.ron -o {name} --size 10 --chord 0.1 --format json"
        ));
        assert!(made.status.success(), "{made:?}");
        let proved = json(&made)["deviation"]["proved"].as_f64().unwrap();
        assert!(proved <= 0.1, "{proved}");
    }
    let made = run("tessellate ball.ron -o f.vtu --size 15 --family 2 --format json");
    assert!(made.status.success(), "{made:?}");
    let levels = json(&made)["levels"].clone();
    let count = |k: usize| levels[k]["summary"]["triangles"].as_f64().unwrap();
    let finer = count(1) / count(0);
    assert!((2.0..2.5).contains(&finer), "{finer}");
    let text = run("tessellate ball.ron -o t.ply --size 5mm --min-edge 2mm --growth 1.3");
    let text = String::from_utf8(text.stdout).unwrap();
    assert!(text.contains("no chord tolerance was given"), "{text}");
    assert!(text.contains("sized       edges of 5"), "{text}");
}
