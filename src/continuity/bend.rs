//! Normal curvature across a seam as a quotient of polynomials.
//!
//! Along the side let T be the derivative along it, A the one across, N = A x T
//! and d = G A - F T, which is perpendicular to T in the tangent plane. Then
//!
//! ```text
//! k = II(d, d) / I(d, d) = (G l - 2 F m + F^2 k / G) / (N . N)^(3/2)
//! G = T . T   F = A . T   l = N . S_aa   m = N . S_as   k = N . S_ss
//! ```
//!
//! For a rational piece, X = w S, the same formula holds with the polynomials
//!
//! ```text
//! T = w X_s - w_s X   A = w X_a - w_a X   N = w X_a x X_s - w_s X_a x X - w_a X x X_s
//! l = w N . X_aa - w_aa N . X,   and m, k likewise
//! ```
//!
//! since all powers of w fall out (the quotient rule, written out). Where the
//! side runs into a pole, A vanishes as t and with it N and F as t, m as t^2
//! and l as t^3; these factors are divided out, which leaves the limit. If l
//! does not vanish so, the curvature grows without limit.

use super::rows::Rows;
use super::taylor::Taylor;
use crate::bezier::bernstein::{Bernstein, Coefficient};
use crate::bezier::{BezierPatch, Side};
use crate::scalar::{Point, Vector};

/// Below this fraction of what it could be a coefficient is rounding.
const ROUNDING: f64 = 1e-11;

/// G, F, N . N, l, m and k along a side.
#[derive(Debug, Clone)]
pub(super) struct Bend {
    parts: [Bernstein<f64>; 6],
    /// Whether N points against the side the curvature is counted towards.
    sign: f64,
    rational: bool,
    /// Whether the curvature has a limit at both ends.
    pub(super) bounded: bool,
}

type Vectors = Bernstein<Vector>;
type Numbers = Bernstein<f64>;

fn dot(a: &Vectors, b: &Vectors) -> Numbers {
    a.product(b, |p: Vector, q: Vector| p.dot(&q))
}

fn cross(a: &Vectors, b: &Vectors) -> Vectors {
    a.product(b, |p, q| p.cross(&q))
}

fn by(a: &Vectors, w: &Numbers) -> Vectors {
    a.product(w, |p, w| p * w)
}

fn largest<T: Coefficient>(a: &Bernstein<T>) -> f64 {
    a.0.iter().map(Coefficient::size).fold(0.0, f64::max)
}

/// Second order neighbours of a side: w S or w, across once and twice.
struct Across<T> {
    value: Bernstein<T>,
    once: Bernstein<T>,
    twice: Bernstein<T>,
}

impl<T: Coefficient> Across<T> {
    fn of(rows: &Rows<'_>, row: impl Fn(usize) -> Bernstein<T>) -> Self {
        #[allow(clippy::cast_precision_loss, reason = "a degree is at most 15")]
        let p = rows.degrees()[1] as f64;
        let value = row(0);
        let next = row(1);
        let once = next.plus(&value, -1.0).scaled(p * rows.inwards());
        let twice = if rows.degrees()[1] > 1 {
            let second = row(2).plus(&next, -2.0).plus(&value, 1.0);
            second.scaled(p * (p - 1.0))
        } else {
            value.scaled(0.0)
        };
        Self { value, once, twice }
    }
}

impl Bend {
    /// The bend of `surface` along `side`, counted towards S_u x S_v, or away
    /// from it if `outward` is -1.
    pub(super) fn new(surface: &BezierPatch, side: Side, origin: &Point, outward: f64) -> Self {
        let rows = Rows::new(surface, side, *origin);
        let x = Across::of(&rows, |row| rows.places(row));
        let (xs, xas) = (x.value.derivative(), x.once.derivative());
        let xss = xs.derivative();
        let rational = surface.is_rational();
        let [along, across, normal]: [Vectors; 3];
        let forms: [(Numbers, f64); 3];
        if rational {
            let w = Across::of(&rows, |row| rows.weights(row));
            let (ws, was) = (w.value.derivative(), w.once.derivative());
            let wss = ws.derivative();
            along = by(&xs, &w.value).plus(&by(&x.value, &ws), -1.0);
            across = by(&x.once, &w.value).plus(&by(&x.value, &w.once), -1.0);
            normal = by(&cross(&x.once, &xs), &w.value)
                .plus(&by(&cross(&x.once, &x.value), &ws), -1.0)
                .plus(&by(&cross(&x.value, &xs), &w.once), -1.0);
            let form = |second: &Vectors, weight: &Numbers| {
                let height = by(second, &w.value).plus(&by(&x.value, weight), -1.0);
                (dot(&normal, &height), largest(&normal) * largest(&height))
            };
            forms = [form(&x.twice, &w.twice), form(&xas, &was), form(&xss, &wss)];
        } else {
            (along, across) = (xs, x.once);
            normal = cross(&across, &along);
            let form =
                |second: &Vectors| (dot(&normal, second), largest(&normal) * largest(second));
            forms = [form(&x.twice), form(&xas), form(&xss)];
        }
        let [l, m, k] = forms;
        let reach = largest(&along) * largest(&across);
        let ends = vanishing(&normal, reach);
        let (g, f) = (dot(&along, &along), dot(&across, &along));
        let limits = || {
            let normal = deflated(&normal, ends, reach)?;
            Some([
                g.clone(),
                deflated(&f, ends, reach)?,
                dot(&normal, &normal),
                deflated(&l.0, ends.map(|e| 3 * e), l.1)?,
                deflated(&m.0, ends.map(|e| 2 * e), m.1)?,
                deflated(&k.0, ends, k.1)?,
            ])
        };
        let parts = limits();
        Self {
            bounded: parts.is_some(),
            parts: parts.unwrap_or_else(|| [g, f, dot(&normal, &normal), l.0, m.0, k.0]),
            sign: rows.turned() * outward,
            rational,
        }
    }

    /// The part from `range[0]` to `range[1]`; a descending range reverses it.
    pub(super) fn restrict(&self, range: [f64; 2]) -> Self {
        Self {
            parts: self.parts.each_ref().map(|p| p.restrict(range)),
            ..*self
        }
    }

    /// The same after t = lambda tau / (1 - tau + lambda tau): in homogeneous
    /// form coefficient i is multiplied by lambda^i.
    pub(super) fn reparametrised(mut self, lambda: f64) -> Self {
        if self.rational {
            for part in &mut self.parts {
                let mut factor = 1.0;
                for value in &mut part.0 {
                    *value *= factor;
                    factor *= lambda;
                }
            }
        }
        self
    }

    /// The normal curvature at `t`; `None` where the tangent plane is lost.
    pub(super) fn value(&self, t: f64) -> Option<f64> {
        let [g, f, q, l, m, k] = self.parts.each_ref().map(|p| p.eval(t));
        let found = (g * l - 2.0 * f * m + f * f * k / g) / (q * q.sqrt());
        found.is_finite().then_some(found * self.sign)
    }

    /// The curvature over the whole of this part; `None` where it varies too
    /// much for the series.
    pub(super) fn model(&self) -> Option<Taylor> {
        self.combined(self.parts.each_ref().map(|p| Taylor::of_bernstein(&p.0)))
    }

    /// The curvature at y(x), y running over this part from -1 to 1.
    pub(super) fn model_at(&self, y: &Taylor) -> Option<Taylor> {
        let mut found = [Taylor::constant(0.0); 6];
        for (target, part) in found.iter_mut().zip(&self.parts) {
            *target = Taylor::of_bernstein(&part.0).composed(y)?;
        }
        self.combined(found)
    }

    fn combined(&self, [g, f, q, l, m, k]: [Taylor; 6]) -> Option<Taylor> {
        let root = q.power(-0.5)?;
        let top = g
            .times(&l)
            .plus(&f.times(&m), -2.0)
            .plus(&f.times(&f).times(&k).times(&g.power(-1.0)?), 1.0);
        let found = top.times(&root).times(&root.times(&root));
        Some(found.scaled(self.sign))
    }
}

/// How often a factor t, and a factor 1 - t, divides the polynomial.
fn vanishing(a: &Vectors, scale: f64) -> [usize; 2] {
    let tiny = scale * ROUNDING;
    let count = |mut list: std::slice::Iter<'_, Vector>| {
        list.position(|v| v.norm() > tiny).unwrap_or(a.0.len())
    };
    let from = count(a.0.iter());
    let to = a.0.iter().rev().position(|v| v.norm() > tiny);
    [from, to.unwrap_or(a.0.len())]
}

/// Divides out t^ends[0] (1 - t)^ends[1]; `None` where the coefficients that
/// must vanish for that do not.
fn deflated<T: Coefficient>(
    a: &Bernstein<T>,
    ends: [usize; 2],
    scale: f64,
) -> Option<Bernstein<T>> {
    let tiny = scale * ROUNDING;
    let zero = |list: &[T]| list.iter().all(|v| v.size() <= tiny);
    if ends[0] + ends[1] > a.degree() {
        return zero(&a.0).then(|| Bernstein(vec![T::zero()]));
    }
    let (from, to) = (ends[0], a.0.len() - ends[1]);
    (zero(&a.0[..from]) && zero(&a.0[to..])).then(|| a.divided(ends))
}
