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
