//! How far a curve leaves its chord: proved, and close to the truth.
//!
//! With f the part of the curve across the chord and q the quadratic through
//! its ends and middle,
//!
//! ```text
//! |f| <= max |q| + max |r_i|,
//! r_I = sum_j a_j w_(I-j) (f_(I-j) - q_j) / sum_j a_j w_(I-j),   j = 0, 1, 2
//! ```
//!
//! r being the remainder at degree d + 2, a weighted mean of differences of
//! control values, so the bound holds for every positive weights. The plain
//! hull (the largest |f_i|) is taken where it is smaller. The chord lies within
//! the same distance of the curve: nearest points run from end to end, so they
//! cover it.

use super::binomials;
use crate::scalar::Vector;

/// Proved bound on the distance between a Bezier curve and the segment from
/// `a` to `b`, both ways, from control points and weights (empty: all equal).
/// The ends of the curve need not be `a` and `b`.
pub(crate) fn chord_bound(points: &[Vector], weights: &[f64], a: &Vector, b: &Vector) -> f64 {
    let chord = b - a;
    let length = chord.norm();
    if length <= 0.0 {
        return points.iter().map(|p| (p - a).norm()).fold(0.0, f64::max);
    }
    let direction = chord / length;
    let across = |p: &Vector| {
        let from = p - a;
        from - direction * from.dot(&direction)
    };
    let (mut hull, mut overhang) = (0.0_f64, 0.0_f64);
    for p in points {
        let along = (p - a).dot(&direction);
        overhang = overhang.max(-along).max(along - length);
        hull = hull.max(across(p).norm());
    }
    hull.min(split(points, weights, across)).hypot(overhang)
}

/// As [`chord_bound`], and within about a hundredth of the truth: the hulls of
/// eighths of the curve, where these are smaller.
pub(crate) fn close_chord_bound(points: &[Vector], weights: &[f64], a: &Vector, b: &Vector) -> f64 {
    let whole = chord_bound(points, weights, a, b);
    let weight = |i: usize| weights.get(i).copied().unwrap_or(1.0);
    let net = points.iter().enumerate();
    let net: Vec<(Vector, f64)> = net.map(|(i, p)| (p * weight(i), weight(i))).collect();
    whole.min(halved(net, a, b, EIGHTHS))
}

/// How often a curve is halved for eighths.
const EIGHTHS: usize = 3;

/// The largest distance from the segment in the hulls of the parts of a curve in
/// homogeneous form, halved so many times over (de Casteljau).
fn halved(mut net: Vec<(Vector, f64)>, a: &Vector, b: &Vector, times: usize) -> f64 {
    if times == 0 {
        let points = net.iter().map(|(p, w)| p / *w);
        return points.map(|p| from_segment(&p, a, b)).fold(0.0, f64::max);
    }
    let mut first = Vec::with_capacity(net.len());
    for last in (0..net.len()).rev() {
        first.push(net[0]);
        for i in 0..last {
            let ((p, v), (q, w)) = (net[i], net[i + 1]);
            net[i] = ((p + q) / 2.0, (v + w) / 2.0);
        }
    }
    halved(first, a, b, times - 1).max(halved(net, a, b, times - 1))
}

/// Distance of a point from the segment.
pub(crate) fn from_segment(p: &Vector, a: &Vector, b: &Vector) -> f64 {
    let chord = b - a;
    let square = chord.norm_squared();
    let t = if square > 0.0 {
        ((p - a).dot(&chord) / square).clamp(0.0, 1.0)
    } else {
        0.0
    };
    (p - a - chord * t).norm()
}

fn split(points: &[Vector], weights: &[f64], across: impl Fn(&Vector) -> Vector) -> f64 {
    let degree = points.len() - 1;
    let weight = |i: usize| weights.get(i).copied().unwrap_or(1.0);
    let binomials = binomials(degree);
    let (mut sum, mut total) = (Vector::zeros(), 0.0);
    for (i, p) in points.iter().enumerate() {
        let a = binomials[i] * weight(i);
        sum += across(p) * a;
        total += a;
    }
    let (first, last) = (across(&points[0]), across(&points[degree]));
    let middle = sum / total * 2.0 - (first + last) / 2.0;
    let largest = first.norm().max(last.norm()) + middle.norm() / 2.0;
    let mut rest = 0.0_f64;
    for raised in 0..=degree + 2 {
        let (mut sum, mut total) = (Vector::zeros(), 0.0);
        for (j, (q, factor)) in [(first, 1.0), (middle, 2.0), (last, 1.0)]
            .iter()
            .enumerate()
        {
            // C(2, j) C(d, i) / C(d + 2, i + j); the denominator cancels.
            if let Some(i) = raised.checked_sub(j).filter(|&i| i <= degree) {
                let a = factor * binomials[i] * weight(i);
                sum += (across(&points[i]) - q) * a;
                total += a;
            }
        }
        rest = rest.max((sum / total).norm());
    }
    largest + rest
}

#[cfg(test)]
mod tests {
    use super::*;

    /// A cubic that peaks off the middle: (x, y) with y = 3 (1 - t) t^2 h has its
    /// largest y, 4 h / 9, at t = 2 / 3 (by hand).
    #[test]
    fn a_bound_is_above_the_truth_and_close_to_it() {
        let h = 0.3;
        let points: Vec<Vector> = [[0.0, 0.0], [1.0, 0.0], [2.0, h], [3.0, 0.0]]
            .map(|[x, y]| Vector::new(x, y, 0.0))
            .to_vec();
        let (a, b) = (points[0], points[3]);
        let truth = 4.0 * h / 9.0;
        let close = close_chord_bound(&points, &[], &a, &b);
        assert!((truth..1.015 * truth).contains(&close), "{}", close / truth);
        let plain = chord_bound(&points, &[], &a, &b);
        assert!(plain > close, "{}", plain / truth);
    }

    /// A quarter circle by weights 1, 1 / sqrt 2, 1: its rise over the chord is
    /// 1 - 1 / sqrt 2.
    #[test]
    fn weights_count() {
        let points = vec![
            Vector::new(1.0, 0.0, 0.0),
            Vector::new(1.0, 1.0, 0.0),
            Vector::new(0.0, 1.0, 0.0),
        ];
        let weights = [1.0, 0.5_f64.sqrt(), 1.0];
        let truth = 1.0 - 0.5_f64.sqrt();
        let close = close_chord_bound(&points, &weights, &points[0], &points[2]);
        assert!(close >= truth - 1e-15 && close < 1.01 * truth);
    }
}
