//! The gap of two curve stretches: their Hausdorff distance, bracketed.
//!
//! ```text
//! H(A, B) <= max over the pieces of max |d_i|,   A_k(t) - B_k(t) = sum d_i w_i B_i(t) / sum w_i B_i(t)
//! ```
//!
//! Both stretches are cut at matched places (feet of perpendiculars); a pair
//! of pieces is run through together, so the largest control point of their
//! difference bounds the distance both ways (convex hull property). For
//! rational pieces the difference is taken over the product of the weights,
//! which is again a rational Bezier curve with positive weights. Where a
//! quadratic change of parameter brings the two closer, it is used. The piece
//! with the largest bound is halved until the bound meets what is attained.

use std::cmp::Ordering;
use std::collections::BinaryHeap;

use super::nearest::{distance_at_least, nearest, nearest_from};
use crate::bezier::bernstein::{Bernstein, Coefficient};
use crate::bezier::{BezierCurve, binomial};
use crate::scalar::{Bracket, Vector};

/// Pieces after which a bracket stays as wide as it is.
const PIECES: usize = 2048;

/// Pieces after which quadratic changes of parameter are not tried any more:
/// they cost ten times a halving.
const TRIES: usize = 64;

/// A bracket stops being narrowed at this ratio.
const RATIO: f64 = 1.015;

/// A bracketed gap, and where its attained figure is.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Gap {
    /// Hausdorff distance of the two stretches.
    pub bracket: Bracket,
    /// The parameter on the first curve where `bracket.attained` is reached.
    pub at: f64,
}

/// One curve and the stretch of it that counts; `range` may descend.
#[derive(Debug, Clone, Copy)]
pub struct Stretch<'a> {
    /// The whole curve.
    pub curve: &'a BezierCurve,
    /// From and to.
    pub range: [f64; 2],
}

impl Stretch<'_> {
    /// The stretch as a curve of its own.
    #[must_use]
    pub fn cut(&self) -> BezierCurve {
        let [from, to] = self.range;
        // Whole edges stay bit for bit what they are.
        #[allow(clippy::float_cmp, reason = "0 and 1 are exact by construction")]
        if from == 0.0 && to == 1.0 {
            self.curve.clone()
        } else if from == 1.0 && to == 0.0 {
            self.curve.reversed()
        } else {
            self.curve.restrict(from, to)
        }
    }

    fn at(&self, x: f64) -> f64 {
        self.range[0] * (1.0 - x) + self.range[1] * x
    }
}

/// A pair of pieces run through together.
struct Pair {
    /// Ranges on the cut curves, both ascending.
    s: [f64; 2],
    t: [f64; 2],
    a: BezierCurve,
    b: BezierCurve,
    upper: f64,
    /// Whether a quadratic change of parameter has been tried.
    tried: bool,
}

/// Brackets the gap of two stretches that run the same way.
///
/// `floor` is a length below which a gap is as good as none, `limit` one above
/// which it need not be known: once `attained` exceeds it the search ends.
#[must_use]
pub fn gap(first: Stretch<'_>, second: Stretch<'_>, floor: f64, limit: f64) -> Gap {
    let (a, b) = (first.cut(), second.cut());
    let round = rounding(&a, &b);
    let upper = difference_bound(&a, &b) + round;
    let mut best = (distance(&a, &b, 0.0, round), 0.0);
    if upper <= floor {
        for x in [0.5, 1.0] {
            let attained = distance(&a, &b, x, round);
            if attained > best.0 {
                best = (attained, x);
            }
        }
        return Gap {
            bracket: Bracket {
                proved: upper,
                attained: best.0.min(upper),
            },
            at: first.at(best.1),
        };
    }
    let end = distance(&a, &b, 1.0, round);
    if end > best.0 {
        best = (end, 1.0);
    }
    let whole = Pair {
        s: [0.0, 1.0],
        t: [0.0, 1.0],
        a: a.clone(),
        b: b.clone(),
        upper,
        tried: false,
    };
    let mut pairs = BinaryHeap::from([whole]);
    let mut settled = 0.0_f64;
    while let Some(pair) = pairs.pop() {
        settled = pair.upper;
        if settled <= (best.0 * RATIO).max(floor) || best.0 > limit || pairs.len() >= PIECES {
            break;
        }
        let s = pair.s[0].midpoint(pair.s[1]);
        let guess = pair.t[0].midpoint(pair.t[1]);
        let point = a.eval(s);
        let foot = nearest_from(&b, &point, guess, pair.t);
        if foot.distance > best.0 {
            // Locally nearest need not be nearest.
            let global = nearest(&b, &point, [0.0, 1.0]).distance.min(foot.distance);
            if global > best.0 {
                best = (global, s);
            }
        }
        let width = pair.t[1] - pair.t[0];
        let x = if width > 0.0 {
            ((foot.t - pair.t[0]) / width).clamp(1.0 / 16.0, 15.0 / 16.0)
        } else {
            0.5
        };
        if !pair.tried && pairs.len() < TRIES {
            // Edges of one shape, run through at other speeds.
            let there = nearest_from(&pair.a, &pair.b.eval(0.5), 0.5, [0.0, 1.0]).t;
            let bent = quadratic_bound(&pair.a, &pair.b, x)
                .min(quadratic_bound(&pair.b, &pair.a, there))
                + round;
            if bent < 0.9 * pair.upper {
                pairs.push(Pair {
                    upper: bent,
                    tried: true,
                    ..pair
                });
                continue;
            }
        }
        let t = pair.t[0] + x * width;
        let (a0, a1) = pair.a.split(0.5);
        let (b0, b1) = pair.b.split(x);
        for (s, t, a, b) in [
            ([pair.s[0], s], [pair.t[0], t], a0, b0),
            ([s, pair.s[1]], [t, pair.t[1]], a1, b1),
        ] {
            let upper = (difference_bound(&a, &b) + round).min(pair.upper);
            pairs.push(Pair {
                s,
                t,
                a,
                b,
                upper,
                tried: false,
            });
        }
    }
    let point = a.eval(best.1);
    let attained = distance_at_least(&b, &point, best.0, 1e-9).min(settled);
    Gap {
        bracket: Bracket {
            proved: settled,
            attained,
        },
        at: first.at(best.1),
    }
}

/// Pairs are ordered by their bound, then along the curve, for the heap.
impl Ord for Pair {
    fn cmp(&self, other: &Self) -> Ordering {
        self.upper
            .total_cmp(&other.upper)
            .then(other.s[0].total_cmp(&self.s[0]))
    }
}

impl PartialOrd for Pair {
    fn partial_cmp(&self, other: &Self) -> Option<Ordering> {
        Some(self.cmp(other))
    }
}

impl PartialEq for Pair {
    fn eq(&self, other: &Self) -> bool {
        self.cmp(other).is_eq()
    }
}

impl Eq for Pair {}

fn distance(a: &BezierCurve, b: &BezierCurve, x: f64, round: f64) -> f64 {
    let point = a.eval(x);
    let straight = nearest_from(b, &point, x, [0.0, 1.0]);
    if straight.distance <= round {
        return straight.distance;
    }
    nearest(b, &point, [0.0, 1.0])
        .distance
        .min(straight.distance)
}

/// What rounding may have moved control points and their differences by:
/// de Casteljau's steps are convex, so each is off by ulps of the largest
/// coordinate.
fn rounding(a: &BezierCurve, b: &BezierCurve) -> f64 {
    let largest = a
        .control_points()
        .chain(b.control_points())
        .map(|p| p.coords.amax())
        .fold(0.0, f64::max);
    #[allow(clippy::cast_precision_loss, reason = "degrees are at most 15")]
    let steps = (8 * (a.degree() + b.degree() + 2)) as f64;
    if a.is_rational() || b.is_rational() || a.degree() != b.degree() {
        largest * f64::EPSILON * steps
    } else {
        largest * f64::EPSILON * 4.0
    }
}

/// max |d_i| of A(t) - B(t), see the module.
#[must_use]
pub fn difference_bound(a: &BezierCurve, b: &BezierCurve) -> f64 {
    if a.is_rational() || b.is_rational() {
        return rational_bound(a, b);
    }
    let (low, high) = if a.degree() < b.degree() {
        (a, b)
    } else {
        (b, a)
    };
    if low.degree() == high.degree() {
        return largest_distance(a, b);
    }
    // A degree between two lawful ones is lawful, so raising cannot fail.
    low.elevated(high.degree())
        .map_or(f64::INFINITY, |raised| largest_distance(&raised, high))
}

fn largest_distance(a: &BezierCurve, b: &BezierCurve) -> f64 {
    a.control_points()
        .zip(b.control_points())
        .map(|(p, q)| (p - q).norm())
        .fold(0.0, f64::max)
}

/// Homogeneous control points relative to an origin, in standard form: the
/// parameter is changed so that both end weights are 1 (Farin, *NURBS*).
fn standard(curve: &BezierCurve, origin: &Vector) -> Vec<(Vector, f64)> {
    let n = curve.degree();
    let (w0, wn) = (curve.weight(0), curve.weight(n));
    #[allow(clippy::cast_precision_loss, reason = "a degree is at most 15")]
    let c = (w0 / wn).powf(1.0 / n as f64);
    let mut factor = 1.0 / w0;
    let mut found = Vec::with_capacity(n + 1);
    for i in 0..=n {
        let w = curve.weight(i) * factor;
        found.push(((curve.control_point(i).coords - origin) * w, w));
        factor *= c;
    }
    found
}

fn rational_bound(a: &BezierCurve, b: &BezierCurve) -> f64 {
    let origin = a.control_point(0).coords;
    let (p, q) = (standard(a, &origin), standard(b, &origin));
    let (m, n) = (a.degree(), b.degree());
    let mut worst = 0.0_f64;
    for k in 0..=m + n {
        let (mut difference, mut weight) = (Vector::zeros(), 0.0);
        let from = k.saturating_sub(n);
        for (i, (x, w)) in p.iter().enumerate().take(k.min(m) + 1).skip(from) {
            let (y, v) = &q[k - i];
            // The common factor 1 / C(m+n, k) falls out of the quotient.
            let factor = binomial(m, i) * binomial(n, k - i);
            difference += (x * *v - y * *w) * factor;
            weight += w * v * factor;
        }
        worst = worst.max(difference.norm() / weight);
    }
    worst
}

/// As [`difference_bound`], of A(t) and B(phi(t)), phi quadratic from 0 by
/// phi(1/2) = `middle` to 1: composition by de Casteljau's algorithm with
/// polynomials for numbers. Infinite where phi would turn back.
fn quadratic_bound(a: &BezierCurve, b: &BezierCurve, middle: f64) -> f64 {
    let c = (4.0 * middle - 1.0) / 2.0;
    if !(0.0..=1.0).contains(&c) {
        return f64::INFINITY;
    }
    let origin = a.control_point(0).coords;
    let (forth, back) = (
        Bernstein(vec![0.0, c, 1.0]),
        Bernstein(vec![1.0, 1.0 - c, 0.0]),
    );
    let points = (0..=b.degree()).map(|i| (b.control_point(i).coords - origin) * b.weight(i));
    let place = compose(points, &forth, &back);
    let weight = compose((0..=b.degree()).map(|i| b.weight(i)), &forth, &back);
    let own = (0..=a.degree()).map(|i| (a.control_point(i).coords - origin) * a.weight(i));
    let own = Bernstein(own.collect::<Vec<Vector>>());
    let own_weight = Bernstein((0..=a.degree()).map(|i| a.weight(i)).collect::<Vec<f64>>());
    let difference = own
        .product(&weight, |p, w| p * w)
        .plus(&place.product(&own_weight, |p, w| p * w), -1.0);
    let weights = own_weight.product(&weight, |v, w| v * w);
    difference
        .0
        .iter()
        .zip(&weights.0)
        .map(|(d, w)| d.norm() / w)
        .fold(0.0, f64::max)
}

fn compose<T: Coefficient>(
    coefficients: impl Iterator<Item = T>,
    forth: &Bernstein<f64>,
    back: &Bernstein<f64>,
) -> Bernstein<T> {
    let mut row: Vec<Bernstein<T>> = coefficients.map(|c| Bernstein(vec![c])).collect();
    while row.len() > 1 {
        row = row
            .windows(2)
            .map(|w| {
                let near = w[0].product(back, |p, s| p * s);
                near.plus(&w[1].product(forth, |p, s| p * s), 1.0)
            })
            .collect();
    }
    row.swap_remove(0)
}
