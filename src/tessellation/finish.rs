//! From a proved layout to a filled piece.

use std::collections::HashSet;

use super::certificate::Flat;
use super::fill::{Attained, Filled, Proved};
use super::layout::{INNER, Layout};
use super::triangulation::{Pole, Triangulation};
use super::work::index;
use crate::bezier::BezierPatch;

/// A triangle to look at for its true deviation: parameters of its corners, the
/// flat triangle, and the barycentric place where it is about highest.
pub(super) type Candidate = ([[f64; 2]; 3], Flat, [f64; 3]);

/// The largest true deviation at the candidates' peaks.
pub(super) fn attained(
    surface: &BezierPatch,
    candidates: impl Iterator<Item = Candidate>,
) -> Attained {
    let mut attained = Attained {
        distance: 0.0,
        place: [0.5, 0.5],
        point: surface.eval(0.5, 0.5),
    };
    for (around, flat, peak) in candidates {
        let Some(normal) = flat.normal else {
            continue;
        };
        let at = |axis: usize| (0..3).map(|k| peak[k] * around[k][axis]).sum::<f64>();
        let point = surface.eval(at(0), at(1));
        let distance = (point - flat.corners[0]).dot(&normal).abs();
        if distance > attained.distance {
            attained = Attained {
                distance,
                place: [at(0), at(1)],
                point,
            };
        }
    }
    attained
}

impl Layout {
    /// Without the triangles that are `dead`, and the vertices only they have.
    pub(super) fn without(self, dead: &[bool]) -> Self {
        if !dead.contains(&true) {
            return self;
        }
        let mesh = &self.triangulation;
        let alive = |t: usize| !dead[t];
        let mut used = vec![u32::MAX; self.points.len()];
        for t in (0..mesh.triangles.len()).filter(|&t| alive(t)) {
            mesh.triangles[t].iter().for_each(|&v| used[v as usize] = 0);
        }
        let kept: Vec<usize> = (0..used.len()).filter(|&v| used[v] == 0).collect();
        for (new, &old) in kept.iter().enumerate() {
            used[old] = index(new);
        }
        let renumbered = |t: usize| mesh.triangles[t].map(|v| used[v as usize]);
        let triangles = (0..mesh.triangles.len()).filter(|&t| alive(t));
        let triangles = triangles.map(renumbered).collect();
        let pole = mesh.pole.map(|pole| Pole {
            vertex: used[pole.vertex as usize],
            side: pole.side,
        });
        let places = kept.iter().map(|&v| mesh.places[v]).collect();
        Self {
            triangulation: Triangulation::new(places, pole, triangles),
            points: kept.iter().map(|&v| self.points[v]).collect(),
            vertices: kept.iter().map(|&v| self.vertices[v]).collect(),
        }
    }

    /// Drops triangles without area. The error is the
    /// middle of a triangle that cannot be left out: two of its corners are one vertex, so it was proved against the edge
    /// that remains, which is in no triangle that is written.
    pub(super) fn finish(mut self, proved: Proved, attained: Attained) -> Result<Filled, [f64; 2]> {
        let mesh = &self.triangulation;
        let mut places = mesh.places.clone();
        let mut triangles = Vec::with_capacity(mesh.triangles.len());
        let mut dropped = Vec::new();
        for (t, &corners) in mesh.triangles.iter().enumerate() {
            let [a, b, c] = corners.map(|v| self.vertices[v as usize]);
            let same = |x: u32, y: u32| x == y && x != INNER;
            if same(a, b) || same(b, c) || same(c, a) {
                dropped.push(index(t));
                continue;
            }
            let mut written = corners;
            if let Some((k, _)) = mesh.pole_corner(corners) {
                // A pole has a parameter, and so a normal, in each triangle.
                written[k] = index(places.len());
                places.push(mesh.corners(index(t))[k]);
                self.points.push(self.points[corners[k] as usize]);
                self.vertices.push(self.vertices[corners[k] as usize]);
            }
            triangles.push(written);
        }
        if let Some(t) = self.uncovered(&dropped) {
            let [a, b, c] = mesh.corners(t);
            return Err([0, 1].map(|x| (a[x] + b[x] + c[x]) / 3.0));
        }
        Ok(Filled {
            places,
            points: self.points,
            vertices: self.vertices,
            triangles,
            proved,
            attained,
        })
    }

    /// A dropped triangle whose remaining edge is in no triangle that is
    /// written.
    fn uncovered(&self, dropped: &[u32]) -> Option<u32> {
        if dropped.is_empty() {
            return None;
        }
        let identity = |v: u32| match self.vertices[v as usize] {
            INNER => (true, v),
            vertex => (false, vertex),
        };
        let corners_of = |t: u32| self.triangulation.triangles[t as usize].map(identity);
        let edges_of = |t: u32| {
            let [a, b, c] = corners_of(t);
            [[a, b], [b, c], [c, a]].map(|[x, y]| [x.min(y), x.max(y)])
        };
        let unwritten: HashSet<u32> = dropped.iter().copied().collect();
        let written: HashSet<_> = (0..index(self.triangulation.triangles.len()))
            .filter(|t| !unwritten.contains(t))
            .flat_map(edges_of)
            .collect();
        dropped.iter().copied().find(|&t| {
            let remaining = edges_of(t).into_iter().find(|[x, y]| x != y);
            remaining.is_none_or(|edge| !written.contains(&edge))
        })
    }
}
