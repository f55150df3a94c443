//! Every triangle keeps to what was asked: the turn of the normal, the length
//! of edges, the way it faces; at extreme tolerances, sizes and places too.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]
#![allow(
    clippy::cast_precision_loss,
    clippy::cast_possible_truncation,
    reason = "counts far below 2^52"
)]

use chordwise::bezier::BezierPatch;
use chordwise::mesh::{Measures, Meshed};
use chordwise::patch_set::{PatchSet, SetFile, Units};
use chordwise::sampling::Limits;
use chordwise::scalar::{Point, Vector};

mod refute;
use refute::atlas::Atlas;
use refute::chance::Chance;
use refute::verdict::{self, Effort};
use refute::{meshed, shipped, shipped_set};

fn with(set: &PatchSet, chord: f64, angle: Option<f64>, edge: Option<f64>) -> Meshed {
    let limits = Limits::new(chord, angle.map(f64::to_radians), edge);
    Meshed::new(set, &limits, |_| true, |_| ()).unwrap()
}

/// S_u x S_v by difference quotients, outward or not; `None` near a pole.
fn normal(surface: &BezierPatch, [u, v]: [f64; 2]) -> Option<Vector> {
    let h = 1e-6;
    let (u0, u1) = ((u - h).max(0.0), (u + h).min(1.0));
    let (v0, v1) = ((v - h).max(0.0), (v + h).min(1.0));
    let du = (surface.eval(u1, v) - surface.eval(u0, v)) / (u1 - u0);
    let dv = (surface.eval(u, v1) - surface.eval(u, v0)) / (v1 - v0);
    let cross = du.cross(&dv);
    (cross.norm() > 1e-3 * du.norm() * dv.norm()
        && du.norm().min(dv.norm()) > 1e-3 * du.norm().max(dv.norm()))
    .then(|| cross.normalize())
}

/// For every `step`th triangle the place of its three corners on the piece it
/// covers, with the outward normals there, and how far they are off it.
fn corners_on_surface(
    set: &PatchSet,
    made: &Meshed,
    step: usize,
    mut each: impl FnMut(usize, [Option<Vector>; 3], [f64; 3]),
) {
    let mesh = &made.mesh;
    let near = set.tolerances().gap.get();
    for part in &mesh.parts {
        let patch = set.patches().iter().find(|p| p.name == part.name).unwrap();
        let pieces = &set.pieces()[patch.pieces.clone()];
        let whole = Atlas::new(pieces.iter().map(|p| &p.surface), 16);
        let alone: Vec<Atlas> = pieces
            .iter()
            .map(|p| Atlas::new([&p.surface], 16))
            .collect();
        let outward = if patch.flipped { -1.0 } else { 1.0 };
        for t in part.triangles.clone().step_by(step) {
            let [a, b, c] = mesh.triangle_corners(t);
            let middle = Point::from((a.coords + b.coords + c.coords) / 3.0);
            let on = |piece: usize| {
                let feet = [a, b, c].map(|p| alone[piece].foot(&p, f64::INFINITY));
                (
                    piece,
                    feet,
                    feet.iter().map(|f| f.distance).fold(0.0, f64::max),
                )
            };
            // Beside a border the middle may be nearer to another piece.
            let (mut piece, mut feet, off) = on(whole.foot(&middle, f64::INFINITY).piece);
            if off > near {
                let best = (0..pieces.len())
                    .map(on)
                    .min_by(|x, y| x.2.total_cmp(&y.2))
                    .unwrap();
                (piece, feet) = (best.0, best.1);
            }
            let normals =
                feet.map(|foot| normal(&pieces[piece].surface, foot.place).map(|n| n * outward));
            each(t, normals, feet.map(|f| f.distance));
        }
    }
}

fn turn(a: &Vector, b: &Vector) -> f64 {
    a.cross(b).norm().atan2(a.dot(b)).to_degrees()
}

#[test]
fn normals_turn_no_more_than_asked() {
    for (name, angle) in [
        ("cylinder", 5.0),
        ("torus", 12.0),
        ("bspline", 2.0),
        ("saddle", 3.0),
        ("coons", 4.0),
        ("mirrored_pair", 3.0),
        ("ruled", 6.0),
    ] {
        let set = shipped_set(name);
        // A chord that asks for nothing.
        let made = with(&set, 20.0, Some(angle), None);
        let (mut worst, mut judged) = (0.0_f64, 0);
        corners_on_surface(&set, &made, 1, |_, normals, _| {
            for k in 0..3 {
                if let (Some(a), Some(b)) = (normals[k], normals[(k + 1) % 3]) {
                    worst = worst.max(turn(&a, &b));
                    judged += 1;
                }
            }
        });
        println!(
            "{name}: asked {angle}, largest {worst:.4} over {} triangles",
            made.mesh.triangles.len()
        );
        assert!(judged > 2 * made.mesh.triangles.len(), "{name}: {judged}");
        // Difference quotients are good to a few millionths.
        assert!(worst <= angle + 1e-4, "{name}: {worst}");
        assert!(worst > 0.5 * angle, "{name}: finer than asked, {worst}");
    }
}

#[test]
fn edges_are_no_longer_than_asked() {
    for (name, longest) in [
        ("plane", 30.0),
        ("uneven_flat", 7.0),
        ("box", 11.0),
        ("t_junction", 13.0),
        ("sphere", 60.0),
        ("three_sided_cap", 5.0),
        ("saddle", 17.0),
        ("bspline", 20.0),
        ("torus", 40.0),
        ("plane", 10.0),
        ("cylinder", 9.0),
        ("cone", 8.0),
        ("t_junction", 7.0),
        ("degree_mismatch", 6.0),
    ] {
        let set = shipped_set(name);
        let made = with(&set, 20.0, None, Some(longest));
        let mut worst = 0.0_f64;
        for t in 0..made.mesh.triangles.len() {
            let [a, b, c] = made.mesh.triangle_corners(t);
            worst = worst
                .max((b - a).norm())
                .max((c - b).norm())
                .max((a - c).norm());
        }
        assert!(worst <= longest, "{name}: {worst}");
        assert!(worst > 0.5 * longest, "{name}: finer than asked, {worst}");
        let area = Measures::of(&made.mesh).area;
        let fewest = area / (3.0_f64.sqrt() / 4.0 * longest * longest);
        let count = made.mesh.triangles.len() as f64;
        assert!(
            count <= 4.0 * fewest,
            "{name}: {count} triangles, far too many"
        );
        println!(
            "{name}: asked {longest}, longest {worst:.4}, {} triangles, {:.2} of the fewest equilateral ones",
            made.mesh.triangles.len(),
            made.mesh.triangles.len() as f64 / (area / (3.0_f64.sqrt() / 4.0 * longest * longest))
        );
    }
}

#[test]
fn vertices_lie_on_the_surface_with_its_normals() {
    for (name, set) in shipped() {
        let chord = set.tolerances().chord.get();
        let made = meshed(&set, chord);
        let mesh = &made.mesh;
        let step = 1 + mesh.triangles.len() / 4000;
        let gap = set.tolerances().gap.get();
        let slack = 4.0 * verdict::rounding(&set);
        let (mut worst, mut seam_worst) = (0.0_f64, 0.0_f64);
        corners_on_surface(&set, &made, step, |t, normals, off| {
            for (k, normal) in normals.iter().enumerate() {
                seam_worst = seam_worst.max(off[k]);
                let vertex = mesh.vertices[mesh.triangles[t][k] as usize];
                assert!(
                    (vertex.normal.norm() - 1.0).abs() < 1e-12,
                    "{name}: {vertex:?}"
                );
                let Some(normal) = normal else { continue };
                let limit = set.tolerances().tangent_deg.get() + 1e-3;
                worst = worst.max(turn(normal, &vertex.normal) / limit);
            }
        });
        // On a seam a vertex may keep to the other side, within the gap.
        assert!(
            seam_worst <= gap + slack,
            "{name}: {seam_worst:e} off the surface"
        );
        assert!(
            worst <= 1.0,
            "{name}: a vertex normal is off by {worst} of the tolerance"
        );
    }
}

#[test]
fn vertices_of_a_lone_patch_lie_on_it() {
    for name in [
        "saddle",
        "bspline",
        "coons",
        "ruled",
        "three_sided_cap",
        "octant",
    ] {
        let set = shipped_set(name);
        let made = meshed(&set, set.tolerances().chord.get());
        let mut worst = 0.0_f64;
        corners_on_surface(&set, &made, 1, |_, _, off| {
            worst = off.iter().copied().fold(worst, f64::max);
        });
        // A foot is as good as its parameters: an error of 1e-8 in them.
        let size = verdict::rounding(&set) / f64::EPSILON / 16.0;
        assert!(worst <= 1e-11 * size, "{name}: {worst:e}");
    }
}

#[test]
fn both_halves_of_a_mirrored_pair_face_up() {
    let set = shipped_set("mirrored_pair");
    let made = meshed(&set, 0.1);
    assert_eq!(made.mesh.parts.len(), 2);
    for part in &made.mesh.parts {
        assert!(part.triangles.len() > 10);
        for t in part.triangles.clone() {
            let [a, b, c] = made.mesh.triangle_corners(t);
            assert!((b - a).cross(&(c - a)).z > 0.0, "{} at {a}", part.name);
            for v in made.mesh.triangles[t] {
                assert!(made.mesh.vertices[v as usize].normal.z > 0.0);
            }
        }
    }
    let areas: Vec<f64> = made
        .mesh
        .parts
        .iter()
        .map(|part| {
            let area = |t| {
                let [a, b, c] = made.mesh.triangle_corners(t);
                (b - a).cross(&(c - a)).norm() / 2.0
            };
            part.triangles.clone().map(area).sum()
        })
        .collect();
    assert!((areas[0] - areas[1]).abs() < 1e-3 * areas[0]);
}

/// A bent bicubic as text, its coordinates times `scale` plus `shift`.
fn sheet(units: &str, chord: f64, scale: f64, shift: f64) -> PatchSet {
    bent_sheet(units, chord, scale, shift, 1.0)
}

/// The same with its heights times `bend`.
fn bent_sheet(units: &str, chord: f64, scale: f64, shift: f64, bend: f64) -> PatchSet {
    let heights = [
        [0.0, 0.3, 0.2, 0.0],
        [0.1, 0.4, 0.5, 0.1],
        [0.0, 0.6, 0.3, 0.2],
        [0.2, 0.1, 0.0, 0.4],
    ];
    let point = |i: usize, j: usize| {
        let at = |x: f64| x * scale + shift;
        format!(
            "({:?}, {:?}, {:?})",
            at(i as f64),
            at(j as f64),
            at(bend * heights[i][j])
        )
    };
    let row = |i: usize| {
        let row: Vec<String> = (0..4).map(|j| point(i, j)).collect();
        format!("[{}]", row.join(", "))
    };
    let net: Vec<String> = (0..4).map(row).collect();
    let text = format!(
        "(units: {units}, tolerance: (chord: {chord:e}, gap: {:e}), patches: [(name: \"sheet\", surface: Bezier(net: [{}]))])",
        chord / 100.0,
        net.join(", ")
    );
    PatchSet::from_ron(&text, "sheet").unwrap().set
}

const LIGHT: Effort = Effort {
    grid: 25,
    random: 200,
    edge: 50,
    climbs: 2,
    triangles: 800,
    lattice: 20,
};

#[test]
fn a_millionth_of_the_size_is_held() {
    // 3 mm across: 3e-6 mm is a millionth of it.
    let set = bent_sheet("mm", 3e-6, 1.0, 0.0, 0.03);
    let made = meshed(&set, 3e-6);
    println!("{} triangles", made.mesh.triangles.len());
    assert!(made.deviation.proved() <= 3e-6);
    verdict::refute(&set, &made, LIGHT, &mut Chance::new(3)).unwrap();
}

/// A step of the coordinates is 1.2e-10 mm there.
#[test]
fn a_million_millimetres_out_it_is_held() {
    // Sheets of 3 mm, of 0.3 mm and, with a chord of 1e-6 mm, of 0.03 mm.
    for (scale, chord) in [(1.0, 1e-2), (1.0, 1e-3), (0.1, 1e-4), (0.01, 1e-6)] {
        let made = meshed(&sheet("mm", chord, scale, 1e6), chord);
        let set = sheet("mm", chord, scale, 1e6);
        println!("{chord}: {} triangles", made.mesh.triangles.len());
        verdict::refute(&set, &made, LIGHT, &mut Chance::new(4)).unwrap();
        // As many as at the origin, but for a few.
        let near = meshed(&sheet("mm", chord, scale, 0.0), chord)
            .mesh
            .triangles
            .len();
        let far = made.mesh.triangles.len();
        assert!(
            far.abs_diff(near) * 25 <= near + 50,
            "{chord}: {far} against {near}"
        );
    }
}

/// Scaling by a power of two changes no rounding, so nothing else may change.
#[test]
fn twice_as_large_is_the_same_mesh() {
    for (scale, chord) in [
        (1024.0, 1e-3),
        (1.0 / 1024.0, 1e-3),
        (2.0_f64.powi(20), 3e-2),
    ] {
        let one = meshed(&sheet("mm", chord, 1.0, 0.0), chord);
        let other = meshed(&sheet("mm", chord * scale, scale, 0.0), chord * scale);
        assert_eq!(one.mesh.triangles, other.mesh.triangles, "scale {scale}");
        for (p, q) in one.mesh.points.iter().zip(&other.mesh.points) {
            assert_eq!(p * scale, *q);
        }
        let (p, q) = (one.deviation.proved() * scale, other.deviation.proved());
        assert!((p - q).abs() <= 1e-15 * q.abs());
    }
}

/// The same sheet in millimetres and in metres. Thousandths round, so counts
/// may differ by a choice or two.
#[test]
fn units_do_not_matter() {
    for chord in [1e-2, 1e-3] {
        let mm = meshed(&sheet("mm", chord, 1.0, 0.0), chord);
        let m = meshed(&sheet("m", chord / 1e3, 1e-3, 0.0), chord / 1e3);
        let (a, b) = (mm.mesh.triangles.len(), m.mesh.triangles.len());
        assert!(a.abs_diff(b) * 100 <= a, "{a} and {b} triangles");
        let areas = [
            Measures::of(&mm.mesh).area,
            Measures::of(&m.mesh).area * 1e6,
        ];
        assert!((areas[0] - areas[1]).abs() < 1e-5 * areas[0]);
    }
    // Defaults are stated in millimetres and converted.
    let file = |units| SetFile {
        units,
        ..SetFile::from_ron(
            r#"(patches: [(name: "ball", surface: Sphere(radius: 1))])"#,
            "",
        )
        .unwrap()
    };
    for (units, mm) in [(Units::m, 1e3), (Units::cm, 10.0), (Units::inch, 25.4)] {
        let set = PatchSet::build(file(units)).unwrap().set;
        assert!((set.tolerances().chord.get() * mm - 0.1).abs() < 1e-15);
        assert!((set.tolerances().gap.get() * mm - 0.01).abs() < 1e-15);
    }
}

#[test]
fn facets_face_outwards() {
    for (name, set) in shipped() {
        for factor in [1.0 / 3.0, 1.0, 3.0] {
            let mesh = meshed(&set, set.tolerances().chord.get() * factor).mesh;
            let inward = (0..mesh.triangles.len())
                .filter(|&t| {
                    let [a, b, c] = mesh.triangle_corners(t);
                    let normals = mesh.triangles[t].map(|v| mesh.vertices[v as usize].normal);
                    let normal = normals.iter().sum::<Vector>();
                    normal.dot(&(b - a).cross(&(c - a))) <= 0.0
                })
                .count();
            assert_eq!(inward, 0, "{name} x {factor}, of {}", mesh.triangles.len());
        }
    }
}

/// The normal angle once halved the first triangle at a pole without end: the
/// border beside it had been sampled too widely.
#[test]
fn a_pole_keeps_a_small_normal_angle() {
    let made = with(&shipped_set("octant"), 0.071, Some(2.0), None);
    assert!(made.mesh.triangles.len() < 20_000);
}

/// A piece that was one triangle with all its edges on the border could not be
/// refined.
#[test]
fn a_lone_pole_triangle_is_refined() {
    for seed in [2277, 8402, 9704, 9819, 10093, 11254] {
        let trial = refute::patches::trial(seed);
        meshed(&PatchSet::build(trial.file).unwrap().set, trial.chord);
    }
}
