//! The distance of two patches: the Hausdorff distance of the surfaces,
//! bracketed.
//!
//! ```text
//! A(u, v) - B(u, v) = sum d_ij w_ij B_ij / sum w_ij B_ij,   |A - B| <= max |d_ij|
//! ```
//!
//! Both are cut into cells along the ends of either's pieces. Over a cell the
//! difference at equal parameters is a rational patch with positive weights
//! (the product of both), so its control points bound it (convex hull
//! property), and with it the distance both ways: a surface written in another
//! degree, in more pieces or with u and v exchanged is at no distance but for
//! rounding. What slid within itself is nearer than equal parameters say; so
//! a cell is also held against the part of the other surface that lies opposite
//! its middle, one way and then the other. The cell with the largest bound is
//! quartered until the bound meets what is attained: the proved distance of a
//! point of one surface from the whole of the other.

use std::cmp::Ordering;
use std::collections::BinaryHeap;

use super::course::Course;
use super::sheet::Sheet;
use crate::bezier::{BezierPatch, binomial};
use crate::scalar::{Bracket, Point, Vector};

/// Cells after which a bracket stays as wide as it is.
const CELLS: usize = 600;

/// A bracket stops being narrowed at this ratio.
const RATIO: f64 = 1.015;

/// Candidates whose distance is proved.
const CANDIDATES: usize = 4;

/// A bracketed distance, and where its attained figure is.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Distance {
    /// Hausdorff distance of the two surfaces.
    pub bracket: Bracket,
    /// The point that is so far from the other surface.
    pub at: Point,
    /// The old patch's own (u, v) there.
    pub old: [f64; 2],
    /// The new patch's own (u, v) there.
    pub new: [f64; 2],
}

/// A cell of one surface.
struct Cell {
    u: [f64; 2],
    v: [f64; 2],
    upper: f64,
}

/// A point that seems far off.
#[derive(Debug, Clone, Copy)]
struct Candidate {
    distance: f64,
    /// Whether it is a point of the old surface.
    on_old: bool,
    at: [f64; 2],
    foot: [f64; 2],
}

/// Two surfaces, seen from one of them.
struct View<'a, 'b> {
    here: &'b Sheet<'a>,
    there: &'b Sheet<'a>,
    course: Course,
    on_old: bool,
}

impl View<'_, '_> {
    /// The distance of a place from the other surface, by Newton's method.
    fn candidate(&self, at: [f64; 2]) -> Candidate {
        let point = self.here.eval(at);
        let (foot, distance) = self.there.nearest_from(&point, self.course.place(at));
        Candidate {
            distance,
            on_old: self.on_old,
            at,
            foot,
        }
    }

    /// The bound at equal parameters, moved by so much on the other surface.
    fn bound(&self, u: [f64; 2], v: [f64; 2], moved: [f64; 2]) -> Option<f64> {
        let a = self.here.part(u, v)?;
        let low = self.course.place([u[0], v[0]]);
        let high = self.course.place([u[1], v[1]]);
        // Moved, a rectangle stays inside the square, if need be by shrinking.
        let side = |k: usize| [low[k], high[k]].map(|t| (t + moved[k]).clamp(0.0, 1.0));
        let b = self.there.part(side(0), side(1))?;
        let b = if self.course.exchanged {
            b.transposed()
        } else {
            b
        };
        Some(difference(&a, &b))
    }

    /// The bound over a cell; `both` where it has to hold the other way, too.
    fn cell(&self, u: [f64; 2], v: [f64; 2], both: bool) -> (f64, Candidate) {
        let candidate = self.candidate([u[0].midpoint(u[1]), v[0].midpoint(v[1])]);
        let plain = self.bound(u, v, [0.0; 2]).unwrap_or(f64::INFINITY);
        if both {
            return (plain, candidate);
        }
        let there = self.course.place(candidate.at);
        let moved = [0, 1].map(|k| candidate.foot[k] - there[k]);
        let opposite = self.bound(u, v, moved).unwrap_or(f64::INFINITY);
        (plain.min(opposite), candidate)
    }

    /// Bounds the distance of this surface from the other. With `both` the
    /// bound is of equal parameters, and so holds both ways.
    fn bracket(&self, floor: f64, both: bool, best: &mut Vec<Candidate>) -> f64 {
        let lines = [0, 1].map(|k| {
            let there = &self.there.breaks[usize::from((k == 1) != self.course.exchanged)];
            let reversed = self.course.reversed[usize::from((k == 1) != self.course.exchanged)];
            let turned = there.iter().map(|t| if reversed { 1.0 - t } else { *t });
            let mut all: Vec<f64> = self.here.breaks[k].iter().copied().chain(turned).collect();
            all.sort_by(f64::total_cmp);
            all.dedup_by(|a, b| (*a - *b).abs() <= 1e-12);
            all
        });
        let mut cells = BinaryHeap::new();
        for u in lines[0].windows(2) {
            for v in lines[1].windows(2) {
                self.add(&mut cells, [u[0], u[1]], [v[0], v[1]], both, best);
            }
        }
        let start = cells.len();
        while let Some(cell) = cells.peek() {
            let attained = best.first().map_or(0.0, |c| c.distance);
            if cell.upper <= (attained * RATIO).max(floor) || cells.len() >= start + CELLS {
                break;
            }
            let Cell { u, v, .. } = cells.pop().expect("it was seen");
            let (m, n) = (u[0].midpoint(u[1]), v[0].midpoint(v[1]));
            for u in [[u[0], m], [m, u[1]]] {
                for v in [[v[0], n], [n, v[1]]] {
                    self.add(&mut cells, u, v, both, best);
                }
            }
        }
        cells.peek().map_or(0.0, |cell| cell.upper)
    }

    fn add(
        &self,
        cells: &mut BinaryHeap<Cell>,
        u: [f64; 2],
        v: [f64; 2],
        both: bool,
        best: &mut Vec<Candidate>,
    ) {
        let (upper, candidate) = self.cell(u, v, both);
        offer(best, candidate);
        cells.push(Cell { u, v, upper });
    }
}

/// Keeps the farthest candidates, the farthest first.
fn offer(best: &mut Vec<Candidate>, candidate: Candidate) {
    let at = best.partition_point(|c| c.distance >= candidate.distance);
    if at < CANDIDATES {
        best.insert(at, candidate);
        best.truncate(CANDIDATES);
    }
}

/// The distance of two surfaces; below `floor` it is as good as none.
pub(super) fn between(old: &Sheet<'_>, new: &Sheet<'_>, course: Course, floor: f64) -> Distance {
    let forth = View {
        here: old,
        there: new,
        course,
        on_old: true,
    };
    let back = View {
        here: new,
        there: old,
        course: course.inverse(),
        on_old: false,
    };
    let mut best = Vec::with_capacity(CANDIDATES + 1);
    for k in 0..25_u8 {
        let at = [k / 5, k % 5].map(|i| f64::from(i) / 4.0);
        offer(&mut best, forth.candidate(at));
        offer(&mut best, back.candidate(at));
    }
    let mut proved = forth.bracket(floor, true, &mut best);
    let attained = best.first().map_or(0.0, |c| c.distance);
    if proved > (attained * RATIO).max(floor) {
        let ways = [&forth, &back].map(|view| view.bracket(floor, false, &mut best));
        proved = proved.min(ways[0].max(ways[1]));
    }
    // Newton's foot need not be the nearest: the distance is proved.
    let mut found: Option<(f64, Candidate)> = None;
    for candidate in best {
        let (from, to) = if candidate.on_old {
            (old, new)
        } else {
            (new, old)
        };
        let point = from.eval(candidate.at);
        let reach = to.reach(&point, candidate.foot, floor * 1e-3);
        if found.as_ref().is_none_or(|f| reach.at_least > f.0) {
            let foot = reach.at;
            found = Some((reach.at_least, Candidate { foot, ..candidate }));
        }
    }
    let (attained, candidate) = found.expect("there are candidates");
    let (from, [a, b]) = if candidate.on_old {
        (old, [candidate.at, candidate.foot])
    } else {
        (new, [candidate.foot, candidate.at])
    };
    Distance {
        bracket: Bracket {
            proved: proved.max(attained),
            attained,
        },
        at: from.eval(candidate.at),
        old: old.parameters(a),
        new: new.parameters(b),
    }
}

/// The Hausdorff distance of two patches, however they are parametrised;
/// bracketed, to one part in fifty where neither slid far within itself.
/// Below `floor`, a length, it is as good as none.
#[must_use]
pub fn distance(
    (old_set, old): (&crate::patch_set::PatchSet, &crate::patch_set::Patch),
    (new_set, new): (&crate::patch_set::PatchSet, &crate::patch_set::Patch),
    floor: f64,
) -> Distance {
    let (old, new) = (Sheet::new(old_set, old), Sheet::new(new_set, new));
    between(&old, &new, Course::between(&old, &new), floor)
}

/// max |d_ij| of A(u, v) - B(u, v), see the module, with an allowance for
/// rounding.
fn difference(a: &BezierPatch, b: &BezierPatch) -> f64 {
    let largest = a
        .control_points()
        .chain(b.control_points())
        .map(|p| p.coords.amax())
        .fold(0.0, f64::max);
    let ((m, n), (p, q)) = (a.degree(), b.degree());
    #[allow(clippy::cast_precision_loss, reason = "degrees are at most 15")]
    let round = largest * f64::EPSILON * (8 * (m + n + p + q + 4)) as f64;
    if !a.is_rational() && !b.is_rational() && (m, n) == (p, q) {
        let pairs = a.control_points().zip(b.control_points());
        return pairs.map(|(p, q)| (p - q).norm()).fold(0.0, f64::max) + round;
    }
    let origin = a.control_point(0, 0);
    let net = |patch: &BezierPatch| -> Vec<(Vector, f64)> {
        let (m, n) = patch.degree();
        let each = (0..=m).flat_map(|i| (0..=n).map(move |j| (i, j)));
        each.map(|(i, j)| {
            let w = patch.weight(i, j) * binomial(m, i) * binomial(n, j);
            ((patch.control_point(i, j) - origin) * w, w)
        })
        .collect()
    };
    let (first, second) = (net(a), net(b));
    let columns = n + q + 1;
    let mut sums = vec![(Vector::zeros(), 0.0); (m + p + 1) * columns];
    for i in 0..=m {
        for j in 0..=n {
            let (x, w) = first[i * (n + 1) + j];
            for k in 0..=p {
                for l in 0..=q {
                    let (y, v) = second[k * (q + 1) + l];
                    let sum = &mut sums[(i + k) * columns + j + l];
                    sum.0 += x * v - y * w;
                    sum.1 += w * v;
                }
            }
        }
    }
    // The binomials of the product fall out of the quotient.
    sums.iter().map(|(d, w)| d.norm() / w).fold(0.0, f64::max) + 4.0 * round
}

impl Ord for Cell {
    fn cmp(&self, other: &Self) -> Ordering {
        self.upper
            .total_cmp(&other.upper)
            .then(other.u[0].total_cmp(&self.u[0]))
            .then(other.v[0].total_cmp(&self.v[0]))
    }
}

impl PartialOrd for Cell {
    fn partial_cmp(&self, other: &Self) -> Option<Ordering> {
        Some(self.cmp(other))
    }
}

impl PartialEq for Cell {
    fn eq(&self, other: &Self) -> bool {
        self.cmp(other).is_eq()
    }
}

impl Eq for Cell {}
