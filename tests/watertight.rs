//! No cracks: every seam is one chain of vertices, what is open is open in the
//! set, and areas and volumes come out as they must.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]
#![allow(
    clippy::cast_precision_loss,
    clippy::cast_possible_truncation,
    clippy::cast_possible_wrap,
    reason = "counts far below 2^52"
)]

use std::collections::{BTreeMap, BTreeSet};
use std::f64::consts::PI;

use chordwise::mesh::{Measures, Mesh, Meshed};
use chordwise::patch_set::PatchSet;
use chordwise::sampling::{Limits, Samples};
use chordwise::scalar::Point;

mod refute;
use refute::{meshed, shipped, shipped_set};

type Bits = [u64; 3];

fn bits(p: &Point) -> Bits {
    // Minus zero is zero.
    [p.x, p.y, p.z].map(|x| (x + 0.0).to_bits())
}

/// Every directed edge of the mesh, and how often it is run.
fn directed(mesh: &Mesh) -> BTreeMap<[u32; 2], usize> {
    let mut edges = BTreeMap::new();
    for t in 0..mesh.triangles.len() {
        let [a, b, c] = mesh.triangle_points(t);
        for edge in [[a, b], [b, c], [c, a]] {
            assert_ne!(edge[0], edge[1], "triangle {t} repeats a point");
            *edges.entry(edge).or_insert(0) += 1;
        }
    }
    edges
}

/// Runs of a seam's places from end to end, as the sampling room has them.
fn chains(set: &PatchSet, made: &Meshed, chord: f64) -> Vec<(usize, Vec<Point>)> {
    let limits = Limits::new(chord, None, None);
    let samples = Samples::new(set, &made.topology, &limits).unwrap();
    let topology = &made.topology;
    let seams = topology.seams().iter().zip(samples.runs());
    seams
        .map(|(seam, run)| {
            let master = &topology.spans()[seam.spans[0].index()];
            let node = |end: usize| topology.nodes()[master.nodes[end].index()].point;
            let mut chain = vec![node(0)];
            chain.extend(&run.points);
            chain.push(node(1));
            (seam.spans.len(), chain)
        })
        .collect()
}

/// What holds for every set at any tolerance.
fn hangs_together(name: &str, set: &PatchSet, chord: f64) -> (Meshed, Measures) {
    let made = meshed(set, chord);
    let measures = Measures::of(&made.mesh);
    let edges = directed(&made.mesh);
    let mesh = &made.mesh;
    let numbers: BTreeMap<Bits, Vec<u32>> =
        (0_u32..)
            .zip(&mesh.points)
            .fold(BTreeMap::new(), |mut map, (k, p)| {
                map.entry(bits(p)).or_insert_with(Vec::new).push(k);
                map
            });
    let uses = |a: u32, b: u32| {
        let times = |edge| edges.get(&edge).copied().unwrap_or(0);
        (times([a, b]), times([b, a]))
    };
    // Along every seam each segment is run as often as there are pieces.
    let mut on_seams: BTreeSet<[u32; 2]> = BTreeSet::new();
    let (mut open_segments, mut branching) = (0, 0);
    for (count, chain) in chains(set, &made, chord) {
        for pair in chain.windows(2) {
            let at = |p: &Point| {
                numbers
                    .get(&bits(p))
                    .unwrap_or_else(|| panic!("{name}: a sample at {p} is no vertex"))
            };
            let found = at(&pair[0])
                .iter()
                .flat_map(|&a| at(&pair[1]).iter().map(move |&b| [a, b]))
                .find(|&[a, b]| uses(a, b) != (0, 0));
            let Some([a, b]) = found else {
                panic!(
                    "{name}: no triangle at the segment {} to {}",
                    pair[0], pair[1]
                );
            };
            let (forth, back) = uses(a, b);
            assert_eq!(
                forth + back,
                count,
                "{name}: uses of a segment at {}",
                pair[0]
            );
            match count {
                1 => open_segments += 1,
                2 => assert_eq!((forth, back), (1, 1), "{name}: at {}", pair[0]),
                _ => branching += 1,
            }
            on_seams.insert([a.min(b), a.max(b)]);
        }
    }
    // Away from the seams every edge has its two triangles.
    for (&[a, b], &times) in &edges {
        assert!(times == 1 || on_seams.contains(&[a.min(b), a.max(b)]));
        if !on_seams.contains(&[a.min(b), a.max(b)]) {
            assert_eq!(uses(a, b), (1, 1), "{name}: an inner edge");
        }
    }
    assert_eq!(measures.open_edges, open_segments, "{name}");
    assert_eq!(measures.non_manifold_edges, branching, "{name}");
    assert_eq!(measures.degenerate, 0, "{name}");
    assert_eq!(
        measures.open_loops,
        made.topology.open_loops().len(),
        "{name}"
    );
    assert_eq!(measures.closed, measures.open_edges == 0, "{name}");
    // No point twice, but where two parts of the teapot touch without being
    // joined.
    let touching = numbers.values().filter(|v| v.len() > 1).count();
    let meant = usize::from(name == "teapot");
    assert_eq!(
        touching, meant,
        "{name}: points that coincide without being one"
    );
    (made, measures)
}

#[test]
fn every_set_hangs_together() {
    for (name, set) in shipped() {
        let chord = set.tolerances().chord.get();
        for factor in [1.0, 3.0] {
            hangs_together(&name, &set, chord * factor);
        }
    }
}

/// Euler, V - E + F: 2 for a ball or a box, 0 for a torus, and (standard) 0
/// for an open pipe, 1 for a disc.
#[test]
fn euler_characteristics() {
    for (name, euler, closed, loops, components) in [
        ("sphere", 2, true, 0, 1),
        ("torus", 0, true, 0, 1),
        ("box", 2, true, 0, 1),
        ("two_boxes", 4, true, 0, 2),
        ("cylinder", 0, false, 2, 1),
        ("cone", 1, false, 1, 1),
        ("octant", 1, false, 1, 1),
        ("revolution", 1, false, 1, 1),
        ("t_junction", 1, false, 1, 1),
        ("degree_mismatch", 1, false, 1, 1),
        ("mirrored_pair", 1, false, 1, 1),
        ("nearly_closed", 2, false, 2, 2),
    ] {
        let set = shipped_set(name);
        let (_, m) = hangs_together(name, &set, set.tolerances().chord.get() * 2.0);
        assert_eq!(
            (m.euler, m.closed, m.open_loops, m.components),
            (euler, closed, loops, components),
            "{name}"
        );
        assert_eq!(m.volume.is_some(), closed, "{name}");
        assert!(m.volume.is_none_or(|v| v > 0.0), "{name} faces outwards");
    }
}

/// The counts of the classic teapot, computed from its published net (M.
/// Newell, 1975; npm package three): 8 collapsed, 52 shared, 16 open edges in
/// 6 loops; welded by position V - E + F = 1 and 3 parts; of the 4 parts that
/// hang together by edges two meet in a point only.
#[test]
fn teapot_counts() {
    let set = shipped_set("teapot");
    let (made, measures) = hangs_together("teapot", &set, 0.01);
    let edges = made.topology.edges();
    assert_eq!(edges.iter().filter(|e| e.collapsed).count(), 8);
    let spans = |n: usize| {
        made.topology
            .seams()
            .iter()
            .filter(|s| s.spans.len() == n)
            .count()
    };
    assert_eq!((spans(1), spans(2), spans(3)), (16, 52, 0));
    assert_eq!(made.topology.open_loops().len(), 6);
    assert_eq!(measures.components, 4);
    let welded = Welded::new(&made.mesh);
    assert_eq!((welded.euler, welded.parts), (1, 3));
}

/// The mesh with exact duplicates of points merged.
struct Welded {
    euler: i64,
    /// Parts that hang together by points.
    parts: usize,
}

impl Welded {
    fn new(mesh: &Mesh) -> Self {
        let mut number: BTreeMap<Bits, u32> = BTreeMap::new();
        let welded: Vec<u32> = mesh
            .points
            .iter()
            .map(|p| {
                let next = number.len() as u32;
                *number.entry(bits(p)).or_insert(next)
            })
            .collect();
        let triangles: Vec<[u32; 3]> = (0..mesh.triangles.len())
            .map(|t| mesh.triangle_points(t).map(|p| welded[p as usize]))
            .collect();
        let edges: BTreeSet<[u32; 2]> = triangles
            .iter()
            .flat_map(|&[a, b, c]| [[a, b], [b, c], [c, a]])
            .map(|[a, b]| [a.min(b), a.max(b)])
            .collect();
        let mut least: Vec<u32> = (0..number.len() as u32).collect();
        loop {
            let mut changed = false;
            for corners in &triangles {
                let low = corners
                    .map(|p| least[p as usize])
                    .into_iter()
                    .min()
                    .unwrap();
                for &p in corners {
                    changed |= least[p as usize] != low;
                    least[p as usize] = low;
                }
            }
            if !changed {
                break;
            }
        }
        Self {
            euler: number.len() as i64 - edges.len() as i64 + triangles.len() as i64,
            parts: least.iter().collect::<BTreeSet<_>>().len(),
        }
    }
}

/// Areas of the teapot's panels, computed from its net to four decimals (the
/// same source).
#[test]
fn teapot_areas() {
    let set = shipped_set("teapot");
    let areas = |chord: f64| {
        let made = meshed(&set, chord);
        let mut areas: BTreeMap<String, f64> = BTreeMap::new();
        for part in &made.mesh.parts {
            for t in part.triangles.clone() {
                let [a, b, c] = made.mesh.triangle_corners(t);
                let panel = made.mesh.panels[part.panel].clone();
                *areas.entry(panel).or_default() += (b - a).cross(&(c - a)).norm() / 2.0;
            }
        }
        areas
    };
    let (coarse, fine) = (areas(0.004), areas(0.001));
    let (mut whole, mut all_allowed) = (0.0, 0.0);
    for (panel, area) in [
        ("rim", 2.3198),
        ("body", 28.7035),
        ("handle", 3.3039),
        ("spout", 4.3084),
        ("lid", 6.7484),
        ("bottom", 7.4992),
    ] {
        let (c, f) = (coarse[panel], fine[panel]);
        println!(
            "{panel}: {area} {c:.5} {f:.5} extrapolated {:.5}",
            f + (f - c) / 3.0
        );
        // Moved by no more than the chord along its normal, a surface changes
        // its area by no more than the chord times the curvatures' sum (first
        // variation of area); and the error is linear in the chord.
        let allowed = 0.001 * bending(&set, panel);
        assert!(
            (f - area).abs() < 5e-5 + allowed,
            "{panel}: {f}, allowed {allowed}"
        );
        assert!(
            (f + (f - c) / 3.0 - area).abs() < 5e-5 + 0.2 * (f - c).abs(),
            "{panel}"
        );
        all_allowed += allowed;
        whole += f;
    }
    assert!((whole - 52.8833).abs() < 5e-5 + all_allowed, "{whole}");
}

/// The integral of |k_1| + |k_2| over a panel, by midpoints.
fn bending(set: &PatchSet, panel: &str) -> f64 {
    let panel = set.panels().iter().find(|p| p.name == panel).unwrap();
    let pieces = panel
        .patches
        .iter()
        .flat_map(|id| set.patches()[id.index()].pieces.clone());
    let at = |k: u32| (f64::from(k) + 0.5) / 40.0;
    let mut sum = 0.0;
    for piece in pieces.map(|k| &set.pieces()[k].surface) {
        for (i, j) in (0..40).flat_map(|i| (0..40).map(move |j| (i, j))) {
            let jet = piece.jet(at(i), at(j));
            let Some((gaussian, mean)) = jet.gaussian_and_mean() else {
                continue;
            };
            let root = (mean * mean - gaussian).max(0.0).sqrt();
            let curvatures = (mean + root).abs() + (mean - root).abs();
            sum += curvatures * jet.cross().norm() / 1600.0;
        }
    }
    sum
}

/// Area and volume of a set and the errors against what they should be.
fn solid(set: &PatchSet, chord: f64) -> (Meshed, f64, Option<f64>) {
    let made = meshed(set, chord);
    let m = Measures::of(&made.mesh);
    (made, m.area, m.volume)
}

/// Handbook: 4 pi R^2, 4/3 pi R^3; 4 pi^2 R r, 2 pi^2 R r^2; 2 pi R h. The
/// errors must be linear in the chord (a mesh with its corners on a smooth
/// surface), and the volume is off by no more than the deviation times the
/// area.
#[test]
fn areas_and_volumes_converge() {
    for (name, area, volume) in [
        (
            "sphere",
            4.0 * PI * 500.0_f64.powi(2),
            Some(4.0 / 3.0 * PI * 500.0_f64.powi(3)),
        ),
        (
            "torus",
            4.0 * PI * PI * 200.0 * 50.0,
            Some(2.0 * PI * PI * 200.0 * 50.0_f64.powi(2)),
        ),
        ("cylinder", 2.0 * PI * 40.0 * 300.0, None),
    ] {
        let set = shipped_set(name);
        let mut before: Option<[f64; 2]> = None;
        for chord in [0.4, 0.2, 0.1, 0.05] {
            let (made, a, v) = solid(&set, chord);
            let errors = [area - a, volume.map_or(0.0, |x| x - v.unwrap())];
            assert!(errors[0] > 0.0 || name == "torus", "{name}: inscribed");
            let reach = made.deviation.proved() * area;
            assert!(errors[1].abs() <= reach, "{name}: volume off {errors:?}");
            println!(
                "{name} {chord}: area off {:.3e}, volume off {:.3e} of at most {reach:.3e}",
                errors[0], errors[1]
            );
            if let Some(coarse) = before {
                for (fine, coarse) in errors.iter().zip(coarse).filter(|(_, c)| *c != 0.0) {
                    let ratio = fine / coarse;
                    assert!((0.35..0.65).contains(&ratio), "{name} at {chord}: {ratio}");
                }
            }
            before = Some(errors);
        }
    }
}

/// The octant of the unit sphere in metres: pi / 2.
#[test]
fn octant_area() {
    let set = shipped_set("octant");
    let (_, coarse, _) = solid(&set, 4e-4);
    let (_, fine, _) = solid(&set, 2e-4);
    let ratio = (PI / 2.0 - fine) / (PI / 2.0 - coarse);
    assert!((0.35..0.65).contains(&ratio), "{ratio}");
    assert!(PI / 2.0 - fine < 2e-4 * 2.0 * PI / 2.0);
}

/// One long edge against two short ones: the corner between them is a vertex
/// of the long one, and all its triangles are there to the seam.
#[test]
fn a_corner_on_an_edge_is_a_vertex_of_it() {
    let set = shipped_set("t_junction");
    let (made, m) = hangs_together("t_junction", &set, 0.1);
    let corner = made
        .mesh
        .points
        .iter()
        .position(|p| (p - Point::new(80.0, 100.0, 0.0)).norm() < 1e-9)
        .unwrap() as u32;
    let long = made
        .mesh
        .parts
        .iter()
        .find(|p| p.name == "floor/long")
        .unwrap();
    let touches = |t: usize| made.mesh.triangle_points(t).contains(&corner);
    assert!(long.triangles.clone().any(touches));
    assert_eq!((m.components, m.open_loops, m.euler), (1, 1, 1));
    // 200 x 100 + 80 x 60 + 120 x 60.
    assert!((m.area - 32_000.0).abs() < 1e-8);
}
