//! Sections against closed forms, and the lines and points beside a mesh.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use std::path::Path;

use assert_cmd::Command;
use chordwise::mesh::Meshed;
use chordwise::patch_set::PatchSet;
use chordwise::picture::{Plane, Scene, SectionHead, SectionRun, draw_section, section};
use chordwise::sampling::Limits;
use chordwise::scalar::Vector;

fn cut(text: &str, plane: &Plane) -> Vec<SectionRun> {
    let set = PatchSet::from_ron(text, "test.ron").unwrap().set;
    let limits = Limits::new(0.2, None, None);
    let made = Meshed::with_evidence(&set, &limits, |_| true, |_| ()).unwrap();
    section(&Scene::new(&set, &made.mesh).unwrap(), plane)
}

fn plane(x: f64, y: f64, z: f64, offset: f64) -> Plane {
    Plane {
        normal: Vector::new(x, y, z).normalize(),
        offset,
    }
}

/// A ball of radius R cut at a distance d from its middle: a circle of radius
/// sqrt(R^2 - d^2), and that is the radius of its curvature too.
#[test]
fn a_ball_is_cut_in_a_circle() {
    let text = r#"(patches: [(name: "ball", surface: Sphere(radius: 50))])"#;
    for (plane, distance) in [
        (plane(0.0, 0.0, 1.0, 30.0), 30.0),
        (plane(1.0, 2.0, -0.5, 11.0), 11.0),
    ] {
        let runs = cut(text, &plane);
        let radius = (50.0_f64 * 50.0 - distance * distance).sqrt();
        let middle = plane.normal * distance;
        let mut length = 0.0;
        for run in &runs {
            for cut in &run.cuts {
                let from = cut.point.coords - middle;
                assert!(plane.height(&cut.point).abs() < 1e-9);
                approx::assert_relative_eq!(from.norm(), radius, max_relative = 1e-9);
                // The curvature vector points to the middle.
                let bend = cut.bend.unwrap();
                assert!((bend + from / (radius * radius)).norm() < 1e-9, "{bend}");
            }
            length += run
                .cuts
                .windows(2)
                .map(|w| (w[1].point - w[0].point).norm())
                .sum::<f64>();
        }
        // All round, once.
        let whole = std::f64::consts::TAU * radius;
        assert!((length / whole - 1.0).abs() < 0.003, "{length} {whole}");
    }
}

#[test]
fn a_plane_beside_the_set_cuts_nothing() {
    let text = r#"(name: "ball", patches: [(name: "ball", surface: Sphere(radius: 50))])"#;
    let plane = plane(1.0, 0.0, 0.0, 51.0);
    let runs = cut(text, &plane);
    assert!(runs.is_empty());
    let head = SectionHead {
        name: "a < b & c".to_owned(),
        unit: "mm",
        panels: vec![],
        comb: None,
    };
    let drawing = draw_section(&runs, &plane, (400, 300), &head);
    assert!(drawing.svg().contains("the plane cuts nothing"));
    assert!(drawing.svg().contains("a &lt; b &amp; c"));
    assert_eq!(drawing.canvas().width, 400);
}

#[test]
fn extras_are_nodes_of_lines_and_points() {
    for (set, extras) in [
        (
            "nearly_closed",
            &["seams", "worst", "normals", "isolines"][..],
        ),
        ("octant", &["combs"]),
    ] {
        let file = Path::new(env!("CARGO_TARGET_TMPDIR")).join(format!("{set}_extras.glb"));
        let mut command = Command::cargo_bin("chordwise").unwrap();
        command
            .current_dir(env!("CARGO_MANIFEST_DIR"))
            .args(["tessellate", &format!("patches/{set}.ron"), "-o"])
            .arg(&file);
        for extra in extras {
            command.args(["--extra", extra]);
        }
        assert!(command.output().unwrap().status.success());
        let found = gltf::Gltf::from_slice(&std::fs::read(&file).unwrap()).unwrap();
        let blob = found.blob.as_deref();
        for extra in extras {
            let group = found.nodes().find(|n| n.name() == Some(extra));
            let group = group.unwrap_or_else(|| panic!("no node {extra}"));
            for primitive in group
                .children()
                .flat_map(|child| child.mesh().unwrap().primitives().collect::<Vec<_>>())
            {
                let mode = match *extra {
                    "seams" | "isolines" => gltf::mesh::Mode::LineStrip,
                    "worst" => gltf::mesh::Mode::Points,
                    _ => gltf::mesh::Mode::Lines,
                };
                assert_eq!(primitive.mode(), mode);
                let reader = primitive.reader(|_| blob);
                let points: Vec<[f32; 3]> = reader.read_positions().unwrap().collect();
                assert!(!points.is_empty());
                // Planes of 100 mm: nothing stands far off.
                assert!(points.iter().flatten().all(|c| c.abs() < 300.0));
            }
        }
    }
}
