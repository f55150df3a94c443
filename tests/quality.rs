//! Shape and size of whole meshes: figures against closed forms, places, and
//! what the program tells of them.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use approx::assert_relative_eq;
use assert_cmd::Command;
use chordwise::mesh::{Mesh, Meshed};
use chordwise::patch_set::PatchSet;
use chordwise::quality::{Asked, Distribution, Measure, Quality, Target, WORST};
use chordwise::report::QualityReport;
use chordwise::sampling::Limits;
use chordwise::scalar::{Point, Vector};
use serde_json::Value;

#[path = "formats/shapes.rs"]
mod shapes;

fn whole(mesh: &Mesh) -> Quality {
    Quality::of(mesh, &Asked::default())
}

fn of(found: &Quality, measure: Measure) -> &Distribution {
    found.get(measure).unwrap()
}

/// Squares cut in halves: sides 1, 1, sqrt 2. Edges of n x m cells: n (m + 1) +
/// m (n + 1) sides and n m diagonals; all but 2 (n + m) are inner.
#[test]
fn a_grid_of_halved_squares_is_what_it_is_by_hand() {
    let (n, m) = (7_u32, 5_u32);
    let mesh = shapes::grid(n, m);
    let found = whole(&mesh);
    let two = 2.0_f64.sqrt();
    let triangles = (2 * n * m) as usize;
    for (measure, meant) in [
        (Measure::MinimumAngle, 45.0),
        (Measure::MaximumAngle, 90.0),
        (Measure::EdgeRatio, two),
        (Measure::Shape, 3.0_f64.sqrt() / 2.0),
        (Measure::ScaledJacobian, two / 3.0_f64.sqrt()),
    ] {
        let d = of(&found, measure);
        assert_eq!(d.count, triangles, "{measure:?}");
        for figure in [
            d.minimum,
            d.one_percent,
            d.mean,
            d.ninety_nine_percent,
            d.maximum,
        ] {
            assert_relative_eq!(figure, meant, max_relative = 1e-14);
        }
        assert_eq!(d.worst.len(), WORST);
        assert_eq!(d.counts.iter().sum::<usize>(), triangles);
    }
    assert_eq!(of(&found, Measure::EdgeRatio).outside, triangles);
    assert_eq!(of(&found, Measure::MinimumAngle).outside, 0);
    let edges = (n * (m + 1) + m * (n + 1) + n * m) as usize;
    let lengths = of(&found, Measure::EdgeLength);
    assert_eq!(lengths.count, edges);
    let sides = f64::from(n * (m + 1) + m * (n + 1));
    assert_relative_eq!(
        lengths.mean,
        (sides + f64::from(n * m) * two) / (sides + f64::from(n * m)),
        max_relative = 1e-14
    );
    let growth = of(&found, Measure::Growth);
    assert_eq!(growth.count, edges - 2 * (n + m) as usize);
    assert_relative_eq!(growth.maximum, 1.0, max_relative = 1e-14);
    assert_relative_eq!(
        of(&found, Measure::Spread).maximum,
        two,
        max_relative = 1e-14
    );
    assert!(found.get(Measure::Size).is_none());
    assert_relative_eq!(found.shortest.unwrap().value, 1.0, max_relative = 1e-15);
}

/// Two triangles on one edge, one with edges 1, the other stretched to mean edge
/// (1 + 2 sqrt(9.25)) / 3.
#[test]
fn growth_and_size_are_told_where_they_are() {
    let h = 3.0_f64.sqrt() / 2.0;
    let mut mesh = shapes::loose(4, vec![[0, 1, 2], [1, 0, 3]]);
    mesh.points = vec![
        Point::new(0.0, 0.0, 0.0),
        Point::new(1.0, 0.0, 0.0),
        Point::new(0.5, h, 0.0),
        Point::new(0.5, -3.0, 0.0),
    ];
    let asked = Asked {
        size: Some(Target::Points(&[1.0, 1.0, 1.0, 5.0])),
        growth: Some(1.2),
    };
    let found = Quality::of(&mesh, &asked);
    let long = 9.25_f64.sqrt();
    let growth = of(&found, Measure::Growth);
    assert_eq!(growth.count, 1);
    assert_relative_eq!(
        growth.maximum,
        (1.0 + 2.0 * long) / 3.0,
        max_relative = 1e-14
    );
    assert_eq!(growth.worst[0].at, Point::new(0.5, 0.0, 0.0));
    let size = of(&found, Measure::Size);
    assert_relative_eq!(size.maximum, long / 3.0, max_relative = 1e-14);
    assert_relative_eq!(size.minimum, 1.0, max_relative = 1e-14);
    let grading = of(&found, Measure::Grading);
    assert_eq!(
        (grading.count, grading.worst[0].value.to_bits()),
        (5, 5.0_f64.to_bits())
    );
    assert_eq!(found.asked_growth, Some(1.2));
    let found = Quality::of(
        &mesh,
        &Asked {
            size: Some(Target::Everywhere(2.0)),
            growth: None,
        },
    );
    assert_relative_eq!(of(&found, Measure::Size).minimum, 0.5, max_relative = 1e-14);
    assert_relative_eq!(
        of(&found, Measure::Spread).maximum,
        long,
        max_relative = 1e-14
    );
}

/// A repeated corner, three corners on a line, a point that nobody uses, and a
/// needle: no figure is anything but a number, and none of JSON is null.
#[test]
fn flat_triangles_are_counted_apart() {
    let mut mesh = shapes::loose(
        6,
        vec![[0, 1, 2], [0, 0, 1], [0, 1, 3], [3, 3, 3], [0, 1, 4]],
    );
    mesh.points = vec![
        Point::new(0.0, 0.0, 0.0),
        Point::new(1.0, 0.0, 0.0),
        Point::new(0.0, 1.0, 0.0),
        Point::new(2.0, 0.0, 0.0),
        Point::new(0.5, 1e-9, 0.0),
        Point::new(9.0, 9.0, 9.0),
    ];
    let found = whole(&mesh);
    assert_eq!(found.flat, 3);
    let triangles: Vec<usize> = found.flat_at.iter().map(|w| w.triangle).collect();
    assert_eq!(triangles, [1, 2, 3]);
    for d in &found.distributions {
        assert!(d.minimum.is_finite() && d.maximum.is_finite() && d.mean.is_finite());
        assert!(
            d.minimum <= d.mean && d.mean <= d.maximum,
            "{:?}",
            d.measure
        );
    }
    assert_eq!(of(&found, Measure::AspectRatio).count, 2);
    assert_eq!(of(&found, Measure::AspectRatio).worst[0].triangle, 4);
    let told = serde_json::to_string(&QualityReport::new(&mesh, &found)).unwrap();
    // There is no range for edges and growth, and no growth asked for.
    assert_eq!(told.matches("null").count(), 4, "{told}");
    let all_flat = shapes::loose(2, vec![[0, 1, 0], [1, 1, 1]]);
    let found = whole(&all_flat);
    assert_eq!((found.flat, found.get(Measure::Shape)), (2, None));
    assert!(found.get(Measure::EdgeLength).is_none());
}

/// Scale and place change no ratio, and the order of triangles no figure but the
/// mean's last bits.
#[test]
fn figures_keep_under_motion_and_order() {
    let mesh = shapes::sphere(24, 9, 1.0, Vector::zeros());
    let found = whole(&mesh);
    let mut moved = mesh.clone();
    for p in &mut moved.points {
        *p = Point::new(512.0 - 64.0 * p.y, 64.0 * p.x, 64.0 * p.z);
    }
    let mut turned = mesh.clone();
    turned.triangles.reverse();
    for other in [whole(&moved), whole(&turned)] {
        for (a, b) in found.distributions.iter().zip(&other.distributions) {
            if a.measure != Measure::EdgeLength {
                assert_relative_eq!(a.minimum, b.minimum, max_relative = 1e-9);
                assert_relative_eq!(a.mean, b.mean, max_relative = 1e-9);
                assert_relative_eq!(a.maximum, b.maximum, max_relative = 1e-9);
            }
        }
    }
    assert_eq!(found, whole(&mesh));
}

/// Shape is one thing and deviation another: a cylinder meshed as well as can be
/// for its chord has triangles that no range of aspect ratios accepts.
#[test]
fn the_best_mesh_of_a_cylinder_fails_in_shape() {
    let text = r#"(patches: [(name: "pipe", surface: Cylinder(radius: 20, height: 400))])"#;
    let set = PatchSet::from_ron(text, "pipe").unwrap().set;
    let made = Meshed::new(&set, &Limits::new(0.1, None, None), |_| true, |_| ()).unwrap();
    let found = whole(&made.mesh);
    let aspect = of(&found, Measure::AspectRatio);
    assert_eq!(aspect.outside, aspect.count);
    assert!(made.deviation.proved() <= 0.1);
}

fn tessellate(arguments: &[&str]) -> String {
    let folder = tempfile::tempdir().unwrap();
    let root = env!("CARGO_MANIFEST_DIR");
    let output = Command::cargo_bin("chordwise")
        .unwrap()
        .current_dir(folder.path())
        .args([
            "tessellate",
            &format!("{root}/patches/torus.ron"),
            "-o",
            "t.ply",
        ])
        .args(arguments)
        .output()
        .unwrap();
    assert_eq!(output.status.code(), Some(0));
    String::from_utf8(output.stdout).unwrap()
}

#[test]
fn the_program_tells_it_short_or_in_full_alike() {
    let short = tessellate(&[]);
    assert!(short.contains("\nshape       smallest angle "), "{short}");
    assert!(
        short.contains("speed of sound") && !short.contains("quality"),
        "{short}"
    );
    let full = tessellate(&["--quality"]);
    let json: Value =
        serde_json::from_str(&tessellate(&["--quality", "--format", "json"])).unwrap();
    let quality = &json["quality"];
    assert_eq!(quality["whole"], true);
    let measures = quality["measures"].as_array().unwrap();
    assert_eq!(measures.len(), 10);
    for line in measures {
        let worst = line["worst"].as_array().unwrap();
        assert_eq!(worst.len(), WORST);
        assert!(!line["minimum"].is_null() && !line["maximum"].is_null());
        let definition = line["definition"].as_str().unwrap();
        assert!(full.contains(definition), "{definition}");
        for place in worst {
            assert_eq!(place["panel"], "ring");
        }
    }
    assert_eq!(
        full.lines().filter(|l| l.contains(", triangle ")).count(),
        10 * WORST
    );
    let told: Value = serde_json::from_str(&tessellate(&["--format", "json"])).unwrap();
    assert_eq!(told["quality"]["whole"], false);
    assert_eq!(told["quality"]["shortest_edge"], quality["shortest_edge"]);
    assert_eq!(told["deviation"], json["deviation"]);
}
