//! The audit: clean meshes are proved anew, tampered ones are found out.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use std::path::{Path, PathBuf};

use chordwise::mesh::{Audit, Evidence, Fault, Finding, Meshed};
use chordwise::patch_set::PatchSet;
use chordwise::sampling::Limits;
use chordwise::scalar::{Point, Tolerance, Vector};

fn root() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR"))
}

fn set(name: &str) -> PatchSet {
    PatchSet::read(root().join("patches").join(name))
        .unwrap()
        .set
}

struct Case {
    set: PatchSet,
    made: Meshed,
    evidence: Evidence,
    chord: f64,
}

fn case(name: &str) -> Case {
    let set = set(name);
    let chord = set.tolerances().chord.get();
    let limits = Limits::new(chord, None, None);
    let made = Meshed::with_evidence(&set, &limits, |_| true, |_| ()).unwrap();
    let evidence = Evidence::of(&made.mesh).unwrap();
    Case {
        set,
        made,
        evidence,
        chord,
    }
}

fn audit(case: &Case) -> Audit {
    Audit::of(
        &case.set,
        &case.evidence,
        Tolerance::new(case.chord).unwrap(),
    )
    .unwrap()
}

/// A mesh point inside a patch, its faces, and the mean normal of these.
fn inner(evidence: &Evidence) -> (u32, Vec<usize>, Vector) {
    let uses = |point: u32| -> Vec<(usize, [f64; 2])> {
        evidence
            .faces
            .iter()
            .enumerate()
            .filter_map(|(f, face)| {
                let k = face.points.iter().position(|&p| p == point)?;
                Some((f, face.places[k]))
            })
            .collect()
    };
    let count = u32::try_from(evidence.points.len()).unwrap();
    (0..count)
        .rev()
        .find_map(|point| {
            let uses = uses(point);
            let same = uses
                .iter()
                .all(|(_, place)| place.map(f64::to_bits) == uses[0].1.map(f64::to_bits));
            let inside =
                uses.len() >= 5 && same && uses[0].1.iter().all(|t| (0.2..0.8).contains(t));
            inside.then(|| {
                let faces: Vec<usize> = uses.iter().map(|u| u.0).collect();
                let normal = faces.iter().map(|&f| normal(evidence, f)).sum::<Vector>();
                (point, faces, normal.normalize())
            })
        })
        .unwrap()
}

fn normal(evidence: &Evidence, face: usize) -> Vector {
    let [a, b, c] = evidence.faces[face]
        .points
        .map(|p| evidence.points[p as usize]);
    (b - a).cross(&(c - a)).normalize()
}

fn named<'a>(audit: &'a Audit, name: &str) -> Vec<&'a Finding> {
    audit
        .findings
        .iter()
        .filter(|f| f.fault.name() == name)
        .collect()
}

fn kinds(audit: &Audit) -> Vec<&'static str> {
    let mut kinds: Vec<_> = audit.findings.iter().map(|f| f.fault.name()).collect();
    kinds.sort_unstable();
    kinds.dedup();
    kinds
}

/// Sets the audit proves within the chord, but not yet closely: round the tip
/// of the cone its bracket stays 1.22 wide.
const LOOSE: [&str; 1] = ["cone.ron"];

/// Every shipped set is proved anew, and the two proofs agree: each figure is
/// above what the other attained.
#[test]
fn shipped_sets_are_proved_anew() {
    for file in std::fs::read_dir(root().join("patches")).unwrap() {
        let name = file.unwrap().file_name().into_string().unwrap();
        if Path::new(&name).extension().is_none_or(|e| e != "ron") {
            continue;
        }
        let case = case(&name);
        let audit = audit(&case);
        let made = &case.made.deviation;
        println!(
            "{name}: {} triangles, made {:.6} / {:.6}, audited {:.6} / {:.6}",
            audit.triangles,
            made.proved(),
            made.to_mesh.attained,
            audit.proved(),
            audit.to_mesh.attained
        );
        assert!(audit.findings.is_empty(), "{name}: {:?}", audit.findings);
        assert!(audit.absent.is_empty(), "{name}: {:?}", audit.absent);
        assert!(audit.proved() <= case.chord, "{name}");
        // An attained figure is a computed one: on flat sets it is all rounding.
        let rounding = 1e-9 * case.chord;
        assert!(
            audit.to_mesh.proved + rounding >= made.to_mesh.attained,
            "{name}"
        );
        assert!(made.proved() + rounding >= audit.to_mesh.attained, "{name}");
        if made.to_mesh.attained > 0.5 * case.chord {
            let tight = audit.proved() <= 1.03 * audit.to_mesh.attained;
            assert!(tight || LOOSE.contains(&name.as_str()), "{name}");
            assert!(
                audit.to_mesh.attained >= 0.97 * made.to_mesh.attained,
                "{name}"
            );
        }
    }
}

/// Dense sampling, with distances of its own, does not refute the figure.
#[test]
fn sampling_does_not_refute_the_audit() {
    let case = case("saddle.ron");
    let audit = audit(&case);
    let surface = &case.set.pieces()[0].surface;
    let mut most = 0.0_f64;
    for i in 0..=150 {
        for j in 0..=150 {
            let point = surface.eval(f64::from(i) / 150.0, f64::from(j) / 150.0);
            most = most.max(case.made.mesh.distance(&point));
        }
    }
    assert!(most <= audit.to_mesh.proved);
    assert!(most >= 0.9 * audit.to_mesh.attained);
}

#[test]
fn a_moved_vertex_is_found_and_placed() {
    for (part, deviates) in [(2.0, true), (-0.5, false)] {
        let mut case = case("bspline.ron");
        let (point, faces, normal) = inner(&case.evidence);
        let old = case.evidence.points[point as usize];
        let step = part * case.chord;
        case.evidence.points[point as usize] = old + normal * step;
        let audit = audit(&case);
        let off = named(&audit, "off_surface");
        assert_eq!(off.len(), 1, "{:?}", audit.findings);
        let Fault::OffSurface {
            distance,
            triangles,
            allowed,
        } = off[0].fault
        else {
            panic!()
        };
        assert!((distance - step.abs()).abs() < 1e-9);
        assert!(allowed < 1e-9);
        assert_eq!(triangles, faces.len());
        assert!(faces.contains(&off[0].triangle.unwrap()));
        assert!((off[0].point.unwrap() - old).norm() < 1.01 * step.abs());
        let farther = named(&audit, "deviates");
        assert_eq!(deviates, !farther.is_empty());
        for finding in farther {
            assert!(faces.contains(&finding.triangle.unwrap()), "{finding:?}");
        }
        let foreign = kinds(&audit)
            .into_iter()
            .find(|k| !["off_surface", "deviates", "unproved"].contains(k));
        assert_eq!(foreign, None);
    }
}

/// Kinds of findings, without those of triangles beside a fault that were
/// proved by their neighbours and no longer are.
fn kinds_but_proof(audit: &Audit) -> Vec<&'static str> {
    let mut kinds = kinds(audit);
    kinds.retain(|kind| !["deviates", "unproved"].contains(kind));
    kinds
}

#[test]
fn a_missing_triangle_is_a_hole_at_its_place() {
    let mut case = case("bspline.ron");
    let (_, faces, _) = inner(&case.evidence);
    let gone = case.evidence.faces.remove(faces[0]);
    let audit = audit(&case);
    let holes = named(&audit, "hole");
    assert_eq!(holes.len(), 1, "{:?}", audit.findings);
    let [u, v] = holes[0].place.unwrap();
    let mean = |axis: usize| gone.places.iter().map(|p| p[axis]).sum::<f64>() / 3.0;
    assert!((u - mean(0)).abs() < 1e-9 && (v - mean(1)).abs() < 1e-9);
    let [a, b, c] = gone.places;
    let area = ((b[0] - a[0]) * (c[1] - a[1]) - (c[0] - a[0]) * (b[1] - a[1])) / 2.0;
    let Fault::Hole { share } = holes[0].fault else {
        panic!()
    };
    let patch = &case.set.patches()[0];
    let whole = |breaks: &[f64]| breaks[breaks.len() - 1] - breaks[0];
    let share_of = area.abs() / (whole(&patch.breaks_u) * whole(&patch.breaks_v));
    assert!((share - share_of).abs() < 1e-9);
    let cracks = named(&audit, "crack");
    assert_eq!(cracks.len(), 1);
    assert!(matches!(cracks[0].fault, Fault::Crack { edges: 3 }));
    assert_eq!(kinds_but_proof(&audit), ["crack", "hole"]);
}

/// Border triangles and pole triangles, every one in turn: each leaves a hole.
#[test]
fn any_missing_triangle_is_found() {
    for name in ["three_sided_cap.ron", "ruled.ron"] {
        let whole = case(name);
        for gone in (0..whole.evidence.faces.len()).step_by(3) {
            let mut evidence = whole.evidence.clone();
            let face = evidence.faces.remove(gone);
            let chord = Tolerance::new(whole.chord).unwrap();
            let audit = Audit::of(&whole.set, &evidence, chord).unwrap();
            assert!(
                !named(&audit, "hole").is_empty(),
                "{name}: triangle {gone}, {face:?}: {:?}",
                audit.findings
            );
        }
    }
}

#[test]
fn a_doubled_triangle_is_named_with_its_double() {
    let mut case = case("bspline.ron");
    let mut again = case.evidence.faces[7];
    again.points.rotate_left(1);
    again.places.rotate_left(1);
    case.evidence.faces.push(again);
    let audit = audit(&case);
    assert_eq!(audit.findings.len(), 1, "{:?}", audit.findings);
    assert_eq!(audit.findings[0].fault, Fault::Doubled { first: 7 });
    assert_eq!(
        audit.findings[0].triangle,
        Some(case.evidence.faces.len() - 1)
    );
}

/// A triangle laid over others with other corners is no double, but the patch
/// is then covered twice there.
#[test]
fn an_overlap_is_found() {
    let mut case = case("ruled.ron");
    let corner = |u: f64, v: f64| {
        let near = |place: &[f64; 2]| (place[0] - u).abs() < 1e-12 && (place[1] - v).abs() < 1e-12;
        case.evidence
            .faces
            .iter()
            .find_map(|face| {
                let k = face.places.iter().position(near)?;
                Some((face.points[k], face.places[k]))
            })
            .unwrap()
    };
    let corners = [corner(0.0, 0.0), corner(1.0, 0.0), corner(1.0, 1.0)];
    let mut face = case.evidence.faces[0];
    face.points = corners.map(|c| c.0);
    face.places = corners.map(|c| c.1);
    if case.set.patches()[0].flipped {
        face.points.swap(1, 2);
        face.places.swap(1, 2);
    }
    case.evidence.faces.push(face);
    let audit = audit(&case);
    let overlaps = named(&audit, "overlap");
    assert_eq!(overlaps.len(), 1, "{:?}", audit.findings);
    let Fault::Overlap { share } = overlaps[0].fault else {
        panic!()
    };
    assert!((share - 0.5).abs() < 1e-9);
}

#[test]
fn a_turned_triangle_is_found() {
    let mut case = case("bspline.ron");
    case.evidence.faces[11].points.swap(0, 1);
    case.evidence.faces[11].places.swap(0, 1);
    let audit = audit(&case);
    assert_eq!(audit.findings.len(), 1, "{:?}", audit.findings);
    assert_eq!(audit.findings[0].fault, Fault::TurnedOver);
    assert_eq!(audit.findings[0].triangle, Some(11));
}

/// A vertex of one triangle comes loose: inside a patch by a move, on a seam
/// by nothing but a number of its own.
#[test]
fn a_crack_is_found() {
    let mut case1 = case("bspline.ron");
    let (point, faces, normal) = inner(&case1.evidence);
    let place: Point = case1.evidence.points[point as usize] + normal * (0.1 * case1.chord);
    loosen(&mut case1.evidence, point, faces[0], place);
    let found = audit(&case1);
    assert_eq!(kinds_but_proof(&found), ["crack", "off_surface"]);
    let cracks = named(&found, "crack");
    assert!(matches!(cracks[0].fault, Fault::Crack { edges: 4 }));
    assert!((cracks[0].point.unwrap() - place).norm() < 100.0);

    let mut case2 = case("mirrored_pair.ron");
    let patches_at = |point: u32| {
        let faces = case2.evidence.faces.iter().enumerate();
        faces
            .filter(|(_, f)| f.points.contains(&point))
            .map(|(i, f)| (f.patch, i))
            .collect::<Vec<_>>()
    };
    let count = u32::try_from(case2.evidence.points.len()).unwrap();
    let (seam, face) = (0..count)
        .find_map(|p| {
            let at = patches_at(p);
            let two = at.iter().any(|a| a.0 != at[0].0);
            two.then_some((p, at[0].1))
        })
        .unwrap();
    let same = case2.evidence.points[seam as usize];
    loosen(&mut case2.evidence, seam, face, same);
    let found = audit(&case2);
    assert_eq!(kinds(&found), ["crack"]);
}

fn loosen(evidence: &mut Evidence, point: u32, face: usize, place: Point) {
    let fresh = u32::try_from(evidence.points.len()).unwrap();
    evidence.points.push(place);
    for p in &mut evidence.faces[face].points {
        if *p == point {
            *p = fresh;
        }
    }
}

#[test]
fn a_wrong_patch_is_found_on_both() {
    let mut case = case("mirrored_pair.ron");
    let last = u32::try_from(case.evidence.patches.len() - 1).unwrap();
    let from = case.evidence.faces[5].patch;
    case.evidence.faces[5].patch = if from == last { 0 } else { last };
    let audit = audit(&case);
    let off = named(&audit, "off_surface");
    assert!(off.iter().all(|f| f.triangle == Some(5)));
    assert!(!off.is_empty());
    let hole = named(&audit, "hole");
    assert_eq!(hole.len(), 1);
    assert_eq!(hole[0].patch, case.evidence.patches[from as usize]);
}

#[test]
fn exchanged_parameters_are_found() {
    let mut case = case("bspline.ron");
    for place in &mut case.evidence.faces[20].places {
        place.swap(0, 1);
    }
    let audit = audit(&case);
    let wrong = |f: &&&Finding| f.triangle == Some(20);
    let kinds: Vec<&str> = audit
        .findings
        .iter()
        .filter(|f| wrong(&f))
        .map(|f| f.fault.name())
        .collect();
    assert!(
        kinds.contains(&"off_surface") || kinds.contains(&"outside_patch"),
        "{:?}",
        audit.findings
    );
    assert!(!named(&audit, "hole").is_empty());
}

#[test]
fn another_sets_mesh_is_found() {
    let mut saddle = case("saddle.ron");
    saddle.set = set("bspline.ron");
    let found = audit(&saddle);
    assert_eq!(found.findings[0].fault, Fault::UnknownPatch);
    assert_eq!(found.findings[0].patch, saddle.evidence.patches[0]);
    assert_eq!(found.patches, 0);

    // The same names, another shape.
    let text =
        |radius: f64| format!("(patches: [(name: \"ball\", surface: Sphere(radius: {radius}))])");
    let of = |radius: f64| PatchSet::from_ron(&text(radius), "ball.ron").unwrap().set;
    let (small, large) = (of(10.0), of(10.5));
    let made =
        Meshed::with_evidence(&small, &Limits::new(0.1, None, None), |_| true, |_| ()).unwrap();
    let evidence = Evidence::of(&made.mesh).unwrap();
    let found = Audit::of(&large, &evidence, Tolerance::new(0.1).unwrap()).unwrap();
    assert!(!named(&found, "off_surface").is_empty());
    assert!(!named(&found, "deviates").is_empty());
    assert!(found.to_mesh.attained > 0.5);
}

/// One panel of a set is audited alone: its seams are no cracks, the other
/// patches are named as absent.
#[test]
fn a_part_of_a_set_is_whole_in_itself() {
    let set = set("mirrored_pair.ron");
    let chord = set.tolerances().chord.get();
    let first = set.patches()[0].pieces.clone();
    let limits = Limits::new(chord, None, None);
    let wanted = |piece: chordwise::patch_set::PieceId| first.contains(&piece.index());
    let made = Meshed::with_evidence(&set, &limits, wanted, |_| ()).unwrap();
    let evidence = Evidence::of(&made.mesh).unwrap();
    let audit = Audit::of(&set, &evidence, Tolerance::new(chord).unwrap()).unwrap();
    assert!(audit.findings.is_empty(), "{:?}", audit.findings);
    assert_eq!(audit.absent.len(), set.patches().len() - 1);
}

/// The audit stands on the kernel, the set and the pairing of its edges only.
#[test]
fn the_audit_shares_no_code_with_the_tessellator() {
    let mut files = 0;
    for file in std::fs::read_dir(root().join("src/mesh/audit")).unwrap() {
        let text = std::fs::read_to_string(file.unwrap().path()).unwrap();
        let code = text.lines().filter(|l| !l.trim_start().starts_with("//"));
        for line in code {
            assert!(!line.contains("tessellation::"), "{line}");
            assert!(!line.contains("sampling::"), "{line}");
        }
        files += 1;
    }
    assert!(files > 5);
}
