//! One piece: laid out, improved, proved, refined until everything is proved.

use super::certificate::{Cell, Flat, Prover};
use super::correction::Correction;
use super::field::Field;
use super::lattice::Ground;
use super::layout::{INNER, Layout, layout};
use super::triangulation::{BORDER, Pole, TriangleEdge, is_proper};
use super::{planar, verdict};
use crate::bezier::BezierPatch;
use crate::sampling::Limits;
use crate::sampling::Outline;
use crate::sampling::ratio;
use crate::scalar::{Point, Vector};

/// An inner edge shorter than this in both parameters is not split again: the
/// surface is then too wild for its tolerance (or the gap too large), and the
/// run must fail and say where.
const SHORTEST: f64 = 1e-7;

/// Refinement may multiply the triangles of the layout by this, and add as
/// many as the second figure, before the piece is given up.
const GROWTH: usize = 40;
const GROWTH_BASE: usize = 20_000;

/// An exchange of diagonals must lower the larger error by this factor, so
/// that rounding cannot make it go round in circles.
const FLIP_GAIN: f64 = 1.0 - 1e-9;

/// A filled piece.
#[derive(Debug)]
pub struct Filled {
    /// Parameters of the vertices.
    pub places: Vec<[f64; 2]>,
    /// Their places in space.
    pub points: Vec<Point>,
    /// The border vertex each stands for, or `u32::MAX` for an inner one. On a
    /// collapsed side many stand for one.
    pub vertices: Vec<u32>,
    /// Triangles with area, counterclockwise in (u, v).
    pub triangles: Vec<[u32; 3]>,
    /// What was proved for the worst triangle.
    pub proved: Proved,
    /// A true deviation: the largest found at the triangles' peaks.
    pub attained: Attained,
}

/// Proved figures of the worst triangle.
#[derive(Debug, Clone, Copy, Default)]
pub struct Proved {
    /// Largest distance of the surface from the mesh.
    pub to_mesh: f64,
    /// Largest distance of the mesh from the surface.
    pub to_surface: f64,
}

/// A point of the surface and its distance from the triangle over it.
#[derive(Debug, Clone, Copy)]
pub struct Attained {
    /// Distance from the triangle's plane.
    pub distance: f64,
    /// Parameters on the piece.
    pub place: [f64; 2],
    /// The point itself.
    pub point: Point,
}

/// A piece that cannot be held to its limits.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Stuck {
    pub(crate) place: [f64; 2],
    pub(crate) point: Point,
    pub(crate) proved: f64,
}

pub(super) struct Work<'a> {
    surface: &'a BezierPatch,
    pub(super) limits: &'a Limits,
    field: &'a Field,
    pub(super) layout: Layout,
    normals: Vec<Option<Vector>>,
    pub(super) flats: Vec<Flat>,
    pub(super) cells: Vec<Cell>,
    stale: Vec<bool>,
    prover: Prover<'a>,
    figures: Vec<Proved>,
    ring: Vec<u32>,
}

/// Fills one piece with triangles that are proved within the limits.
///
/// The layout follows the second derivatives and may come out a hair too wide,
/// which refinement would answer by halving. So the first proof of a layout is
/// looked at as a whole, and the layout made again with what it taught, while
/// more than a few triangles away from the border fail. The most promising
/// layout is then refined.
pub(crate) fn fill(
    surface: &BezierPatch,
    outline: &Outline,
    limits: &Limits,
) -> Result<Filled, Stuck> {
    let field = Field::new(surface);
    let planar = planar::proof(surface, outline, limits);
    let mut ground = Ground {
        field: &field,
        limits,
        correction: Correction::none(),
    };
    let mut best: Option<Trial> = None;
    for _ in 0..LAYOUTS {
        let mut work = Work::new(surface, &field, limits, layout(surface, &ground, outline));
        let failed = work.round(planar);
        let inner = work.inner_failing(&failed);
        let cost = work.figures.len() + 2 * failed.len();
        let lesson = (inner > FEW).then(|| work.lesson());
        if best.as_ref().is_none_or(|b| cost < b.cost) {
            best = Some(Trial { work, failed, cost });
        }
        let Some(lesson) = lesson else { break };
        ground.correction.learn(lesson.into_iter());
    }
    let Trial {
        mut work, failed, ..
    } = best.expect("at least one layout is tried");
    let proved = work.prove(failed, planar)?;
    Ok(work.finish(proved))
}

/// Layouts tried at most.
const LAYOUTS: usize = 4;

/// A layout with no more than this share of failing inner triangles is refined
/// without another try.
const FEW: f64 = 0.04;

/// A layout that has been proved once.
struct Trial<'a> {
    work: Work<'a>,
    failed: Vec<u32>,
    /// Triangles, failing ones counted three times: about what refinement
    /// would make of them.
    cost: usize,
}

fn index(t: usize) -> u32 {
    u32::try_from(t).expect("a piece has far fewer than 2^32 triangles")
}

impl<'a> Work<'a> {
    fn new(surface: &'a BezierPatch, field: &'a Field, limits: &'a Limits, layout: Layout) -> Self {
        let count = layout.triangulation.triangles.len();
        let mut work = Self {
            surface,
            limits,
            field,
            normals: vec![None; layout.points.len()],
            layout,
            flats: Vec::new(),
            cells: Vec::new(),
            stale: vec![true; count],
            prover: Prover::new(surface),
            figures: Vec::new(),
            ring: Vec::new(),
        };
        let all = (0..count).flat_map(|t| (0..3).map(move |i| (index(t), i)));
        let mut edges: Vec<TriangleEdge> = all.collect();
        work.improve(&mut edges);
        work
    }

    fn error(&self, corners: [u32; 3]) -> f64 {
        let places = self.layout.triangulation.places_of(corners);
        self.field
            .estimate(places, corners.map(|v| self.layout.points[v as usize]))
    }

    /// Exchanges diagonals while that lowers the larger error of the two
    /// triangles beside them (Lawson's procedure with another criterion).
    fn improve(&mut self, edges: &mut Vec<TriangleEdge>) {
        let mut budget = 40 * (edges.len() + 100);
        while let Some(edge) = edges.pop() {
            let Some([a, b, c, d]) = self.layout.triangulation.quad(edge) else {
                continue;
            };
            let proper = |corners| is_proper(self.layout.triangulation.places_of(corners));
            if !proper([d, a, b]) || !proper([b, c, d]) {
                continue;
            }
            let now = self.error([a, c, d]).max(self.error([c, a, b]));
            let then = self.error([d, a, b]).max(self.error([b, c, d]));
            if then < now * FLIP_GAIN && budget > 0 {
                budget -= 1;
                let other = self.layout.triangulation.neighbours[edge.0 as usize][edge.1];
                self.stale[edge.0 as usize] = true;
                self.stale[other as usize] = true;
                edges.extend(self.layout.triangulation.flip(edge));
            }
        }
    }

    fn is_inner(&self, t: u32) -> bool {
        let corners = self.layout.triangulation.triangles[t as usize];
        corners
            .iter()
            .all(|&v| self.layout.vertices[v as usize] == INNER)
    }

    /// The share of failing triangles among those that do not touch the
    /// border; what touches it depends on the seams' samples as much.
    fn inner_failing(&self, failed: &[u32]) -> f64 {
        let all = (0..index(self.figures.len()))
            .filter(|&t| self.is_inner(t))
            .count();
        let bad = failed.iter().filter(|&&t| self.is_inner(t)).count();
        ratio(bad, all.max(1))
    }

    /// Where the inner triangles are, and how much of the chord they use.
    fn lesson(&self) -> Vec<([f64; 2], f64)> {
        (0..index(self.figures.len()))
            .filter(|&t| self.is_inner(t))
            .map(|t| {
                let figure = self.figures[t as usize];
                (
                    self.centre(t),
                    figure.to_mesh.max(figure.to_surface) / self.limits.chord,
                )
            })
            .collect()
    }

    fn centre(&self, t: u32) -> [f64; 2] {
        let [a, b, c] = self.layout.triangulation.corners(t);
        [(a[0] + b[0] + c[0]) / 3.0, (a[1] + b[1] + c[1]) / 3.0]
    }

    /// Brings all figures up to date; returns the triangles that fail.
    fn round(&mut self, planar: Option<f64>) -> Vec<u32> {
        let count = self.layout.triangulation.triangles.len();
        let stale: Vec<u32> = (0..index(count))
            .filter(|&t| self.stale[t as usize])
            .collect();
        self.measure(&stale);
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
        let mut prover = Prover::new(self.surface);
        let mut failed = Vec::new();
        for &t in &affected {
            let figure = match planar {
                Some(bound) => Proved {
                    to_mesh: bound,
                    to_surface: bound,
                },
                None => verdict::judge(self, &mut prover, t, &mut ring),
            };
            self.figures[t as usize] = figure;
            let within = figure.to_mesh.max(figure.to_surface) <= self.limits.chord;
            if !within || !self.keeps_shape(t) {
                failed.push(t);
            }
        }
        self.ring = ring;
        failed
    }

    /// Refines what failed until everything is proved; returns the figures of
    /// the worst triangle.
    fn prove(&mut self, mut failed: Vec<u32>, planar: Option<f64>) -> Result<Proved, Stuck> {
        let most = self.layout.triangulation.triangles.len() * GROWTH + GROWTH_BASE;
        while !failed.is_empty() {
            for t in failed {
                if self.stale[t as usize] {
                    continue;
                }
                let figure = self.figures[t as usize];
                if self.refine(t) || self.layout.triangulation.triangles.len() > most {
                    return Err(self.stuck(t, figure.to_mesh.max(figure.to_surface)));
                }
            }
            failed = self.round(planar);
        }
        Ok(self
            .figures
            .iter()
            .fold(Proved::default(), |worst, f| Proved {
                to_mesh: worst.to_mesh.max(f.to_mesh),
                to_surface: worst.to_surface.max(f.to_surface),
            }))
    }

    fn stuck(&self, t: u32, proved: f64) -> Stuck {
        let place = self.centre(t);
        Stuck {
            place,
            point: self.surface.eval(place[0], place[1]),
            proved,
        }
    }

    /// Brings flats and cells up to date.
    fn measure(&mut self, stale: &[u32]) {
        let count = self.layout.triangulation.triangles.len();
        self.flats.resize(count, Flat::new([Point::origin(); 3]));
        self.cells.resize(count, Cell::default());
        for &t in stale {
            let corners = self.layout.triangulation.triangles[t as usize];
            let flat = Flat::new(corners.map(|v| self.layout.points[v as usize]));
            self.flats[t as usize] = flat;
            self.cells[t as usize] = match self.layout.triangulation.pole_corner(corners) {
                None => self
                    .prover
                    .cell(self.layout.triangulation.corners(t), &flat, true),
                Some((k, pole)) => self.pole_cell(corners, k, pole, &flat),
            };
        }
    }

    /// The cell of a triangle at the pole is a trapezoid: the two parameter
    /// triangles it falls into, by one diagonal for what lies over the flat
    /// triangle, and by the other for the edge that diagonal does not end in.
    fn pole_cell(&mut self, corners: [u32; 3], k: usize, pole: Pole, flat: &Flat) -> Cell {
        let at = corners.map(|v| self.layout.triangulation.places[v as usize]);
        let (x, y) = (at[(k + 1) % 3], at[(k + 2) % 3]);
        let (below_x, below_y) = (pole.beside(x), pole.beside(y));
        let with_pole_at = |place: [f64; 2]| {
            let mut places = at;
            places[k] = place;
            places
        };
        let first = self.prover.cell(with_pole_at(below_x), flat, true);
        let other = self.prover.cell(with_pole_at(below_y), flat, true);
        let mut second = [[0.0; 2]; 3];
        second[k] = below_x;
        second[(k + 1) % 3] = y;
        second[(k + 2) % 3] = below_y;
        let second = self.prover.cell(second, flat, false);
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

    /// Whether the triangle keeps to the normal angle and the largest edge.
    fn keeps_shape(&mut self, t: u32) -> bool {
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
                    && turn(&a, &b) > limit
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
    fn refine(&mut self, t: u32) -> bool {
        let mut best: Option<(f64, usize)> = None;
        for i in 0..3 {
            let [a, b] = self.layout.triangulation.ends((t, i));
            let long = (a[0] - b[0]).abs().max((a[1] - b[1]).abs());
            let border = self.layout.triangulation.neighbours[t as usize][i] == BORDER;
            if border || long < SHORTEST {
                continue;
            }
            let error = self.cells[t as usize].edges[i].max(1e-3 * self.limits.chord * long);
            if best.is_none_or(|(most, _)| error > most) {
                best = Some((error, i));
            }
        }
        let border_error = (0..3)
            .filter(|&i| self.layout.triangulation.neighbours[t as usize][i] == BORDER)
            .map(|i| self.cells[t as usize].edges[i])
            .fold(0.0, f64::max);
        let Some((error, i)) = best else {
            return true;
        };
        let mut outer: Vec<TriangleEdge>;
        if error < 0.5 * border_error {
            let place = self.centre(t);
            self.add_vertex(place);
            outer = self.layout.triangulation.insert_inside(t, place).to_vec();
        } else {
            let [a, b] = self.layout.triangulation.ends((t, i));
            let place = [(a[0] + b[0]) / 2.0, (a[1] + b[1]) / 2.0];
            self.add_vertex(place);
            let other = self.layout.triangulation.neighbours[t as usize][i];
            self.stale[other as usize] = true;
            outer = self.layout.triangulation.insert_on_edge((t, i), place);
        }
        self.stale[t as usize] = true;
        self.stale
            .resize(self.layout.triangulation.triangles.len(), true);
        self.improve(&mut outer);
        false
    }

    fn add_vertex(&mut self, [u, v]: [f64; 2]) {
        self.layout.points.push(self.surface.eval(u, v));
        self.layout.vertices.push(INNER);
        self.normals.push(None);
    }

    /// Drops triangles without area and finds the largest true deviation.
    fn finish(mut self, proved: Proved) -> Filled {
        let mut attained = Attained {
            distance: 0.0,
            place: [0.5, 0.5],
            point: self.surface.eval(0.5, 0.5),
        };
        let mesh = &self.layout.triangulation;
        let mut places = mesh.places.clone();
        let mut triangles = Vec::with_capacity(mesh.triangles.len());
        for (t, &corners) in mesh.triangles.iter().enumerate() {
            let [a, b, c] = corners.map(|v| self.layout.vertices[v as usize]);
            let same = |x: u32, y: u32| x == y && x != INNER;
            if same(a, b) || same(b, c) || same(c, a) {
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
            let Some(normal) = self.flats[t].normal else {
                continue;
            };
            let around = mesh.corners(index(t));
            let peak = self.cells[t].peak;
            let at = |axis: usize| (0..3).map(|k| peak[k] * around[k][axis]).sum::<f64>();
            let point = self.surface.eval(at(0), at(1));
            let distance = (point - self.flats[t].corners[0]).dot(&normal).abs();
            if distance > attained.distance {
                attained = Attained {
                    distance,
                    place: [at(0), at(1)],
                    point,
                };
            }
        }
        Filled {
            places,
            points: self.layout.points,
            vertices: self.layout.vertices,
            triangles,
            proved,
            attained,
        }
    }
}

/// The angle between unit vectors.
fn turn(a: &Vector, b: &Vector) -> f64 {
    a.cross(b).norm().atan2(a.dot(b))
}
