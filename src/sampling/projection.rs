//! The nearest point of a curve, near a guess.

use crate::bezier::BezierCurve;
use crate::scalar::Point;

/// Newton steps at most; a good guess needs two or three.
const STEPS: usize = 20;

/// The parameter in `range` (ascending) at which the curve is nearest to
/// `point`, by Newton's method on (C - P) . C' from `guess`. It stays in the
/// range; with a useless guess it returns a place that is merely not worse.
pub(super) fn nearest(curve: &BezierCurve, point: &Point, guess: f64, range: [f64; 2]) -> f64 {
    let distance = |t: f64| (curve.eval(t) - point).norm_squared();
    let mut t = guess.clamp(range[0], range[1]);
    let mut best = (distance(t), t);
    for _ in 0..STEPS {
        let jet = curve.jet(t);
        let from = jet.point - point;
        let slope = from.dot(&jet.dt);
        let bend = jet.dt.norm_squared() + from.dot(&jet.dtt);
        let bend = if bend > 0.0 {
            bend
        } else {
            jet.dt.norm_squared()
        };
        if bend <= 0.0 {
            break;
        }
        let next = (t - slope / bend).clamp(range[0], range[1]);
        let step = (next - t).abs();
        t = next;
        let here = distance(t);
        if here < best.0 {
            best = (here, t);
        }
        if step <= 1e-15 {
            break;
        }
    }
    best.1
}
