//! A piece at work: its triangulation, and what is known of each triangle.

use std::collections::HashSet;

use super::certificate::{Cell, Flat, Prover};
use super::field::Field;
use super::fill::{Attained, Filled, Proved, Stuck};
use super::interpolation::SecondDerivatives;
use super::layout::{INNER, Layout};
use super::triangulation::{BORDER, Pole, TriangleEdge, is_proper};
use super::verdict;
use crate::bezier::BezierPatch;
use crate::sampling::{Limits, ratio};
use crate::scalar::{Point, Vector};

/// Triangles of a piece whose true deviation is looked at.
const LOOKED_AT: usize = 48;

/// A height above this part of the chord by interpolation is above the chord
/// by any bound.
const HOPELESS: f64 = 1.25;

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
    by_net: Vec<bool>,
    seconds: &'a SecondDerivatives,
    /// Weight of the piece at every vertex, and how far the vertex is off it.
    vertex_facts: Vec<[f64; 2]>,
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
        seconds: &'a SecondDerivatives,
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
            seconds,
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

    /// Where the inner triangles are, and how much of the chord they use.
    pub(super) fn lesson(&self) -> Vec<([f64; 2], f64)> {
        (0..index(self.figures.len()))
            .filter(|&t| self.is_inner(t))
            .map(|t| {
                let figure = self.figures[t as usize];
                (self.centre(t), figure.largest() / self.limits.chord)
            })
            .collect()
    }

    pub(super) fn centre(&self, t: u32) -> [f64; 2] {
        let [a, b, c] = self.layout.triangulation.corners(t);
        [(a[0] + b[0] + c[0]) / 3.0, (a[1] + b[1] + c[1]) / 3.0]
    }

    /// Brings all figures up to date; returns the triangles that fail.
    pub(super) fn round(&mut self, prover: &mut Prover, planar: Option<f64>) -> Vec<u32> {
        let count = self.layout.triangulation.triangles.len();
        let stale: Vec<u32> = (0..index(count))
            .filter(|&t| self.stale[t as usize])
            .collect();
        self.measure(prover, &stale);
        self.figures.resize(count, Proved::default());
        let mut ring = std::mem::take(&mut self.ring);
        let mut affected = stale.clone();
        if stale.len() < count {
            for &t in &stale {
                self.layout.triangulation.ring(t, &mut ring);
                affected.extend_from_slice(&ring);
            }
            affected.sort_unstable();
            affected.dedup();
        }
        for &t in &stale {
            self.stale[t as usize] = false;
        }
        let mut failed = Vec::new();
        for &t in &affected {
            let figure = match planar {
                Some(bound) => Proved {
                    to_mesh: bound,
                    to_surface: bound,
                },
                None => self.judge(prover, t, &mut ring),
            };
            self.figures[t as usize] = figure;
            if figure.largest() > self.limits.chord || !self.keeps_shape(t) {
                failed.push(t);
            }
        }
        self.ring = ring;
        failed
    }

    /// The figures of a triangle: from the bounds at hand, from its own net
    /// where these do not do, and from the nets of its ring where that does not.
    fn judge(&mut self, prover: &mut Prover, t: u32, ring: &mut Vec<u32>) -> Proved {
        let chord = self.limits.chord;
        let mut figure = verdict::judge(self, prover, t, ring);
        if figure.largest() <= chord || self.cells[t as usize].height > HOPELESS * chord {
            return figure;
        }
        if self.bound_by_net(prover, t) {
            figure = verdict::judge(self, prover, t, ring);
        }
        if figure.largest() > chord && self.cells[t as usize].height <= chord {
            self.layout.triangulation.ring(t, ring);
            let mut any = false;
            for member in ring.clone() {
                any |= self.bound_by_net(prover, member);
            }
            if any {
                figure = verdict::judge(self, prover, t, ring);
            }
        }
        figure
    }

    /// Brings flats and cells up to date, cells by interpolation where that
    /// gives a bound.
    fn measure(&mut self, prover: &mut Prover, stale: &[u32]) {
        let count = self.layout.triangulation.triangles.len();
        self.flats.resize(count, Flat::new([Point::origin(); 3]));
        self.cells.resize(count, Cell::default());
        self.by_net.resize(count, false);
        for v in self.vertex_facts.len()..self.layout.points.len() {
            self.vertex_facts.push(self.facts(v));
        }
        for &t in stale {
            let corners = self.layout.triangulation.triangles[t as usize];
            let flat = Flat::new(corners.map(|v| self.layout.points[v as usize]));
            self.flats[t as usize] = flat;
            self.by_net[t as usize] = false;
            let quick = if self.layout.triangulation.pole_corner(corners).is_none() {
                let places = self.layout.triangulation.corners(t);
                let facts = corners.map(|v| self.vertex_facts[v as usize]);
                let off = facts[0][1].max(facts[1][1]).max(facts[2][1]);
                let weights = facts.map(|fact| fact[0]);
                self.seconds
                    .cell(places, weights, &flat, off, prover.slack())
            } else {
                None
            };
            match quick {
                Some(cell) => self.cells[t as usize] = cell,
                None => {
                    self.bound_by_net(prover, t);
                }
            }
        }
    }

    /// Weight of the piece at a vertex, and the vertex's distance from it.
    fn facts(&self, v: usize) -> [f64; 2] {
        let place = self.layout.triangulation.places[v];
        let off = if self.layout.vertices[v] == INNER {
            0.0
        } else {
            (self.surface.eval(place[0], place[1]) - self.layout.points[v]).norm()
        };
        [self.seconds.weight(place), off]
    }

    /// Bounds a cell by its net; false if it is already.
    fn bound_by_net(&mut self, prover: &mut Prover, t: u32) -> bool {
        if std::mem::replace(&mut self.by_net[t as usize], true) {
            return false;
        }
        let corners = self.layout.triangulation.triangles[t as usize];
        let flat = self.flats[t as usize];
        self.cells[t as usize] = match self.layout.triangulation.pole_corner(corners) {
            None => prover.cell(self.layout.triangulation.corners(t), &flat, true),
            Some((k, pole)) => self.pole_cell(prover, corners, k, pole, &flat),
        };
        true
    }

    /// The cell of a triangle at the pole is a trapezoid: the two parameter
    /// triangles it falls into, by one diagonal for what lies over the flat
    /// triangle, and by the other for the edge that diagonal does not end in.
    fn pole_cell(
        &self,
        prover: &mut Prover,
        corners: [u32; 3],
        k: usize,
        pole: Pole,
        flat: &Flat,
    ) -> Cell {
        let at = corners.map(|v| self.layout.triangulation.places[v as usize]);
        let (x, y) = (at[(k + 1) % 3], at[(k + 2) % 3]);
        let (below_x, below_y) = (pole.beside(x), pole.beside(y));
        let with_pole_at = |place: [f64; 2]| {
            let mut places = at;
            places[k] = place;
            places
        };
        let first = prover.cell(with_pole_at(below_x), flat, true);
        let other = prover.cell(with_pole_at(below_y), flat, true);
        let mut second = [[0.0; 2]; 3];
        second[k] = below_x;
        second[(k + 1) % 3] = y;
        second[(k + 2) % 3] = below_y;
        let second = prover.cell(second, flat, false);
        let mut edges = first.edges;
        edges[(k + 2) % 3] = other.edges[(k + 2) % 3];
        Cell {
            height: first.height.max(second.height),
            sideways: first.sideways.max(second.sideways),
            direct: first.direct.max(second.direct),
            edges,
            peak: first.peak,
        }
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
