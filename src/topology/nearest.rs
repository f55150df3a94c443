//! The nearest point of a curve.

use crate::bezier::BezierCurve;
use crate::scalar::{Cuboid, Point};

/// A place on a curve and its distance from the point asked about.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Foot {
    /// Parameter on the curve.
    pub t: f64,
    /// Distance, in length units.
    pub distance: f64,
}

/// The place of `curve` on [low, high] nearest to `point`, found from `guess`
/// by Newton's method on (C - P) . C' = 0 with halving: a local minimum.
#[must_use]
pub fn nearest_from(curve: &BezierCurve, point: &Point, guess: f64, [low, high]: [f64; 2]) -> Foot {
    let mut t = guess.clamp(low, high);
    let mut jet = curve.jet(t);
    let mut square = (jet.point - point).norm_squared();
    for _ in 0..24 {
        let away = jet.point - point;
        let slope = away.dot(&jet.dt);
        let speed = jet.dt.norm_squared();
        let bend = speed + away.dot(&jet.dtt);
        // Where the distance is not convex go downhill by the speed alone.
        let step = if bend > 0.25 * speed {
            -slope / bend
        } else if speed > 0.0 {
            -slope / speed
        } else {
            break;
        };
        let mut fraction = 1.0;
        let mut moved = false;
        while fraction > 1e-6 {
            let next = (t + fraction * step).clamp(low, high);
            let next_jet = curve.jet(next);
            let next_square = (next_jet.point - point).norm_squared();
            if next_square < square {
                moved = (next - t).abs() > 1e-15;
                (t, jet, square) = (next, next_jet, next_square);
                break;
            }
            fraction *= 0.25;
        }
        if !moved {
            break;
        }
    }
    Foot {
        t,
        distance: square.sqrt(),
    }
}

/// The place of `curve` on `range` nearest to `point`: Newton's method from
/// every lowest of 2 degree + 7 samples.
#[must_use]
pub fn nearest(curve: &BezierCurve, point: &Point, range: [f64; 2]) -> Foot {
    let count = 2 * curve.degree() + 6;
    #[allow(clippy::cast_precision_loss, reason = "at most 36 samples")]
    let at = |k: usize| {
        let x = k as f64 / count as f64;
        range[0] * (1.0 - x) + range[1] * x
    };
    let squares: Vec<f64> = (0..=count)
        .map(|k| (curve.eval(at(k)) - point).norm_squared())
        .collect();
    let lowest = |k: usize| {
        (k == 0 || squares[k] <= squares[k - 1]) && (k == count || squares[k] <= squares[k + 1])
    };
    let mut best = Foot {
        t: range[0],
        distance: f64::INFINITY,
    };
    for k in (0..=count).filter(|&k| lowest(k)) {
        let foot = nearest_from(curve, point, at(k), range);
        if foot.distance < best.distance {
            best = foot;
        }
    }
    best
}

/// A proved lower bound on the distance of `point` from the curve, within
/// about `slack` (a fraction) of the distance `found`, or lower where
/// `budget` pieces do not suffice.
///
/// A piece keeps beyond the smallest distance of its control box, and beyond
/// the plane through its lowest control point square to the direction looked
/// in (convex hull property).
#[must_use]
pub fn distance_at_least(curve: &BezierCurve, point: &Point, found: f64, slack: f64) -> f64 {
    let goal = found * (1.0 - slack);
    let mut lower = found;
    let mut budget = 400;
    let mut stack = vec![curve.clone()];
    while let Some(piece) = stack.pop() {
        let cuboid = Cuboid::around(piece.control_points());
        let mut bound = cuboid.distance(point);
        if bound < goal {
            let towards = piece.eval(0.5) - point;
            let norm = towards.norm();
            if norm > 0.0 {
                let along = piece
                    .control_points()
                    .map(|b| (b - point).dot(&towards) / norm)
                    .fold(f64::INFINITY, f64::min);
                bound = bound.max(along);
            }
        }
        if bound >= goal {
            lower = lower.min(bound);
        } else if budget == 0 {
            lower = lower.min(bound.max(0.0));
        } else {
            budget -= 1;
            let (left, right) = piece.split(0.5);
            stack.push(left);
            stack.push(right);
        }
    }
    lower
}
