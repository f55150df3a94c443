//! Sets of any size, and the `demo` command.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use std::collections::BTreeMap;

use assert_cmd::Command;
use chordwise::bezier::BezierPatch;
use chordwise::demo::write_panels;
use chordwise::patch_set::PatchSet;
use chordwise::scalar::Point;

fn panels(count: u32) -> PatchSet {
    let mut text = Vec::new();
    write_panels(count, &mut text).expect("memory takes it");
    let text = String::from_utf8(text).expect("text");
    let reading = PatchSet::from_ron(&text, "panels.ron").expect("the set is valid");
    assert!(reading.warnings.is_empty(), "{:?}", reading.warnings);
    reading.set
}

fn chordwise() -> Command {
    Command::cargo_bin("chordwise").expect("our program")
}

#[test]
fn a_set_has_as_many_patches_as_asked_for_64_to_a_panel() {
    for (count, sizes) in [(1, vec![1]), (64, vec![64]), (200, vec![64, 64, 64, 8])] {
        let set = panels(count);
        let found: Vec<usize> = set.panels().iter().map(|p| p.patches.len()).collect();
        assert_eq!(found, sizes);
        assert!(set.pieces().iter().all(|p| p.surface.degree() == (3, 3)));
    }
}

/// Across a joint of uniform cubics positions, first and second differences of
/// the nets agree.
#[test]
fn patches_of_a_panel_join_in_curvature() {
    let set = panels(5 * 64);
    let mut joints = 0;
    for panel in set.panels() {
        let surfaces: Vec<&BezierPatch> = panel
            .patches
            .iter()
            .map(|id| &set.pieces()[set.patches()[id.index()].pieces.start].surface)
            .collect();
        for cell in 0..64 {
            for (next, along_u) in [(cell + 8, true), (cell + 1, false)] {
                if next >= 64 || (!along_u && cell % 8 == 7) {
                    continue;
                }
                for k in 0..4 {
                    let at = |surface: &BezierPatch, i: usize| -> Point {
                        if along_u {
                            surface.control_point(i, k)
                        } else {
                            surface.control_point(k, i)
                        }
                    };
                    let (a, b) = (surfaces[cell], surfaces[next]);
                    assert_eq!(at(a, 3), at(b, 0));
                    let first = (at(a, 3) - at(a, 2)) - (at(b, 1) - at(b, 0));
                    assert!(first.norm() < 1e-12, "{first}");
                    let second = (at(a, 3).coords - at(a, 2).coords * 2.0 + at(a, 1).coords)
                        - (at(b, 2).coords - at(b, 1).coords * 2.0 + at(b, 0).coords);
                    assert!(second.norm() < 1e-12, "{second}");
                    joints += 1;
                }
            }
        }
    }
    assert_eq!(joints, 5 * 2 * 7 * 8 * 4);
}

#[test]
fn panels_are_smooth_and_lie_4_mm_apart() {
    let set = panels(4 * 64);
    let mut boxes: BTreeMap<usize, [f64; 4]> = BTreeMap::new();
    for piece in set.pieces() {
        let panel = set.patches()[piece.patch.index()].panel.index();
        let entry = boxes.entry(panel).or_insert([
            f64::INFINITY,
            f64::NEG_INFINITY,
            f64::INFINITY,
            f64::NEG_INFINITY,
        ]);
        for p in piece.surface.control_points() {
            entry[0] = entry[0].min(p.x);
            entry[1] = entry[1].max(p.x);
            entry[2] = entry[2].min(p.y);
            entry[3] = entry[3].max(p.y);
        }
        // Gentle: no radius below 500 mm.
        for (u, v) in [(0.0, 0.0), (0.5, 0.5), (1.0, 0.3)] {
            let (gaussian, mean) = piece.surface.jet(u, v).gaussian_and_mean().unwrap();
            let sharpest = mean.abs() + (mean * mean - gaussian).max(0.0).sqrt();
            assert!(sharpest < 1.0 / 500.0, "radius {}", 1.0 / sharpest);
        }
    }
    let same = |a: f64, b: f64| assert!((a - b).abs() < 1e-12, "{a} {b}");
    same(boxes[&0][1] + 4.0, boxes[&1][0]);
    same(boxes[&0][3] + 4.0, boxes[&2][2]);
    for (found, expected) in boxes[&0].into_iter().zip([0.0, 480.0, 0.0, 480.0]) {
        same(found, expected);
    }
}

#[test]
fn the_command_writes_to_standard_output_and_to_files() {
    let shipped = include_str!("../patches/front_quarter.ron");
    chordwise()
        .args(["demo", "-o", "-"])
        .assert()
        .code(0)
        .stdout(shipped)
        .stderr("");
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join("set.ron");
    chordwise()
        .args(["demo", "front-quarter", "-o"])
        .arg(&file)
        .assert()
        .code(0)
        .stdout("");
    assert_eq!(std::fs::read_to_string(&file).unwrap(), shipped);
    chordwise()
        .args(["demo", "--panels", "1000", "-o"])
        .arg(&file)
        .assert()
        .code(0);
    let text = std::fs::read_to_string(&file).unwrap();
    assert_eq!(text.matches("Bezier(net:").count(), 1000);
}

#[test]
fn bad_usage_of_the_command_is_refused() {
    for arguments in [
        vec!["demo"],
        vec!["demo", "--panels", "0", "-o", "-"],
        vec!["demo", "front-quarter", "--panels", "3", "-o", "-"],
        vec!["demo", "rear-quarter", "-o", "-"],
        vec!["demo", "-o", "no-such-folder/set.ron"],
    ] {
        let assert = chordwise().args(&arguments).assert().code(2).stdout("");
        assert!(!assert.get_output().stderr.is_empty(), "{arguments:?}");
    }
}
