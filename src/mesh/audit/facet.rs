//! The flat triangles of the mesh and what lies near them.
//!
//! Two convex functions bound how far a hull of points is from the mesh, and so
//! the surface in it:
//!
//! ```text
//! one facet F       max_i |b_i - F|
//! a roof of F, N    max_i max(|h_i|, |h_i - s_i tan|)
//! ```
//!
//! The roof: h is the height over F's plane, s the distance past the common
//! edge, N's plane is h = s tan. It holds where all b_i project into the wedge
//! that F's other two edges and N's other two leave; there a point with s <= 0
//! stands over F at height h, one with s >= 0 over N, which is h - s tan below
//! it. Both are convex, so the largest value at the b_i bounds them (hull lemma).
//! It lets the surface leave F sideways without counting that as distance.

use super::cell::{Cell, NONE, facet_index};
use super::evidence::Evidence;
use crate::scalar::{Point, Vector};

/// A triangle of the mesh.
#[derive(Debug, Clone, Copy)]
pub(super) struct Facet {
    /// Its corners.
    pub(super) corners: [Point; 3],
    /// Its unit normal, if it has area.
    pub(super) normal: Option<Vector>,
}

impl Facet {
    /// The triangle with these corners.
    pub(super) fn new(corners: [Point; 3]) -> Self {
        let [a, b, c] = corners;
        Self {
            corners,
            normal: (b - a).cross(&(c - a)).try_normalize(0.0),
        }
    }

    /// Corners relative to an origin.
    pub(super) fn from(&self, origin: &Point) -> [Vector; 3] {
        self.corners.map(|c| c - origin)
    }

    /// In-plane unit vector out of the triangle across edge k (from corner k).
    pub(super) fn outward(&self, k: usize) -> Option<Vector> {
        let edge = self.corners[(k + 1) % 3] - self.corners[k];
        edge.cross(&self.normal?).try_normalize(0.0)
    }
}

/// All facets, and who shares an edge with whom.
#[derive(Debug)]
pub(super) struct Facets {
    pub(super) facets: Vec<Facet>,
    /// Beyond edge k (from corner k to k + 1) of each facet, or `NONE`.
    pub(super) beyond: Vec<[u32; 3]>,
}

impl Facets {
    /// The facets of a mesh, joined where they have cells: a double has none. An
    /// edge that more than two share has for each the next of them.
    pub(super) fn of(evidence: &Evidence, cells: &[Cell]) -> Self {
        let facets = evidence
            .faces
            .iter()
            .map(|face| Facet::new(evidence.corners(face)))
            .collect();
        let mut edges: Vec<(u32, u32, u32, usize)> = Vec::with_capacity(3 * cells.len());
        for cell in cells.iter().filter(|cell| !cell.fill) {
            let of = &evidence.faces[cell.face];
            let face = facet_index(cell.face);
            for k in 0..3 {
                let (a, b) = (of.points[k], of.points[(k + 1) % 3]);
                edges.push((a.min(b), a.max(b), face, k));
            }
        }
        edges.sort_unstable();
        let mut beyond = vec![[NONE; 3]; evidence.faces.len()];
        for group in edges.chunk_by(|a, b| (a.0, a.1) == (b.0, b.1)) {
            for (i, edge) in group.iter().enumerate() {
                let next = group[(i + 1) % group.len()];
                if next.2 != edge.2 {
                    beyond[edge.2 as usize][edge.3] = next.2;
                }
            }
        }
        Self { facets, beyond }
    }

    /// Walks from a facet over edges to nearer and nearer ones; the facet where
    /// that ends, and the distance from it.
    pub(super) fn walk(&self, from: u32, point: &Point) -> (u32, f64) {
        let distance = |facet: u32| {
            let corners = self.facets[facet as usize].from(point);
            to_triangle(&Vector::zeros(), &corners)
        };
        let mut best = (from, distance(from));
        loop {
            let around = self.beyond[best.0 as usize];
            let next = around
                .iter()
                .filter(|&&f| f != NONE)
                .map(|&f| (f, distance(f)))
                .fold(best, |best, f| if f.1 < best.1 { f } else { best });
            if next.0 == best.0 {
                return best;
            }
            best = next;
        }
    }

    /// The roof bound over a facet and the one beyond its edge k for points
    /// relative to `origin`; `None` where the points leave the wedge.
    pub(super) fn roof(
        &self,
        facet: u32,
        k: usize,
        points: &[Vector],
        origin: &Point,
    ) -> Option<f64> {
        let other = self.beyond[facet as usize][k];
        if other == NONE {
            return None;
        }
        let own = &self.facets[facet as usize];
        let normal = own.normal?;
        let out = own.outward(k)?;
        let corners = own.from(origin);
        let (p, q) = (corners[k], corners[(k + 1) % 3]);
        // N's third corner: the one farthest past the edge.
        let across = |x: &Vector| (x - p).dot(&out);
        let third = self.facets[other as usize]
            .from(origin)
            .into_iter()
            .max_by(|a, b| across(a).total_cmp(&across(b)))?;
        let reach = across(&third);
        if reach <= 0.0 {
            return None;
        }
        let tan = (third - p).dot(&normal) / reach;
        // Sides of the wedge, each as a point on it and a direction outward.
        let flat = third - normal * (third - p).dot(&normal);
        let side = |from: &Vector, to: &Vector| (*from, (to - from).cross(&normal));
        let walls = [
            side(&q, &corners[(k + 2) % 3]),
            side(&corners[(k + 2) % 3], &p),
            side(&p, &flat),
            side(&flat, &q),
        ];
        let mut most = 0.0_f64;
        for point in points {
            if walls.iter().any(|(at, out)| (point - at).dot(out) > 0.0) {
                return None;
            }
            let height = (point - p).dot(&normal);
            most = most
                .max(height.abs())
                .max((height - across(point) * tan).abs());
        }
        Some(most)
    }
}

/// Distance of a point from a triangle, from its plane where the foot is
/// inside, else from the nearest edge.
pub(in crate::mesh) fn to_triangle(point: &Vector, corners: &[Vector; 3]) -> f64 {
    let [a, b, c] = corners;
    let normal = (b - a).cross(&(c - a));
    let square = normal.norm_squared();
    let inside = |p: &Vector, q: &Vector| (q - p).cross(&(point - p)).dot(&normal) >= 0.0;
    if square > 0.0 && inside(a, b) && inside(b, c) && inside(c, a) {
        return ((point - a).dot(&normal) / square.sqrt()).abs();
    }
    to_segment(point, a, b)
        .min(to_segment(point, b, c))
        .min(to_segment(point, c, a))
}

/// Distance of a point from a segment.
pub(in crate::mesh) fn to_segment(point: &Vector, a: &Vector, b: &Vector) -> f64 {
    let along = b - a;
    let length = along.norm_squared();
    let t = if length > 0.0 {
        ((point - a).dot(&along) / length).clamp(0.0, 1.0)
    } else {
        0.0
    };
    (point - a - along * t).norm()
}
