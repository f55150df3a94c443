//! A piece at work: its triangulation, and what is known of each triangle.

use std::collections::HashSet;

use super::certificate::{Cell, Flat, Prover};
use super::field::Field;
use super::fill::{Attained, Filled, Proved, Stuck};
use super::interpolation::SecondDerivatives;
use super::layout::{INNER, Layout};
use super::triangulation::{BORDER, TriangleEdge, is_proper};
use super::verdict;
use crate::bezier::BezierPatch;
use crate::sampling::{Limits, ratio};
use crate::scalar::Vector;

/// Triangles of a piece whose true deviation is looked at.
const LOOKED_AT: usize = 48;

/// An exchange of diagonals must lower the larger error by this factor, so
/// that rounding cannot make it go round in circles.
const FLIP_GAIN: f64 = 1.0 - 1e-9;

pub(super) struct Work<'a> {
    pub(super) surface: &'a BezierPatch,
    pub(super) limits: &'a Limits,
    pub(super) field: &'a Field<'a>,
    pub(super) layout: Layout,
    pub(super) normals: Vec<Option<Vector>>,
    pub(super) flats: Vec<Flat>,
    pub(super) cells: Vec<Cell>,
    /// Whether a cell was bounded by its net.
    pub(super) by_net: Vec<bool>,
    pub(super) derivatives: &'a SecondDerivatives,
    /// Weight of the piece at every vertex, and how far the vertex is off it.
    pub(super) vertex_facts: Vec<[f64; 2]>,
    pub(super) stale: Vec<bool>,
    /// Estimated errors; NaN where not known.
    errors: Vec<f64>,
    pub(super) figures: Vec<Proved>,
    pub(super) ring: Vec<u32>,
}

pub(super) fn index(t: usize) -> u32 {
    u32::try_from(t).expect("a piece has far fewer than 2^32 triangles")
}

impl<'a> Work<'a> {
    pub(super) fn new(
        surface: &'a BezierPatch,
        field: &'a Field<'a>,
        derivatives: &'a SecondDerivatives,
        limits: &'a Limits,
        layout: Layout,
    ) -> Self {
        let count = layout.triangulation.triangles.len();
        let mut work = Self {
            surface,
            limits,
            field,
            normals: vec![None; layout.points.len()],
            layout,
            flats: Vec::new(),
            cells: Vec::new(),
            by_net: Vec::new(),
            derivatives,
            vertex_facts: Vec::new(),
            stale: vec![true; count],
            errors: vec![f64::NAN; count],
            figures: Vec::new(),
            ring: Vec::new(),
        };
        let neighbours = &work.layout.triangulation.neighbours;
        let all = (0..index(count)).flat_map(|t| (0..3).map(move |i| (t, i)));
        let mut edges: Vec<TriangleEdge> = all
            .filter(|&(t, i)| t < neighbours[t as usize][i])
            .filter(|&(t, i)| neighbours[t as usize][i] != BORDER)
            .collect();
        work.improve(&mut edges);
        work
    }

    fn error(&self, corners: [u32; 3]) -> f64 {
        let places = self.layout.triangulation.places_of(corners);
        let points = corners.map(|v| self.layout.points[v as usize]);
        self.field.estimate(places, points, self.limits)
    }

    /// Exchanges diagonals while that lowers the larger error of the two
    /// triangles beside them (Lawson's procedure with another criterion).
    pub(super) fn improve(&mut self, edges: &mut Vec<TriangleEdge>) {
        let mut budget = 40 * (edges.len() + 100);
        while let Some(edge) = edges.pop() {
            let Some([a, b, c, d]) = self.layout.triangulation.quad(edge) else {
                continue;
            };
            let proper = |corners| is_proper(self.layout.triangulation.places_of(corners));
            if !proper([d, a, b]) || !proper([b, c, d]) {
                continue;
            }
            let other = self.layout.triangulation.neighbours[edge.0 as usize][edge.1];
            let limit = self.known_error(edge.0).max(self.known_error(other)) * FLIP_GAIN;
            let first = self.error([d, a, b]);
            if first >= limit || budget == 0 {
                continue;
            }
            let second = self.error([b, c, d]);
            if second < limit {
                budget -= 1;
                self.touch(edge.0);
                self.touch(other);
                edges.extend(self.layout.triangulation.flip(edge));
                self.errors[edge.0 as usize] = first;
                self.errors[other as usize] = second;
            }
        }
    }

    /// The estimated error of a triangle, kept until it changes.
    fn known_error(&mut self, t: u32) -> f64 {
        if self.errors[t as usize].is_nan() {
            let corners = self.layout.triangulation.triangles[t as usize];
            self.errors[t as usize] = self.error(corners);
        }
        self.errors[t as usize]
    }

    /// Notes that a triangle has changed, or that new ones have come.
    pub(super) fn touch(&mut self, t: u32) {
        let count = self.layout.triangulation.triangles.len();
        self.stale.resize(count, true);
        self.errors.resize(count, f64::NAN);
        self.stale[t as usize] = true;
        self.errors[t as usize] = f64::NAN;
    }

    fn is_inner(&self, t: u32) -> bool {
        let corners = self.layout.triangulation.triangles[t as usize];
        corners
            .iter()
            .all(|&v| self.layout.vertices[v as usize] == INNER)
    }

    /// The share of failing triangles among those that do not touch the
    /// border; what touches it depends on the seams' samples as much.
    pub(super) fn inner_failing(&self, failed: &[u32]) -> f64 {
        let all = (0..index(self.figures.len()))
            .filter(|&t| self.is_inner(t))
            .count();
        let bad = failed.iter().filter(|&&t| self.is_inner(t)).count();
        ratio(bad, all.max(1))
    }

    /// Where the inner triangles are, and how much of the chord they use: by
    /// their rings, and without what interpolation adds for safety.
    pub(super) fn lesson(&self, prover: &mut Prover) -> Vec<([f64; 2], f64)> {
        let mut ring = Vec::new();
        (0..index(self.figures.len()))
            .filter(|&t| self.is_inner(t))
            .map(|t| {
                let cell = &self.cells[t as usize];
                let figure = verdict::closest(self, prover, t, &mut ring).largest();
                let used = (figure - (cell.height - cell.likely)) / self.limits.chord;
                (self.centre(t), used)
            })
            .collect()
    }

    pub(super) fn centre(&self, t: u32) -> [f64; 2] {
        let [a, b, c] = self.layout.triangulation.corners(t);
        [(a[0] + b[0] + c[0]) / 3.0, (a[1] + b[1] + c[1]) / 3.0]
    }

    /// Drops triangles without area and finds the largest true deviation.
    pub(super) fn finish(mut self, proved: Proved) -> Result<Filled, Stuck> {
        let attained = self.attained();
        let mesh = &self.layout.triangulation;
        let mut places = mesh.places.clone();
        let mut triangles = Vec::with_capacity(mesh.triangles.len());
        let mut dropped = Vec::new();
        for (t, &corners) in mesh.triangles.iter().enumerate() {
            let [a, b, c] = corners.map(|v| self.layout.vertices[v as usize]);
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
                self.layout
                    .points
                    .push(self.layout.points[corners[k] as usize]);
                self.layout
                    .vertices
                    .push(self.layout.vertices[corners[k] as usize]);
            }
            triangles.push(written);
        }
        if let Some(t) = self.uncovered(&dropped) {
            return Err(self.stuck(t, f64::INFINITY));
        }
        Ok(Filled {
            places,
            points: self.layout.points,
            vertices: self.layout.vertices,
            triangles,
            proved,
            attained,
        })
    }

    /// The largest deviation found at the places where the heights of the
    /// worst triangles are largest.
    fn attained(&self) -> Attained {
        let mut worst: Vec<u32> = (0..index(self.cells.len())).collect();
        let height = |t: &u32| self.cells[*t as usize].height;
        if worst.len() > LOOKED_AT {
            let order = |a: &u32, b: &u32| height(b).total_cmp(&height(a)).then(a.cmp(b));
            worst.select_nth_unstable_by(LOOKED_AT, order);
            worst.truncate(LOOKED_AT);
            worst.sort_unstable();
        }
        let mut attained = Attained {
            distance: 0.0,
            place: [0.5, 0.5],
            point: self.surface.eval(0.5, 0.5),
        };
        for t in worst {
            let flat = &self.flats[t as usize];
            let Some(normal) = flat.normal else {
                continue;
            };
            let around = self.layout.triangulation.corners(t);
            let peak = self.cells[t as usize].peak;
            let at = |axis: usize| (0..3).map(|k| peak[k] * around[k][axis]).sum::<f64>();
            let point = self.surface.eval(at(0), at(1));
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

    /// A dropped triangle whose remaining edge is in no triangle that is
    /// written. A triangle two of whose corners are one vertex was proved
    /// against that edge, which must then be in the mesh.
    fn uncovered(&self, dropped: &[u32]) -> Option<u32> {
        if dropped.is_empty() {
            return None;
        }
        let identity = |v: u32| match self.layout.vertices[v as usize] {
            INNER => (true, v),
            vertex => (false, vertex),
        };
        let corners_of = |t: u32| self.layout.triangulation.triangles[t as usize].map(identity);
        let edges_of = |t: u32| {
            let [a, b, c] = corners_of(t);
            [[a, b], [b, c], [c, a]].map(|[x, y]| [x.min(y), x.max(y)])
        };
        let unwritten: HashSet<u32> = dropped.iter().copied().collect();
        let written: HashSet<_> = (0..index(self.figures.len()))
            .filter(|t| !unwritten.contains(t))
            .flat_map(edges_of)
            .collect();
        dropped.iter().copied().find(|&t| {
            let remaining = edges_of(t).into_iter().find(|[x, y]| x != y);
            remaining.is_none_or(|edge| !written.contains(&edge))
        })
    }
}
