//! Meshes by size and shape: what is asked is what comes out, and what is told of
//! it is true.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use std::f64::consts::PI;
use std::fmt::Write as _;

use chordwise::mesh::{Audit, Evidence, Fault, Measures};
use chordwise::patch_set::PatchSet;
use chordwise::scalar::Tolerance;
use chordwise::sizing::{Cause, SizedMesh, Sizing, SizingError};

fn set(text: &str) -> PatchSet {
    PatchSet::from_ron(text, "test.ron").unwrap().set
}

fn shipped(name: &str) -> PatchSet {
    let path = format!("{}/patches/{name}.ron", env!("CARGO_MANIFEST_DIR"));
    PatchSet::read(path).unwrap().set
}

fn sized(set: &PatchSet, sizing: &Sizing) -> SizedMesh {
    let budget = chordwise::mesh::Budget::default();
    SizedMesh::within(set, sizing, &budget, (|_| true, true), |_| ()).unwrap()
}

/// A panel z = x^2 / 400 - y^2 / 600 over 120 x 60, cut at these x, and between the
/// first two at these y besides: its neighbours have whole edges there.
fn cut_up(name: &str, xs: &[f64], ys: &[f64]) -> String {
    let mut patches = String::new();
    let whole = [0.0, 60.0];
    for (i, x) in xs.windows(2).enumerate() {
        let cuts = if i == 0 { ys } else { &whole[..] };
        for (j, y) in cuts.windows(2).enumerate() {
            // Blossoms of x^2 and y^2: the net of a quadratic is exact.
            let polar = |t: &[f64], k: usize| match k {
                0 => (t[0], t[0] * t[0]),
                1 => ((t[0] + t[1]) / 2.0, t[0] * t[1]),
                _ => (t[1], t[1] * t[1]),
            };
            let mut net = String::new();
            for a in 0..3 {
                net += "[";
                for b in 0..3 {
                    let ((px, xx), (py, yy)) = (polar(x, a), polar(y, b));
                    write!(net, "({px:?}, {py:?}, {:?}),", xx / 400.0 - yy / 600.0).unwrap();
                }
                net += "],";
            }
            write!(
                patches,
                "(name: \"{name}/{i} {j}\", surface: Bezier(net: [{net}])),"
            )
            .unwrap();
        }
    }
    patches
}

fn slivers() -> PatchSet {
    let xs = [0.0, 40.0, 40.02, 40.5, 80.0, 80.3, 120.0];
    let ys = [0.0, 20.0, 20.015, 45.0, 45.4, 60.0];
    set(&format!("(patches: [{}])", cut_up("skin", &xs, &ys)))
}

fn well_shaped(made: &SizedMesh, what: &str) {
    let figures = &made.figures;
    assert!(figures.share_above_30 >= 0.99, "{what}: {figures:?}");
    assert!(
        figures.forced.iter().all(|f| f.cause != Cause::Unknown),
        "{what}: {figures:?}"
    );
    assert!(figures.mean_aspect <= 1.15, "{what}: {figures:?}");
    assert!(
        (figures.mean_to_size - 1.0).abs() <= 0.05,
        "{what}: {figures:?}"
    );
}

/// Areas and volumes in closed form (handbook): 4 pi R^2, 4/3 pi R^3; 4 pi^2 R r,
/// 2 pi^2 R r^2. A facet of edge h misses about h^2 / R^2 of them.
#[test]
fn a_sphere_and_a_torus_are_round_and_closed() {
    let made = sized(&shipped("sphere"), &Sizing::new(40.0));
    well_shaped(&made, "sphere");
    let mesh = &made.meshed.mesh;
    let measures = Measures::of(mesh);
    assert!(measures.closed && measures.euler == 2 && measures.degenerate == 0);
    let missing = 1.0 - measures.area / (4.0 * PI * 500.0 * 500.0);
    assert!((1e-4..2e-3).contains(&missing), "{missing}");
    let volume = measures.volume.unwrap() / (4.0 / 3.0 * PI * 500.0_f64.powi(3));
    assert!((1.0 - volume).abs() < 4e-3, "{volume}");
    for point in &mesh.points {
        assert!((point.coords.norm() - 500.0).abs() < 1e-9);
    }
    // Sagitta of the circumscribed circle of an equilateral triangle: h^2 / (6 R).
    let proved = made.meshed.deviation.proved();
    let expected = 40.0_f64.powi(2) / (6.0 * 500.0);
    assert!((expected..3.0 * expected).contains(&proved), "{proved}");

    let made = sized(&shipped("torus"), &Sizing::new(8.0));
    well_shaped(&made, "torus");
    let measures = Measures::of(&made.meshed.mesh);
    assert!(measures.closed && measures.euler == 0);
    let missing = 1.0 - measures.area / (4.0 * PI * PI * 200.0 * 50.0);
    assert!((1e-4..1e-2).contains(&missing), "{missing}");
}

#[test]
fn the_front_quarter_is_well_shaped_and_its_kept_edges_stay() {
    let set = shipped("front_quarter");
    let made = sized(&set, &Sizing::new(12.0));
    well_shaped(&made, "front quarter");
    assert_eq!(made.figures.left, 0);
    let mesh = &made.meshed.mesh;
    let measures = Measures::of(mesh);
    // As open as the set, and no crack anywhere.
    assert_eq!(measures.open_loops, made.meshed.topology.open_loops().len());
    assert_eq!(measures.non_manifold_edges, 0);
    // No triangle reaches over the border of its panel.
    let parts = mesh.corner_parts.as_ref().unwrap();
    for part in &mesh.parts {
        for t in part.triangles.clone() {
            let panels = parts[t].map(|p| mesh.parts[p as usize].panel);
            assert_eq!(panels, [part.panel; 3]);
        }
    }
    let deviation = &made.meshed.deviation;
    let tight = deviation.to_mesh.proved / deviation.to_mesh.attained;
    assert!((1.0..1.1).contains(&tight), "{tight}");
    // Where a border is hollow the mesh is farther from the surface than the surface
    // from the mesh; no figure is attained for that.
    assert!(deviation.to_surface < 1.6 * deviation.to_mesh.attained);
}

/// Narrow patches (0.02 to 0.5 wide) and short edges of patches (0.015) beside a
/// size of 3: nothing of them is to be seen in the mesh.
#[test]
fn slivers_and_short_edges_leave_no_trace() {
    let made = sized(&slivers(), &Sizing::new(3.0));
    well_shaped(&made, "slivers");
    let figures = &made.figures;
    assert_eq!(figures.left, 0);
    assert!(figures.below_20 == 0, "{figures:?}");
    assert!(figures.shortest > 1.5, "{figures:?}");
    let plain = set(&format!(
        "(patches: [{}])",
        cut_up("skin", &[0.0, 120.0], &[0.0, 60.0])
    ));
    let plain = sized(&plain, &Sizing::new(3.0));
    let count = |made: &SizedMesh| f64::from(u32::try_from(made.spots.len()).unwrap());
    let ratio = count(&made) / count(&plain);
    assert!((0.95..1.05).contains(&ratio), "{ratio}");
    assert_eq!(Measures::of(&made.meshed.mesh).open_loops, 1);
}

/// Every place of the surface, looked at densely, is within what is proved.
#[test]
fn what_is_proved_is_not_refuted() {
    for set in [slivers(), shipped("torus"), shipped("cone")] {
        let made = sized(&set, &Sizing::new(9.0));
        let proved = made.meshed.deviation.to_mesh.proved;
        let mut most = 0.0_f64;
        for piece in set.pieces() {
            for k in 0..144 {
                let at = |k: i32| (f64::from(k) + 0.37) / 12.0;
                let point = piece.surface.eval(at(k / 12).min(1.0), at(k % 12).min(1.0));
                most = most.max(made.meshed.mesh.distance(&point));
            }
        }
        assert!(most <= proved, "{most} {proved}");
        assert!(made.meshed.deviation.to_mesh.attained <= proved);
    }
}

#[test]
fn a_chord_is_held_and_sizes_grow_slowly() {
    let set = shipped("torus");
    for chord in [0.1, 0.02] {
        let asked = Sizing {
            chord: Some(chord),
            ..Sizing::new(20.0)
        };
        let made = sized(&set, &asked);
        assert!(made.meshed.deviation.proved() <= chord);
        assert!(made.figures.growth <= 1.2, "{}", made.figures.growth);
        well_shaped(&made, "torus with a chord");
    }
}

#[test]
fn panels_have_sizes_of_their_own() {
    let text = |sizes: &str| {
        let a = cut_up("left", &[0.0, 60.0], &[0.0, 60.0]);
        let b = cut_up("right", &[60.0, 120.0], &[0.0, 60.0]);
        format!("(patches: [{a}{b}], sizes: [{sizes}])")
    };
    let fine = set(&text("(of: \"r*\", size: 2)"));
    let made = sized(&fine, &Sizing::new(6.0));
    assert!(made.figures.growth <= 1.2, "{}", made.figures.growth);
    well_shaped(&made, "two sizes");
    let mean = |panel: &str| {
        let mesh = &made.meshed.mesh;
        let part = mesh
            .parts
            .iter()
            .find(|p| p.name.starts_with(panel))
            .unwrap();
        let (mut sum, mut count) = (0.0, 0.0);
        for t in part.triangles.clone() {
            let [a, b, c] = mesh.triangle_corners(t);
            // Away from the border of the panels, where sizes grow.
            if (a.x - 60.0).abs() > 45.0 {
                sum += (b - a).norm() + (c - b).norm() + (a - c).norm();
                count += 3.0;
            }
        }
        sum / count
    };
    assert!((mean("right") - 2.0).abs() < 0.2, "{}", mean("right"));
    assert!((mean("left") - 6.0).abs() < 0.6, "{}", mean("left"));
    let fault = PatchSet::from_ron(&text("(of: \"r*\", size: 0)"), "x.ron").unwrap_err();
    assert!(fault.to_string().contains("size is 0"), "{fault}");
}

#[test]
fn threads_do_not_matter() {
    let set = shipped("front_quarter");
    let at = |threads: usize| {
        let pool = rayon::ThreadPoolBuilder::new().num_threads(threads);
        pool.build().unwrap().install(|| {
            let made = sized(&set, &Sizing::new(25.0));
            let mesh = made.meshed.mesh;
            let points: Vec<u64> = mesh
                .points
                .iter()
                .flat_map(|p| [p.x.to_bits(), p.y.to_bits(), p.z.to_bits()])
                .collect();
            let proved = made.meshed.deviation.proved().to_bits();
            (points, mesh.triangles, proved, made.sizes.len())
        })
    };
    assert!(at(1) == at(2));
}

/// The auditor takes such a mesh, and finds what is done to it.
#[test]
fn the_audit_holds_and_finds() {
    let set = slivers();
    let made = sized(&set, &Sizing::new(5.0));
    let evidence = Evidence::of(&made.meshed.mesh).unwrap();
    let chord = Tolerance::new(1.01 * made.meshed.deviation.proved()).unwrap();
    let audit = |evidence: &Evidence| Audit::of(&set, evidence, chord).unwrap();
    let sound = audit(&evidence);
    assert!(sound.findings.is_empty(), "{:?}", sound.findings);
    assert!(sound.proved() <= chord.get() && sound.to_mesh.attained > 0.0);
    let has = |evidence: &Evidence, name: &str| {
        let found = audit(evidence);
        assert!(
            found.findings.iter().any(|f| f.fault.name() == name),
            "no {name}: {:?}",
            found.findings
        );
    };
    let middle = evidence.faces.len() / 2;
    let mut moved = evidence.clone();
    let point = moved.faces[middle].points[0] as usize;
    moved.points[point].z += 2.0 * chord.get();
    has(&moved, "off_surface");
    let mut missing = evidence.clone();
    missing.faces.remove(middle);
    has(&missing, "crack");
    let mut doubled = evidence.clone();
    doubled.faces.push(doubled.faces[middle]);
    has(&doubled, "doubled");
    let mut turned = evidence.clone();
    let face = &mut turned.faces[middle];
    face.points.swap(0, 1);
    face.places.swap(0, 1);
    if let Some(own) = &mut face.corner_patches {
        own.swap(0, 1);
    }
    has(&turned, "turned_over");
    let tight = Tolerance::new(0.5 * made.meshed.deviation.to_mesh.attained).unwrap();
    let found = Audit::of(&set, &evidence, tight).unwrap().findings;
    let deviates = |f: &chordwise::mesh::Finding| matches!(f.fault, Fault::Deviates { .. });
    assert!(found.iter().any(deviates));
}

/// A corner of 12 degrees between open edges, and an edge of a tenth of the size:
/// bad angles there are told with their cause, and only there.
#[test]
fn what_geometry_forces_is_told() {
    let wedge = set(
        r#"(patches: [(name: "w", surface: Bezier(net: [[(0, 0, 0), (0.5, -0.5, 0)], [(100, 21, 0), (100, 0, 0)]]))])"#,
    );
    let made = sized(&wedge, &Sizing::new(5.0));
    let forced = &made.figures.forced;
    assert!(forced.len() < 20, "{forced:?}");
    for of in forced {
        assert!(of.at[0] < 10.0, "{of:?}");
        assert!(of.cause != Cause::Unknown, "{of:?}");
    }
    assert!(made.figures.share_above_30 > 0.97, "{:?}", made.figures);
}

#[test]
fn what_cannot_be_asked_is_refused() {
    let set = shipped("plane");
    let refused = |sizing: Sizing| {
        SizedMesh::new(&set, &sizing, |_| true, |_| ())
            .map(|_| ())
            .unwrap_err()
    };
    assert!(matches!(
        refused(Sizing::new(f64::NAN)),
        SizingError::Size(_)
    ));
    let least = Sizing {
        min_edge: Some(9.0),
        ..Sizing::new(5.0)
    };
    assert!(matches!(refused(least), SizingError::MinEdge { .. }));
    let growth = Sizing {
        growth: 1.0,
        ..Sizing::new(5.0)
    };
    assert!(matches!(refused(growth), SizingError::Growth(_)));
    assert!(matches!(
        refused(Sizing::new(1e-5)),
        SizingError::Mesh(chordwise::mesh::MeshError::TooMany { .. })
    ));
}
