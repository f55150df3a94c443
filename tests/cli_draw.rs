//! `chordwise draw` as a stranger meets it.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use std::path::Path;

use assert_cmd::Command;

fn run(arguments: &[&str]) -> (i32, String, String) {
    let output = Command::cargo_bin("chordwise")
        .unwrap()
        .current_dir(env!("CARGO_MANIFEST_DIR"))
        .arg("draw")
        .args(arguments)
        .output()
        .unwrap();
    (
        output.status.code().unwrap(),
        String::from_utf8_lossy(&output.stdout).into_owned(),
        String::from_utf8_lossy(&output.stderr).into_owned(),
    )
}

fn drawn(name: &str, arguments: &[&str]) -> image::RgbImage {
    let folder = Path::new(env!("CARGO_TARGET_TMPDIR"));
    let file = folder.join(name);
    let all = [&["-o", file.to_str().unwrap()], arguments].concat();
    let (code, out, err) = run(&all);
    assert_eq!((code, out.as_str()), (0, ""), "{err}");
    image::open(file).unwrap().to_rgb8()
}

#[test]
fn every_shading_and_view_makes_a_picture() {
    for shading in [
        "plain",
        "panels",
        "reflection",
        "gaussian",
        "mean",
        "principal",
        "deviation",
    ] {
        let size = ["--size", "320x200", "--shading", shading];
        let picture = drawn(
            &format!("{shading}.png"),
            &[&["patches/saddle.ron"][..], &size].concat(),
        );
        assert_eq!(picture.dimensions(), (320, 200));
    }
    for view in [
        ["--view", "front"],
        ["--view", "top"],
        ["--direction", "-1,-1,-0.5"],
    ] {
        let more = ["--size", "320x200", "--seams", "--edges"];
        drawn(
            "view.png",
            &[&["patches/two_boxes.ron"][..], &more, &view].concat(),
        );
    }
    let near = ["--zoom-seam", "1", "--across", "20mm", "--size", "320x200"];
    drawn(
        "zoom.png",
        &[&["patches/nearly_closed.ron"][..], &near].concat(),
    );
}

#[test]
fn wrong_usage_is_refused_in_plain_words() {
    for (arguments, words) in [
        (vec!["-o", "x.jpg"], "--output x.jpg: pictures are PNG"),
        (
            vec!["-o", "x.png", "--range", "2:1"],
            "`2:1` is no range; write two figures, the lower first",
        ),
        (
            vec!["-o", "x.png", "--size", "10x10"],
            "`10x10` is no size; write pixels across and down",
        ),
        (
            vec!["-o", "x.png", "--direction", "0,0,0"],
            "`0,0,0` is no direction; write three numbers",
        ),
        (
            vec!["-o", "x.png", "--zoom-seam", "99"],
            "--zoom-seam 99: the set has 12 seams",
        ),
        (
            vec!["-o", "x.png", "--zoom-panel", "bax"],
            "the set has no such panel",
        ),
    ] {
        let all: Vec<&str> = [&["patches/box.ron"], &arguments[..]].concat();
        let (code, out, err) = run(&all);
        assert_eq!((code, out.as_str()), (2, ""), "{arguments:?}");
        assert!(err.contains(words), "{arguments:?}: {err}");
    }
    assert!(!Path::new(env!("CARGO_MANIFEST_DIR")).join("x.png").exists());
}

/// The options by which a set is meshed hold here too.
#[test]
fn limits_gaps_and_orientation_are_heeded() {
    let text = std::fs::read_to_string("patches/box.ron").unwrap();
    let top = "surface: Bezier(indexed: [[4, 7], [5, 6]])";
    let turned = Path::new(env!("CARGO_TARGET_TMPDIR")).join("turned_box.ron");
    std::fs::write(&turned, text.replace(top, &format!("flip: true, {top}"))).unwrap();
    let turned = turned.to_str().unwrap();
    let size = ["--size", "320x200", "--direction", "-1,-2,1.5"];
    let of = |set: &str, more: &[&str]| drawn("turned.png", &[&[set], &size[..], more].concat());
    let whole = of("patches/box.ron", &[]);
    assert_ne!(of(turned, &[]), whole, "the top shows its inner side");
    assert_eq!(of(turned, &["--orient"]), whole, "--orient turns it back");
    for (arguments, words) in [
        (
            "patches/sphere.ron --max-triangles 100",
            "at most 1.0e2 are to be made",
        ),
        (
            "patches/sphere.ron --max-memory 1MB",
            "at most 1 MB are to be taken",
        ),
        (
            "patches/nearly_closed.ron --close-gaps 0.08 --chord 0.05",
            "joined edges must lie closer than the chord tolerance",
        ),
    ] {
        let all: Vec<&str> = arguments.split(' ').chain(["-o", "x.png"]).collect();
        let (code, _, err) = run(&all);
        assert_eq!(code, 2, "{arguments}: {err}");
        assert!(err.contains(words), "{arguments}: {err}");
    }
}
