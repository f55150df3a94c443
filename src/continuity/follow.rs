//! The nearest place of the second edge as a function of the first's parameter,
//! with a proved remainder.
//!
//! The foot of the perpendicular is the root t(s) of
//! g = (C2(t) - C1(s)) . C2'(t). A polynomial y through nine feet is taken for
//! it; if dg/dy is at least m > 0 within a distance D of y, and |g(y)| / m is at
//! most D, the root is within |g(y)| / m of y (mean value theorem). For
//! rational edges the same is done with the numerators. It leaves out of
//! account an edge that comes back to itself.

use super::taylor::{Taylor, dot};
use crate::bezier::BezierCurve;
use crate::bezier::bernstein::Bernstein;
use crate::scalar::{Point, Vector};
use crate::topology::nearest_from;

/// How far from the polynomial a root is looked for, in half widths of the box.
const NEAR: f64 = 0.01;

/// How far beyond its ends an edge may be followed for smooth feet.
const BEYOND: f64 = 0.02;

/// w C and w of an edge.
#[derive(Debug)]
struct Path {
    place: Bernstein<Vector>,
    weight: Option<Bernstein<f64>>,
}

impl Path {
    fn new(curve: &BezierCurve, origin: &Point, rational: bool) -> Self {
        let points = 0..=curve.degree();
        let place = points
            .clone()
            .map(|i| (curve.control_point(i) - origin) * curve.weight(i));
        Self {
            place: Bernstein(place.collect()),
            weight: rational.then(|| Bernstein(points.map(|i| curve.weight(i)).collect())),
        }
    }

    fn restrict(&self, range: [f64; 2]) -> Self {
        Self {
            place: self.place.restrict(range),
            weight: self.weight.as_ref().map(|w| w.restrict(range)),
        }
    }

    fn derivative(&self) -> Self {
        Self {
            place: self.place.derivative(),
            weight: self.weight.as_ref().map(Bernstein::derivative),
        }
    }

    /// Three coordinates and the weight as models, at y(x) if that is given.
    fn models(&self, y: Option<&Taylor>) -> Option<Models> {
        Some(Models {
            place: Taylor::of_vectors(&self.place.0, y)?,
            weight: match (&self.weight, y) {
                (Some(weight), Some(y)) => Some(Taylor::of_bernstein(&weight.0).composed(y)?),
                (Some(weight), None) => Some(Taylor::of_bernstein(&weight.0)),
                (None, _) => None,
            },
        })
    }
}

struct Models {
    place: [Taylor; 3],
    weight: Option<Taylor>,
}

/// a w - b v, the weights v of a and w of b; without weights a - b `plain`.
fn crossed(a: &Models, b: &Models, plain: f64) -> [Taylor; 3] {
    let times = |x: &Taylor, w: &Option<Taylor>| w.as_ref().map_or(*x, |w| x.times(w));
    let rational = a.weight.is_some() || b.weight.is_some();
    let factor = if rational { 1.0 } else { plain };
    std::array::from_fn(|k| {
        times(&a.place[k], &b.weight).plus(&times(&b.place[k], &a.weight), -factor)
    })
}

/// The two edges of a meeting, for following one along the other.
#[derive(Debug)]
pub(super) struct Follow {
    first: Path,
    second: Path,
}

impl Follow {
    pub(super) fn new(curves: &[BezierCurve; 2], origin: &Point) -> Self {
        let rational = curves.iter().any(BezierCurve::is_rational);
        let [first, second] = curves.each_ref().map(|c| Path::new(c, origin, rational));
        Self { first, second }
    }

    /// A box on the second edge, and in it, from -1 to 1, the place nearest to
    /// the first edge's place x from -1 to 1 on `s`. `None` where that cannot
    /// be proved.
    pub(super) fn over(
        &self,
        curves: &[BezierCurve; 2],
        s: [f64; 2],
        guess: f64,
    ) -> Option<([f64; 2], Taylor)> {
        let mut near = guess;
        let feet = Taylor::places().map(|x| {
            let at = s[0].midpoint(s[1]) + 0.5 * (s[1] - s[0]) * x;
            let range = [-BEYOND, 1.0 + BEYOND];
            near = nearest_from(&curves[1], &curves[0].eval(at), near, range).t;
            near
        });
        let low = feet.iter().copied().fold(f64::INFINITY, f64::min);
        let high = feet.iter().copied().fold(f64::NEG_INFINITY, f64::max);
        let pad = 0.1 * (high - low);
        let area = [low - pad, high + pad];
        let (middle, half) = (area[0].midpoint(area[1]), 0.5 * (area[1] - area[0]));
        if half.is_nan() || half <= 0.0 {
            return None;
        }
        let y = Taylor::through(&feet.map(|t| (t - middle) / half));
        let here = self.first.restrict(s).models(None)?;
        let there = self.second.restrict(area);
        let (once, twice) = (there.derivative(), there.derivative().derivative());
        // g and dg/dy, at y and near it.
        let [place, speed] = [&there, &once].map(|p| p.models(Some(&y)));
        let (place, speed) = (place?, speed?);
        let away = crossed(&place, &here, 1.0);
        let g = dot(&away, &crossed(&speed, &place, 0.0));
        let about = y.widened(NEAR);
        let [place, speed, bend] = [&there, &once, &twice].map(|p| p.models(Some(&about)));
        let (place, speed, bend) = (place?, speed?, bend?);
        let away = crossed(&place, &here, 1.0);
        let rate = dot(&crossed(&speed, &here, 0.0), &crossed(&speed, &place, 0.0));
        let slope = rate.plus(&dot(&away, &crossed(&bend, &place, 0.0)), 1.0);
        let off = g.most() / slope.range()[0];
        if !(0.0..=NEAR).contains(&off) {
            return None;
        }
        // Beyond an end of the edge the end itself is nearest.
        let [least, most] = y.widened(off).range().map(|y| middle + half * y);
        if most <= 0.0 {
            return Some(([0.0, 0.5], Taylor::constant(-1.0)));
        }
        if least >= 1.0 {
            return Some(([0.5, 1.0], Taylor::constant(1.0)));
        }
        let over = (-least).max(most - 1.0).max(0.0) / half;
        Some((area, y.widened(off + over)))
    }
}
