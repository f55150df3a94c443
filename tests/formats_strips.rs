//! Strips and measures of meshes made by hand.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use approx::assert_relative_eq;
use chordwise::format::{Format, FormatError, Layout, WriteOptions, write};
use chordwise::mesh::{Measures, Mesh, Part, RESTART, Storage, Strips};
use chordwise::scalar::{Tolerance, Vector};
use proptest::prelude::*;

#[path = "formats/shapes.rs"]
mod shapes;

/// A triangle turned so that its least corner comes first; the way round stays.
fn turned([a, b, c]: [u32; 3]) -> [u32; 3] {
    [[a, b, c], [b, c, a], [c, a, b]].into_iter().min().unwrap()
}

fn sorted(triangles: impl Iterator<Item = [u32; 3]>) -> Vec<[u32; 3]> {
    let mut all: Vec<_> = triangles.map(turned).collect();
    all.sort_unstable();
    all
}

fn proper([a, b, c]: &[u32; 3]) -> bool {
    a != b && b != c && c != a
}

/// The strips stand for the same oriented triangles, patch by patch, and count
/// as they should.
fn check(mesh: &Mesh) -> Strips {
    let strips = Strips::of(mesh);
    assert_eq!(
        sorted(strips.triangles()),
        sorted(mesh.triangles.iter().copied().filter(proper))
    );
    // Standard: a strip of N triangles takes N + 2 indices; here those that an
    // index is repeated for come on top.
    let (t, s) = (strips.triangles().count(), strips.len());
    assert_eq!(strips.iter().count(), s);
    let skipped = strips
        .iter()
        .flat_map(|strip| strip.windows(3))
        .filter(|c| c[0] == c[1] || c[1] == c[2] || c[2] == c[0])
        .count();
    assert_eq!(
        strips.indices().len(),
        t + 2 * s + s.saturating_sub(1) + skipped
    );
    assert!(strips.indices().len() <= 4 * t, "worse than one by one");
    for (number, part) in mesh.parts.iter().enumerate() {
        let own = strips.part(number).flat_map(|strip| {
            strip.windows(3).enumerate().map(|(i, c)| match i % 2 {
                0 => [c[0], c[1], c[2]],
                _ => [c[1], c[0], c[2]],
            })
        });
        let own = own.filter(proper);
        let meant = mesh.triangles[part.triangles.clone()].iter().copied();
        let meant = meant.filter(proper);
        assert_eq!(sorted(own), sorted(meant), "{}", part.name);
    }
    strips
}

#[test]
fn one_triangle_and_two() {
    assert_eq!(
        check(&shapes::loose(3, vec![[0, 1, 2]])).indices(),
        [0, 1, 2]
    );
    let two = check(&shapes::loose(4, vec![[0, 1, 2], [2, 1, 3]]));
    assert_eq!(two.len(), 1);
    let none = check(&shapes::loose(3, vec![]));
    assert!(none.is_empty() && none.indices().is_empty());
    assert_relative_eq!(none.indices_per_triangle(), 0.0);
}

/// A row of cells is one strip: n rows of m cells take n (2 m + 3) - 1 indices
/// with restarts, computed by hand. What is found knows no rows; it may take
/// two repeated indices a row more.
#[test]
fn grids_go_by_rows() {
    for (n, m) in [(1, 1), (1, 7), (5, 8), (8, 5), (20, 30), (100, 40)] {
        let strips = check(&shapes::grid(n, m));
        let by_rows = |n: u32, m: u32| n as usize * (2 * m as usize + 5) - 1;
        let found = strips.indices().len();
        assert!(
            found <= by_rows(n, m).max(by_rows(m, n)),
            "{n} x {m}: {found}"
        );
    }
}

/// The longitude-latitude sphere of 36 meridians and 17 rings: V = k r + 2 =
/// 614 and F = 2 k r = 1,224 by arithmetic; 44,064 bytes as separate triangles,
/// 22,056 indexed, 14,712 as one ideal strip of points.
#[test]
fn sphere_sizes() {
    let mesh = shapes::sphere(36, 17, 1.0, Vector::zeros());
    let strips = check(&mesh);
    let storage = Storage::of(&mesh, &strips);
    assert_eq!([mesh.points.len(), mesh.triangles.len()], [614, 1224]);
    assert_eq!([storage.triangles, storage.indexed], [44_064, 22_056]);
    // Further strips, restarts and repeated indices come on top of the ideal.
    let (s, indices) = (strips.len() as u64, strips.indices().len() as u64);
    assert_eq!(storage.strips, 12 * (indices - (s - 1)) + 4 * (s - 1));
    assert!(14_712 < storage.strips && storage.strips < storage.indexed);
    assert!(
        strips.indices_per_triangle() < 1.15,
        "{} indices a triangle",
        strips.indices_per_triangle()
    );
    assert!(!strips.iter().flatten().any(|&v| v == RESTART));
}

/// Fans, where every strip is short, and a fan with very many blades, where a
/// careless neighbour search would take quadratic time.
#[test]
fn fans() {
    let fan = |n: u32| shapes::loose(n + 1, (1..n).map(|i| [0, i, i + 1]).collect());
    check(&fan(9));
    check(&fan(200_000));
}

#[test]
fn sphere_measures() {
    // A polyhedron, so its volume is less than the ball's and reached at the
    // rate of the square of the step (4/3 pi R^3; handbook).
    let ball = 4.0 / 3.0 * std::f64::consts::PI * 125.0;
    let shell = 4.0 * std::f64::consts::PI * 25.0;
    let mut defects = Vec::new();
    for k in [32, 64] {
        let mesh = shapes::sphere(k, k / 2 - 1, 5.0, Vector::new(900.0, -20.0, 1e4));
        let measures = Measures::of(&mesh);
        assert!(measures.closed && measures.area < shell);
        let volume = measures.volume.unwrap();
        assert!(volume < ball);
        defects.push(ball - volume);
        // Euler: a closed surface of genus 0 has V - E + F = 2.
        assert_eq!([measures.euler, 2], [2, 2]);
        assert_eq!([measures.components, measures.open_loops], [1, 0]);
    }
    assert_relative_eq!(defects[0] / defects[1], 4.0, max_relative = 0.02);
}

#[test]
fn box_measures() {
    // Far out, where coordinates are good to 1e-10 and a sum about the origin
    // would lose everything but that.
    let mut mesh = shapes::case(Vector::new(1e6 + 0.1, 1e6 + 0.7, -1e6 / 3.0));
    let measures = Measures::of(&mesh);
    assert_relative_eq!(measures.area, 22.0, max_relative = 1e-9);
    assert_relative_eq!(measures.volume.unwrap(), 6.0, max_relative = 1e-9);
    assert_eq!(measures.euler, 2);

    // Without its lid it is a disc: one loop of four edges.
    let lid = mesh.parts.pop().unwrap();
    mesh.triangles.truncate(lid.triangles.start);
    let measures = Measures::of(&mesh);
    assert!(!measures.closed && measures.volume.is_none());
    assert_eq!(
        [
            measures.open_edges,
            measures.open_loops,
            measures.components
        ],
        [4, 1, 1]
    );
    assert_eq!(measures.euler, 1);

    // With one face turned over it is not a solid, though no edge is open.
    let mut mesh = shapes::case(Vector::zeros());
    for triangle in &mut mesh.triangles[..2] {
        triangle.swap(1, 2);
    }
    let measures = Measures::of(&mesh);
    assert_eq!([measures.open_edges, measures.non_manifold_edges], [0, 4]);
    assert!(!measures.closed && measures.volume.is_none());
}

/// Two triangles that touch in a point are two components with a loop each;
/// welding counts would say one.
#[test]
fn parts_that_touch_in_a_point() {
    let measures = Measures::of(&shapes::loose(5, vec![[0, 1, 2], [0, 3, 4]]));
    assert_eq!([measures.components, measures.open_loops], [2, 2]);
    assert_eq!(measures.euler, 1);
    assert_eq!(measures.open_edges, 6);
}

/// Three sheets on one edge, and a triangle with a repeated point.
#[test]
fn odd_meshes() {
    let measures = Measures::of(&shapes::loose(
        5,
        vec![[0, 1, 2], [1, 0, 3], [0, 1, 4], [2, 2, 3]],
    ));
    assert_eq!([measures.non_manifold_edges, measures.degenerate], [1, 1]);
    assert_eq!([measures.open_edges, measures.components], [6, 1]);
    let empty = Measures::of(&shapes::loose(0, vec![]));
    assert!(!empty.closed && empty.area.abs() < f64::MIN_POSITIVE);
}

proptest! {
    /// Any triangles at all, manifold or not, repeated corners included.
    #[test]
    fn any_triangles_survive(triangles in prop::collection::vec(prop::array::uniform3(0_u32..12), 0..60)) {
        let mesh = shapes::loose(12, triangles);
        check(&mesh);
        prop_assert!(!Measures::of(&mesh).area.is_nan());
    }

    /// Meshes that hang together: a grid with holes and shuffled triangles,
    /// some turned over.
    #[test]
    fn grids_with_holes_survive(
        n in 1_u32..9,
        m in 1_u32..9,
        keys in prop::collection::vec(any::<u64>(), 128),
    ) {
        let mut mesh = shapes::grid(n, m);
        let mut keyed: Vec<_> = mesh.triangles.iter().zip(&keys).filter(|(_, key)| **key % 8 != 0).collect();
        keyed.sort_by_key(|(_, key)| **key);
        let triangles: Vec<_> = keyed.iter().map(|(t, key)| match **key % 16 {
            9 => [t[0], t[2], t[1]],
            10 => [t[1], t[2], t[0]],
            11 => [t[2], t[0], t[1]],
            _ => **t,
        }).collect();
        mesh.parts[0].triangles = 0..triangles.len();
        mesh.triangles = triangles;
        check(&mesh);
    }
}

/// Found by fuzzing: a panel of nothing but triangles that repeat a corner has
/// no strip, and made a mesh without points, which readers refuse.
#[test]
fn a_panel_without_strips_makes_no_mesh_in_glb() {
    let mut mesh = shapes::case(Vector::zeros());
    let options = WriteOptions {
        layout: Some(Layout::Strips),
        ..WriteOptions::new(Tolerance::new(0.05).unwrap())
    };
    let start = mesh.triangles.len();
    mesh.triangles.push([0, 0, 0]);
    mesh.panels.push("pinched".to_owned());
    mesh.parts.push(Part {
        name: "pinched/1".to_owned(),
        panel: mesh.panels.len() - 1,
        triangles: start..start + 1,
    });
    let mut bytes = Vec::new();
    write(&mesh, Format::Glb, &options, &mut bytes).unwrap();
    let read = gltf::Gltf::from_slice(&bytes).unwrap();
    assert!(read.meshes().all(|m| m.name() != Some("pinched")));
    mesh.parts.drain(..mesh.parts.len() - 1);
    bytes.clear();
    let error = write(&mesh, Format::Glb, &options, &mut bytes).unwrap_err();
    assert!(matches!(error, FormatError::Empty) && bytes.is_empty());
}
