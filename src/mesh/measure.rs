//! What can be measured of a mesh: area, volume, and how it hangs together.
//!
//! Everything topological goes by point index, never by distance. Sums run in
//! the order of the triangles and are compensated (Neumaier 1974), so they are
//! the same bytes on every machine.

use super::Mesh;
use super::edges::{EdgeTable, NO_SIDE, is_degenerate, next_side};
use crate::scalar::{Point, Vector};

/// Figures of a whole mesh, in its own unit.
#[derive(Debug, Clone, PartialEq)]
pub struct Measures {
    /// Area of all triangles.
    pub area: f64,
    /// Enclosed volume where the mesh is closed, positive where the triangles
    /// face outwards: the sum of (a - o) . ((b - o) x (c - o)) / 6 over the
    /// triangles (the divergence theorem), o the middle of the box.
    pub volume: Option<f64>,
    /// Whether every edge is run exactly once in each direction.
    pub closed: bool,
    /// Edges with one triangle.
    pub open_edges: usize,
    /// Closed chains of open edges. Where several meet in one point they are
    /// told apart by the triangles between them.
    pub open_loops: usize,
    /// Their lengths along the mesh, the longest first.
    pub open_lengths: Vec<f64>,
    /// Edges with more than two triangles, or with two that run them the same
    /// way.
    pub non_manifold_edges: usize,
    /// V - E + F over the points and edges that triangles use.
    pub euler: i64,
    /// Pieces that hang together by edges; pieces that touch in a point only
    /// are two.
    pub components: usize,
    /// Points in excess of the distinct places they stand at: where parts touch
    /// in a point without hanging together. Merging exact duplicates makes one
    /// of them, and lowers V - E + F by as many.
    pub touching: usize,
    /// Triangles with a repeated point. They count in none of the figures
    /// above.
    pub degenerate: usize,
}

impl Measures {
    /// Measures a mesh.
    #[must_use]
    pub fn of(mesh: &Mesh) -> Self {
        let triangles: Vec<[u32; 3]> = (0..mesh.triangles.len())
            .map(|t| mesh.triangle_points(t))
            .collect();
        let table = EdgeTable::new(&triangles, mesh.points.len());
        let mut edges = 0_i64;
        let mut non_manifold_edges = 0;
        let mut groups = Groups::new(triangles.len());
        let mut open = vec![false; triangles.len() * 3];
        for edge in table.edges() {
            edges += 1;
            let mut sides = edge.sides();
            let Some(first) = sides.next() else { continue };
            if edge.len() == 1 {
                open[first as usize] = true;
            } else if edge.pair(&triangles).is_none() {
                non_manifold_edges += 1;
            }
            for side in sides {
                groups.join(first / 3, side / 3);
            }
        }
        let open_edges = open.iter().filter(|open| **open).count();
        let degenerate = triangles.iter().filter(|t| is_degenerate(**t)).count();
        let closed = open_edges == 0 && non_manifold_edges == 0 && degenerate < triangles.len();
        let mut seen = vec![false; mesh.points.len()];
        for &p in triangles.iter().filter(|t| !is_degenerate(**t)).flatten() {
            seen[p as usize] = true;
        }
        let length = |side: u32| {
            let corners = triangles[side as usize / 3];
            let from = side as usize % 3;
            let ends = [from, (from + 1) % 3].map(|k| &mesh.points[corners[k] as usize]);
            (ends[1] - ends[0]).norm()
        };
        let open_lengths = loops(&open, &table.twins(&triangles), length);
        let count = |n: usize| i64::try_from(n).expect("counts of things in memory fit");
        Self {
            area: area(mesh),
            volume: closed.then(|| volume(mesh)),
            closed,
            open_edges,
            open_loops: open_lengths.len(),
            open_lengths,
            non_manifold_edges,
            euler: count(seen.iter().filter(|seen| **seen).count()) - edges
                + count(triangles.len() - degenerate),
            components: groups.count - degenerate,
            touching: touching(&mesh.points),
            degenerate,
        }
    }
}

fn touching(points: &[Point]) -> usize {
    // Adding zero makes one of the two zeros.
    let bits = |p: &Point| [p.x, p.y, p.z].map(|x| (x + 0.0).to_bits());
    let mut places: Vec<[u64; 3]> = points.iter().map(bits).collect();
    places.sort_unstable();
    places.dedup();
    points.len() - places.len()
}

fn area(mesh: &Mesh) -> f64 {
    sum((0..mesh.triangles.len()).map(|t| {
        let [a, b, c] = mesh.triangle_corners(t);
        0.5 * (b - a).cross(&(c - a)).norm()
    }))
}

fn volume(mesh: &Mesh) -> f64 {
    let middle = middle(&mesh.points);
    sum((0..mesh.triangles.len()).map(|t| {
        let [a, b, c] = mesh.triangle_corners(t).map(|p| p - middle);
        a.dot(&b.cross(&c)) / 6.0
    }))
}

fn middle(points: &[Point]) -> Point {
    let bound = |pick: fn(f64, f64) -> f64, from: f64| {
        points
            .iter()
            .fold(Vector::repeat(from), |m, p| m.zip_map(&p.coords, pick))
    };
    let (low, high) = (
        bound(f64::min, f64::INFINITY),
        bound(f64::max, f64::NEG_INFINITY),
    );
    Point::from(low + 0.5 * (high - low))
}

/// Neumaier's sum: what an addition loses is carried along.
fn sum(terms: impl Iterator<Item = f64>) -> f64 {
    let (mut total, mut lost) = (0.0_f64, 0.0_f64);
    for term in terms {
        let next = total + term;
        lost += if total.abs() >= term.abs() {
            (total - next) + term
        } else {
            (term - next) + total
        };
        total = next;
    }
    total + lost
}

/// The lengths of the chains of open sides, the longest first. The side that
/// follows another one is found by turning about their common point, from
/// triangle to triangle.
fn loops(open: &[bool], twins: &[u32], length: impl Fn(u32) -> f64) -> Vec<f64> {
    let sides = || (0_u32..).zip(open).filter(|(_, open)| **open);
    let follower = |side: u32| {
        let mut next = next_side(side);
        while twins[next as usize] != NO_SIDE {
            next = next_side(twins[next as usize]);
        }
        // The turn may end at an edge that is not open but non-manifold.
        open[next as usize].then_some(next)
    };
    let mut following = vec![NO_SIDE; open.len()];
    let mut begins = open.to_vec();
    for (side, _) in sides() {
        if let Some(next) = follower(side) {
            following[side as usize] = next;
            begins[next as usize] = false;
        }
    }
    let mut counted = vec![false; open.len()];
    let mut lengths = Vec::new();
    // Chains with a beginning first; what is left then is closed.
    let starts = sides()
        .filter(|(side, _)| begins[*side as usize])
        .chain(sides());
    for (start, _) in starts {
        if counted[start as usize] {
            continue;
        }
        let mut sides = Vec::new();
        let mut side = start;
        while side != NO_SIDE && !counted[side as usize] {
            counted[side as usize] = true;
            sides.push(side);
            side = following[side as usize];
        }
        lengths.push(sum(sides.into_iter().map(&length)));
    }
    lengths.sort_by(|a, b| b.total_cmp(a));
    lengths
}

/// Disjoint sets of triangles, by path halving.
struct Groups {
    parent: Vec<u32>,
    count: usize,
}

impl Groups {
    fn new(len: usize) -> Self {
        Self {
            parent: (0_u32..).take(len).collect(),
            count: len,
        }
    }

    fn root(&mut self, mut of: u32) -> u32 {
        while self.parent[of as usize] != of {
            let above = self.parent[self.parent[of as usize] as usize];
            self.parent[of as usize] = above;
            of = above;
        }
        of
    }

    fn join(&mut self, a: u32, b: u32) {
        let (a, b) = (self.root(a), self.root(b));
        if a != b {
            self.parent[a.max(b) as usize] = a.min(b);
            self.count -= 1;
        }
    }
}
