//! A piece at work: its triangulation, and what is known of each triangle.

use super::certificate::{Cell, Flat, Prover};
use super::field::Field;
use super::fill::{Filled, Proved, Stuck};
use super::finish;
use super::interpolation::SecondDerivatives;
use super::layout::Layout;
use super::sweep::Sweep;
use super::triangulation::{BORDER, TriangleEdge, is_proper};
use super::verdict;
use crate::bezier::BezierPatch;
use crate::sampling::Limits;
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
    /// Whether flat and cell of a triangle are up to date.
    pub(super) measured: Vec<bool>,
    /// Whether a triangle has changed since it was last judged.
    pub(super) stale: Vec<bool>,
    /// Those triangles, in the order in which they changed.
    changed: Vec<u32>,
    /// Triangles that are no more, once thinning has begun.
    pub(super) dead: Vec<bool>,
    /// Triangles known to be high.
    highest: Vec<u32>,
    /// Whether what has not been measured is known to face outwards.
    pub(super) upright: bool,
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
        let mut work = Self::unimproved(surface, field, derivatives, limits, layout);
        let all = 0..index(work.stale.len());
        work.improve(&mut work.inner_edges(all));
        work
    }

    /// A layout whose figures are known but for the triangles that failed.
    pub(super) fn swept(
        surface: &'a BezierPatch,
        field: &'a Field<'a>,
        derivatives: &'a SecondDerivatives,
        limits: &'a Limits,
        layout: Layout,
        sweep: Sweep,
    ) -> Self {
        let mut work = Self::unimproved(surface, field, derivatives, limits, layout);
        work.highest = sweep.highest.into_iter().map(|(t, _)| t).collect();
        work.upright = sweep.upright;
        work.figures = sweep.figures;
        work.stale.fill(false);
        work.changed.clear();
        sweep.failed.iter().for_each(|&t| work.touch(t));
        let mut doubtful = sweep.failed;
        if !sweep.upright {
            // Exchanges do away with most that face inwards.
            let all = 0..index(work.stale.len());
            let corners = |t: u32| work.layout.triangulation.triangles[t as usize];
            doubtful.extend(all.filter(|&t| work.faces_inwards(corners(t))));
            doubtful.sort_unstable();
            doubtful.dedup();
        }
        work.improve(&mut work.inner_edges(doubtful.into_iter()));
        work
    }

    fn unimproved(
        surface: &'a BezierPatch,
        field: &'a Field<'a>,
        derivatives: &'a SecondDerivatives,
        limits: &'a Limits,
        layout: Layout,
    ) -> Self {
        let count = layout.triangulation.triangles.len();
        Self {
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
            measured: vec![false; count],
            stale: vec![true; count],
            changed: (0..index(count)).collect(),
            dead: Vec::new(),
            highest: Vec::new(),
            upright: false,
            errors: vec![f64::NAN; count],
            figures: Vec::new(),
            ring: Vec::new(),
        }
    }

    /// The edges of some triangles that have triangles on both sides, each once
    /// where both are among them.
    fn inner_edges(&self, triangles: impl Iterator<Item = u32>) -> Vec<TriangleEdge> {
        let neighbours = &self.layout.triangulation.neighbours;
        triangles
            .flat_map(|t| (0..3).map(move |i| (t, i)))
            .filter(|&(t, i)| neighbours[t as usize][i] != BORDER)
            .filter(|&(t, i)| {
                let other = neighbours[t as usize][i];
                t < other || !self.stale[other as usize]
            })
            .collect()
    }

    pub(super) fn error(&self, corners: [u32; 3]) -> f64 {
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
        self.changed.extend(index(self.stale.len())..index(count));
        self.stale.resize(count, true);
        self.measured.resize(count, false);
        self.errors.resize(count, f64::NAN);
        if !std::mem::replace(&mut self.stale[t as usize], true) {
            self.changed.push(t);
        }
        self.forget(t);
    }

    /// What was known of a triangle holds no longer.
    pub(super) fn forget(&mut self, t: u32) {
        self.measured[t as usize] = false;
        self.errors[t as usize] = f64::NAN;
    }

    /// The triangles that have changed since they were last judged, in order;
    /// they are to be judged now.
    pub(super) fn take_changed(&mut self) -> Vec<u32> {
        let mut changed = std::mem::take(&mut self.changed);
        changed.sort_unstable();
        for &t in &changed {
            self.stale[t as usize] = false;
        }
        changed
    }

    /// Where the inner triangles are, and how much of the chord they use: by
    /// their rings, and without what interpolation adds for safety.
    pub(super) fn lesson(&self, prover: &mut Prover) -> Vec<([f64; 2], f64)> {
        let mut ring = Vec::new();
        (0..index(self.figures.len()))
            .filter(|&t| self.layout.is_inner(t))
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

    /// The filled piece, with the largest true deviation found at the places
    /// where the heights of the worst triangles are largest.
    pub(super) fn finish(mut self, prover: &mut Prover, proved: Proved) -> Result<Filled, Stuck> {
        let highest = std::mem::take(&mut self.highest);
        let dead = std::mem::take(&mut self.dead);
        let alive = |t: u32| dead.get(t as usize) != Some(&true);
        for t in highest.into_iter().filter(|&t| alive(t)) {
            self.measure(prover, t);
        }
        let mut worst: Vec<u32> = (0..index(self.cells.len()))
            .filter(|&t| self.measured[t as usize] && alive(t))
            .collect();
        let height = |t: &u32| self.cells[*t as usize].height;
        if worst.len() > LOOKED_AT {
            let order = |a: &u32, b: &u32| height(b).total_cmp(&height(a)).then(a.cmp(b));
            worst.select_nth_unstable_by(LOOKED_AT, order);
            worst.truncate(LOOKED_AT);
            worst.sort_unstable();
        }
        let candidates = worst.iter().map(|&t| {
            let peak = self.cells[t as usize].peak;
            let places = self.layout.triangulation.corners(t);
            (places, self.flats[t as usize], peak)
        });
        let attained = finish::attained(self.surface, candidates);
        let surface = self.surface;
        self.layout
            .without(&dead)
            .finish(proved, attained)
            .map_err(|place| Stuck::uncovered(surface, place))
    }
}
