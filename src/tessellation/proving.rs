//! Figures for the triangles of a piece, brought up to date after changes: by
//! interpolation where that does, by nets where it does not.

use super::certificate::{Cell, Flat, Prover};
use super::fill::Proved;
use super::layout::INNER;
use super::triangulation::Pole;
use super::verdict;
use super::work::Work;
use crate::scalar::Point;

/// A height likely above this part of the chord is so by any bound.
const HOPELESS: f64 = 1.1;

/// How often a part of a cell at the pole is quartered: hulls of its curved edge are
/// by a third too wide at first, and by a fortieth then.
const QUARTERED: usize = 2;

impl Work<'_> {
    /// Brings all figures up to date; returns the triangles that fail.
    pub(super) fn round(&mut self, prover: &mut Prover, planar: Option<f64>) -> Vec<u32> {
        let count = self.layout.triangulation.triangles.len();
        let changed = self.take_changed();
        self.make_room(count);
        self.figures.resize(count, Proved::default());
        let mut ring = std::mem::take(&mut self.ring);
        let affected = if changed.len() < count {
            self.with_rings(changed, &mut ring)
        } else {
            changed
        };
        let mut failed = Vec::new();
        for &t in &affected {
            self.measure(prover, t);
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

    /// Some triangles and those round them, in order.
    pub(super) fn with_rings(&self, mut triangles: Vec<u32>, ring: &mut Vec<u32>) -> Vec<u32> {
        for k in 0..triangles.len() {
            self.layout.triangulation.ring(triangles[k], ring);
            triangles.extend_from_slice(ring);
        }
        triangles.sort_unstable();
        triangles.dedup();
        triangles
    }

    /// The figures of a triangle: from the bounds at hand, from its own net
    /// where these do not do, and from the nets of its ring where that does not.
    pub(super) fn judge(&mut self, prover: &mut Prover, t: u32, ring: &mut Vec<u32>) -> Proved {
        let chord = self.limits.chord;
        self.measure(prover, t);
        let alone = verdict::alone(self, t);
        if alone.largest() <= chord {
            return alone;
        }
        self.layout.triangulation.ring(t, ring);
        ring.iter().for_each(|&member| self.measure(prover, member));
        let mut figure = verdict::judge(self, prover, t, ring);
        if figure.largest() <= chord || self.cells[t as usize].likely > HOPELESS * chord {
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

    fn make_room(&mut self, count: usize) {
        self.flats.resize(count, Flat::new([Point::origin(); 3]));
        self.cells.resize(count, Cell::default());
        self.by_net.resize(count, false);
        for v in self.vertex_facts.len()..self.layout.points.len() {
            self.vertex_facts.push(self.facts(v));
        }
    }

    /// Brings flat and cell of a triangle up to date, the cell by interpolation
    /// where that gives a bound.
    pub(super) fn measure(&mut self, prover: &mut Prover, t: u32) {
        if std::mem::replace(&mut self.measured[t as usize], true) {
            return;
        }
        let corners = self.layout.triangulation.triangles[t as usize];
        let flat = Flat::new(corners.map(|v| self.layout.points[v as usize]));
        self.flats[t as usize] = flat;
        self.by_net[t as usize] = false;
        // Towards a pole parameter lines wander sideways so far that
        // interpolation would be too wide a bound.
        let quick = if self.layout.triangulation.pole.is_none() {
            let places = self.layout.triangulation.corners(t);
            let facts = corners.map(|v| self.vertex_facts[v as usize]);
            let off = facts[0][1].max(facts[1][1]).max(facts[2][1]);
            let weights = facts.map(|fact| fact[0]);
            self.derivatives
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

    /// Weight of the piece at a vertex, and the vertex's distance from it.
    fn facts(&self, v: usize) -> [f64; 2] {
        let place = self.layout.triangulation.places[v];
        let off = if self.layout.vertices[v] == INNER {
            0.0
        } else {
            (self.surface.eval(place[0], place[1]) - self.layout.points[v]).norm()
        };
        [self.derivatives.weight(place), off]
    }

    /// Bounds a cell by its net; false if it is already.
    pub(super) fn bound_by_net(&mut self, prover: &mut Prover, t: u32) -> bool {
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

    /// The cell of a triangle at the pole is a trapezoid, bounded in pieces. Its
    /// edges are those of the two parameter triangles it falls into by one
    /// diagonal, and of the other for the edge that diagonal does not end in.
    fn pole_cell(
        &self,
        prover: &mut Prover,
        corners: [u32; 3],
        k: usize,
        pole: Pole,
        flat: &Flat,
    ) -> Cell {
        let at = corners.map(|v| self.layout.triangulation.places[v as usize]);
        let mut with_pole_at = |place: [f64; 2]| {
            let mut places = at;
            places[k] = pole.beside(place);
            prover.cell(places, flat, true)
        };
        let (first, other) = (with_pole_at(at[(k + 1) % 3]), with_pole_at(at[(k + 2) % 3]));
        let mut edges = first.edges;
        edges[(k + 2) % 3] = other.edges[(k + 2) % 3];
        let mut whole = Cell {
            edges,
            peak: first.peak,
            ..Cell::default()
        };
        for places in self.layout.triangulation.cell(corners) {
            self.bound_part(prover, places, flat, QUARTERED, &mut whole);
        }
        whole
    }

    /// Joins what is proved of a part of a cell; in quarters, so many times over,
    /// where that is more than the chord.
    fn bound_part(
        &self,
        prover: &mut Prover,
        places: [[f64; 2]; 3],
        flat: &Flat,
        times: usize,
        whole: &mut Cell,
    ) {
        let part = prover.cell(places, flat, false);
        if part.direct > self.limits.chord && part.likely <= self.limits.chord && times > 0 {
            for quarter in quarters(places) {
                self.bound_part(prover, quarter, flat, times - 1, whole);
            }
            return;
        }
        whole.height = whole.height.max(part.height);
        whole.sideways = whole.sideways.max(part.sideways);
        whole.direct = whole.direct.max(part.direct);
        whole.likely = whole.likely.max(part.likely);
    }
}

/// A parameter triangle by the middles of its edges.
fn quarters([a, b, c]: [[f64; 2]; 3]) -> [[[f64; 2]; 3]; 4] {
    let middle = |x: [f64; 2], y: [f64; 2]| [0, 1].map(|axis| (x[axis] + y[axis]) / 2.0);
    let (ab, bc, ca) = (middle(a, b), middle(b, c), middle(c, a));
    [[a, ab, ca], [ab, b, bc], [ca, bc, c], [ab, bc, ca]]
}
