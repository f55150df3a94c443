//! Refinement: a vertex more where a triangle fails, until none does.

use super::certificate::Prover;
use super::fill::Stuck;
use super::layout::INNER;
use super::triangulation::{BORDER, TriangleEdge, doubled_area, is_proper};
use super::work::{Work, index};
use crate::scalar::{Vector, angle_rad};

/// An inner edge shorter than this in both parameters is not split again: the
/// surface is then too wild for its tolerance (or the gap too large), and the
/// run must fail and say where.
const SHORTEST: f64 = 1e-7;

/// Refinement may multiply the triangles of the layout by this, and add as
/// many as the second figure, before the piece is given up.
const GROWTH: usize = 40;
const GROWTH_BASE: usize = 20_000;

/// How often triangles that face inwards are looked for: what is put right may
/// leave others.
const TURNS: usize = 4;

/// The grid's normals are trusted where a facet agrees with them by more than
/// this, as a cosine.
const DOUBT: f64 = 0.5;

impl Work<'_> {
    /// Refines what failed until everything is proved.
    pub(super) fn prove(
        &mut self,
        prover: &mut Prover,
        mut failed: Vec<u32>,
        planar: Option<f64>,
    ) -> Result<(), Stuck> {
        let most = self.layout.triangulation.triangles.len() * GROWTH + GROWTH_BASE;
        for pass in 0..=TURNS {
            while !failed.is_empty() {
                for t in failed {
                    if self.stale[t as usize] {
                        continue;
                    }
                    let figure = self.figures[t as usize];
                    if self.refine(prover, t) || self.layout.triangulation.triangles.len() > most {
                        return Err(self.stuck(t, figure.largest()));
                    }
                }
                failed = self.round(prover, planar);
            }
            if pass < TURNS {
                failed = self.face_outwards(prover, planar);
            }
        }
        Ok(())
    }

    /// Exchanges diagonals of triangles that face inwards where what results
    /// is proved as well, and puts a vertex into those where that does not help.
    /// Such triangles are slivers, or the surface turns round in them; the bounds
    /// hold for them. Returns what fails after all.
    fn face_outwards(&mut self, prover: &mut Prover, planar: Option<f64>) -> Vec<u32> {
        let mut failed = Vec::new();
        let mut stubborn = Vec::new();
        for t in 0..index(self.figures.len()) {
            let corners = self.layout.triangulation.triangles[t as usize];
            let known = self.upright && !self.measured[t as usize];
            if known || !self.faces_inwards(corners) {
                continue;
            }
            if !self.turn(prover, planar, t, &mut failed) {
                stubborn.push(t);
            }
        }
        for t in stubborn {
            let corners = self.layout.triangulation.triangles[t as usize];
            if self.faces_inwards(corners) && !self.refine(prover, t) {
                failed.extend(self.round(prover, planar));
            }
        }
        failed.sort_unstable();
        failed.dedup();
        let chord = self.limits.chord;
        failed.retain(|&t| self.figures[t as usize].largest() > chord || !self.keeps_shape(t));
        failed
    }

    /// Exchanges an edge of a triangle so that both that come of it face outwards
    /// and are proved; false if there is none. What fails after an exchange that
    /// was taken back is added to `failed`.
    fn turn(
        &mut self,
        prover: &mut Prover,
        planar: Option<f64>,
        t: u32,
        failed: &mut Vec<u32>,
    ) -> bool {
        for i in 0..3 {
            let Some([a, b, c, d]) = self.layout.triangulation.quad((t, i)) else {
                continue;
            };
            let good = |corners| {
                is_proper(self.layout.triangulation.places_of(corners))
                    && !self.faces_inwards(corners)
            };
            if !good([d, a, b]) || !good([b, c, d]) {
                continue;
            }
            self.exchange((t, i));
            if self.round(prover, planar).is_empty() {
                return true;
            }
            // Flipping the new diagonal restores the old one.
            self.exchange((t, 2));
            failed.extend(self.round(prover, planar));
        }
        false
    }

    fn exchange(&mut self, (t, i): TriangleEdge) {
        let other = self.layout.triangulation.neighbours[t as usize][i];
        self.layout.triangulation.flip((t, i));
        self.touch(t);
        self.touch(other);
    }

    pub(super) fn faces_inwards(&self, corners: [u32; 3]) -> bool {
        let [a, b, c] = corners.map(|v| self.layout.points[v as usize]);
        let [p, q, r] = self.layout.triangulation.places_of(corners);
        let middle = [0, 1].map(|axis| (p[axis] + q[axis] + r[axis]) / 3.0);
        let facet = (b - a).cross(&(c - a));
        let against = |places: &[[f64; 2]]| {
            let rough: Vector = places.iter().map(|p| self.field.at(*p).normal).sum();
            facet.dot(&rough) <= DOUBT * facet.norm() && self.field.faces_inwards(facet, places)
        };
        // Against the normal in its middle, or against those at its corners,
        // which are what a mesh shows.
        against(&[middle]) || against(&[p, q, r])
    }

    pub(super) fn stuck(&self, t: u32, proved: f64) -> Stuck {
        let place = self.centre(t);
        Stuck {
            place,
            point: self.surface.eval(place[0], place[1]),
            proved,
        }
    }

    /// Whether the triangle keeps to the normal angle and the largest edge.
    pub(super) fn keeps_shape(&mut self, t: u32) -> bool {
        let corners = self.layout.triangulation.triangles[t as usize];
        if let Some(longest) = self.limits.max_edge {
            let points = corners.map(|v| self.layout.points[v as usize]);
            if (0..3).any(|k| (points[(k + 1) % 3] - points[k]).norm() > longest) {
                return false;
            }
        }
        if let Some(limit) = self.limits.normal_rad {
            if self.flats[t as usize].normal.is_none() {
                return true;
            }
            let places = self.layout.triangulation.corners(t);
            let pole = self.layout.triangulation.pole_corner(corners);
            let normals = [0, 1, 2].map(|k| match pole {
                Some((at, _)) if at == k => self.surface.normal(places[k][0], places[k][1]),
                _ => self.normal(corners[k]),
            });
            for k in 0..3 {
                if let (Some(a), Some(b)) = (normals[k], normals[(k + 1) % 3])
                    && angle_rad(&a, &b) > limit
                {
                    return false;
                }
            }
        }
        true
    }

    fn normal(&mut self, vertex: u32) -> Option<Vector> {
        let v = vertex as usize;
        if self.normals[v].is_none() {
            let [u, w] = self.layout.triangulation.places[v];
            self.normals[v] = self.surface.normal(u, w);
        }
        self.normals[v]
    }

    /// Puts a vertex where the triangle is worst; true if that cannot be done.
    fn refine(&mut self, prover: &mut Prover, t: u32) -> bool {
        // Which edge is worst needs the close figures.
        self.bound_by_net(prover, t);
        let mut best: Option<(f64, usize)> = None;
        for i in 0..3 {
            let [a, b] = self.layout.triangulation.ends((t, i));
            let long = (a[0] - b[0]).abs().max((a[1] - b[1]).abs());
            let border = self.layout.triangulation.neighbours[t as usize][i] == BORDER;
            if border || long < SHORTEST {
                continue;
            }
            let error = self.edge_error((t, i)).max(1e-3 * self.limits.chord * long);
            if best.is_none_or(|(most, _)| error > most) {
                best = Some((error, i));
            }
        }
        let border_error = (0..3)
            .filter(|&i| self.layout.triangulation.neighbours[t as usize][i] == BORDER)
            .map(|i| self.edge_error((t, i)))
            .fold(0.0, f64::max);
        let best = best.filter(|(error, _)| *error >= 0.5 * border_error);
        let mut outer: Vec<TriangleEdge>;
        let Some((_, i)) = best else {
            // The seams hold the edges: a vertex inside, if there is room.
            if doubled_area(self.layout.triangulation.corners(t)) < SHORTEST * SHORTEST {
                return true;
            }
            let place = self.centre(t);
            self.add_vertex(place);
            outer = self.layout.triangulation.insert_inside(t, place).to_vec();
            self.settle(t, &mut outer);
            return false;
        };
        let [a, b] = self.layout.triangulation.ends((t, i));
        let place = [(a[0] + b[0]) / 2.0, (a[1] + b[1]) / 2.0];
        self.add_vertex(place);
        let other = self.layout.triangulation.neighbours[t as usize][i];
        outer = self.layout.triangulation.insert_on_edge((t, i), place);
        self.touch(other);
        self.settle(t, &mut outer);
        false
    }

    /// Marks what a new vertex has changed, and improves round it.
    fn settle(&mut self, t: u32, outer: &mut Vec<TriangleEdge>) {
        self.touch(t);
        self.improve(outer);
    }

    /// How much an edge asks to be split: its distance from the surface, or
    /// what its length or the turn of the normal along it say, whichever is
    /// largest.
    fn edge_error(&self, (t, i): TriangleEdge) -> f64 {
        let corners = self.layout.triangulation.triangles[t as usize];
        let ends = [corners[i], corners[(i + 1) % 3]];
        let [a, b] = ends.map(|v| self.layout.points[v as usize]);
        let mut error =
            self.cells[t as usize].edges[i].max(self.limits.length_error((b - a).norm()));
        if self.limits.normal_rad.is_some() {
            let normals = self
                .layout
                .triangulation
                .ends((t, i))
                .map(|[u, v]| self.surface.normal(u, v));
            if let [Some(a), Some(b)] = normals {
                error = error.max(self.limits.turn_error(angle_rad(&a, &b)));
            }
        }
        error
    }

    fn add_vertex(&mut self, [u, v]: [f64; 2]) {
        self.layout.points.push(self.surface.eval(u, v));
        self.layout.vertices.push(INNER);
        self.normals.push(None);
    }
}
