//! A patch as one surface on the unit square, whatever its pieces.

use std::cmp::Ordering;
use std::collections::BinaryHeap;

use crate::bezier::BezierPatch;
use crate::patch_set::{Patch, PatchSet, Piece};
use crate::scalar::{Cuboid, Point};

/// Parts after which a search for the nearest point ends.
const PARTS: usize = 1500;

/// A patch with its parameters brought to the unit square.
#[derive(Debug)]
pub(super) struct Sheet<'a> {
    pieces: &'a [Piece],
    /// Where pieces end, in u and v, from 0 to 1.
    pub(super) breaks: [Vec<f64>; 2],
    own: [[f64; 2]; 2],
}

/// A distance from a point: proved to be no less, and met at a place.
#[derive(Debug, Clone, Copy)]
pub(super) struct Reach {
    pub(super) at_least: f64,
    pub(super) met: f64,
    pub(super) at: [f64; 2],
}

/// A part of a piece, for the heap: the nearest first.
struct Part {
    surface: BezierPatch,
    u: [f64; 2],
    v: [f64; 2],
    lower: f64,
}

impl<'a> Sheet<'a> {
    pub(super) fn new(set: &'a PatchSet, patch: &Patch) -> Self {
        let unit = |breaks: &[f64]| -> ([f64; 2], Vec<f64>) {
            let (from, to) = (breaks[0], breaks[breaks.len() - 1]);
            let scaled = breaks.iter().map(|t| (t - from) / (to - from));
            ([from, to], scaled.collect())
        };
        let (u, breaks_u) = unit(&patch.breaks_u);
        let (v, breaks_v) = unit(&patch.breaks_v);
        Self {
            pieces: &set.pieces()[patch.pieces.clone()],
            breaks: [breaks_u, breaks_v],
            own: [u, v],
        }
    }

    /// The patch's own (u, v) of a place on the unit square.
    pub(super) fn parameters(&self, at: [f64; 2]) -> [f64; 2] {
        [0, 1].map(|k| self.own[k][0] * (1.0 - at[k]) + self.own[k][1] * at[k])
    }

    /// The piece that holds a place, and its range in u and v.
    fn piece(&self, at: [f64; 2]) -> (&'a BezierPatch, [[f64; 2]; 2]) {
        let cell = [0, 1].map(|k| {
            let inner = &self.breaks[k][1..self.breaks[k].len() - 1];
            inner.partition_point(|b| *b <= at[k])
        });
        let index = cell[0] * (self.breaks[1].len() - 1) + cell[1];
        let range = [0, 1].map(|k| [self.breaks[k][cell[k]], self.breaks[k][cell[k] + 1]]);
        (&self.pieces[index].surface, range)
    }

    pub(super) fn eval(&self, at: [f64; 2]) -> Point {
        let (surface, range) = self.piece(at);
        let [u, v] = [0, 1].map(|k| within(range[k], at[k]));
        surface.eval(u, v)
    }

    /// The part over a rectangle, whose limits may be exchanged; `None` where
    /// it is not of one piece.
    pub(super) fn part(&self, u: [f64; 2], v: [f64; 2]) -> Option<BezierPatch> {
        let middle = [u[0].midpoint(u[1]), v[0].midpoint(v[1])];
        let (surface, range) = self.piece(middle);
        let mut local = [[0.0; 2]; 2];
        for (k, rectangle) in [u, v].into_iter().enumerate() {
            for (end, t) in local[k].iter_mut().zip(rectangle) {
                let x = within(range[k], t);
                // Ends of pieces are met to rounding, and then exactly.
                *end = match x {
                    x if x.abs() <= 1e-12 => 0.0,
                    x if (x - 1.0).abs() <= 1e-12 => 1.0,
                    x if (0.0..=1.0).contains(&x) => x,
                    _ => return None,
                };
            }
        }
        Some(surface.restrict(local[0], local[1]))
    }

    /// The place nearest to a point by Newton's method from `guess`, and its
    /// distance: a local minimum.
    pub(super) fn nearest_from(&self, point: &Point, guess: [f64; 2]) -> ([f64; 2], f64) {
        let mut best = (guess, (self.eval(guess) - point).norm());
        let mut at = guess;
        for _ in 0..16 {
            let (surface, range) = self.piece(at);
            let [u, v] = [0, 1].map(|k| within(range[k], at[k]));
            let jet = surface.jet(u, v);
            let Some(step) = jet.steps_along(&(point - jet.point), 1e-12) else {
                break;
            };
            at = [0, 1].map(|k| {
                let wide = range[k][1] - range[k][0];
                (at[k] + step[k] * wide).clamp(0.0, 1.0)
            });
            let distance = (self.eval(at) - point).norm();
            if distance < best.1 {
                let enough = distance > best.1 * (1.0 - 1e-9);
                best = (at, distance);
                if enough {
                    break;
                }
            }
        }
        best
    }

    /// The distance of a point, bracketed to one in a thousand, or as far as
    /// the parts go. Below `floor` it is as good as none.
    ///
    /// A part is no nearer than the box of its control points, nor than the
    /// plane through the nearest of them square to the direction looked in
    /// (convex hull property).
    pub(super) fn reach(&self, point: &Point, guess: [f64; 2], floor: f64) -> Reach {
        let (at, met) = self.nearest_from(point, guess);
        let mut found = Reach {
            at_least: met,
            met,
            at,
        };
        let columns = self.breaks[1].len() - 1;
        let mut heap: BinaryHeap<Part> = (0..self.pieces.len())
            .map(|k| {
                let (i, j) = (k / columns, k % columns);
                let surface = self.pieces[k].surface.clone();
                Part {
                    lower: lower(&surface, point),
                    surface,
                    u: [self.breaks[0][i], self.breaks[0][i + 1]],
                    v: [self.breaks[1][j], self.breaks[1][j + 1]],
                }
            })
            .collect();
        for _ in 0..PARTS {
            let Some(part) = heap.pop() else { break };
            if found.met <= floor || part.lower >= found.met * 0.999 {
                found.at_least = part.lower.min(found.met);
                return found;
            }
            found.at_least = part.lower;
            let middle = [part.u[0].midpoint(part.u[1]), part.v[0].midpoint(part.v[1])];
            let (at, met) = self.nearest_from(point, middle);
            if met < found.met {
                (found.at, found.met) = (at, met);
            }
            let (long, wide) = extent(&part.surface);
            let halves: [([f64; 2], [f64; 2]); 2] = if long >= wide {
                [([0.0, 0.5], [0.0, 1.0]), ([0.5, 1.0], [0.0, 1.0])]
            } else {
                [([0.0, 1.0], [0.0, 0.5]), ([0.0, 1.0], [0.5, 1.0])]
            };
            let share =
                |range: [f64; 2], t: [f64; 2]| t.map(|t| range[0] * (1.0 - t) + range[1] * t);
            for (u, v) in halves {
                let surface = part.surface.restrict(u, v);
                let lower = lower(&surface, point).max(part.lower);
                heap.push(Part {
                    surface,
                    u: share(part.u, u),
                    v: share(part.v, v),
                    lower,
                });
            }
        }
        found.at_least = heap
            .peek()
            .map_or(found.at_least, |part| part.lower)
            .min(found.met);
        found
    }
}

fn within(range: [f64; 2], t: f64) -> f64 {
    (t - range[0]) / (range[1] - range[0])
}

/// Rough length and width.
fn extent(surface: &BezierPatch) -> (f64, f64) {
    let (m, n) = surface.degree();
    let corner = |i, j| surface.control_point(i, j);
    let long = (corner(m, 0) - corner(0, 0)).norm() + (corner(m, n) - corner(0, n)).norm();
    let wide = (corner(0, n) - corner(0, 0)).norm() + (corner(m, n) - corner(m, 0)).norm();
    (long, wide)
}

/// A proved lower bound on the distance of a point from a part.
fn lower(surface: &BezierPatch, point: &Point) -> f64 {
    let boxed = Cuboid::around(surface.control_points()).distance(point);
    let towards = surface.eval(0.5, 0.5) - point;
    let norm = towards.norm();
    if norm <= 0.0 {
        return boxed;
    }
    let along = surface
        .control_points()
        .map(|p| (p - point).dot(&towards) / norm)
        .fold(f64::INFINITY, f64::min);
    boxed.max(along)
}

impl Ord for Part {
    fn cmp(&self, other: &Self) -> Ordering {
        other
            .lower
            .total_cmp(&self.lower)
            .then(other.u[0].total_cmp(&self.u[0]))
            .then(other.v[0].total_cmp(&self.v[0]))
    }
}

impl PartialOrd for Part {
    fn partial_cmp(&self, other: &Self) -> Option<Ordering> {
        Some(self.cmp(other))
    }
}

impl PartialEq for Part {
    fn eq(&self, other: &Self) -> bool {
        self.cmp(other).is_eq()
    }
}

impl Eq for Part {}
