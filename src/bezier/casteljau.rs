//! De Casteljau's algorithm on a run of control points in any dimension.

use nalgebra::SVector;

/// Control points in a row of the largest degree, and of the usual ones.
pub(super) const LONG: usize = super::MAX_DEGREE + 1;
pub(super) const SHORT: usize = 4;

/// Room for one row of control points.
pub(super) fn row<const N: usize, const LEN: usize>() -> [SVector<f64, N>; LEN] {
    [SVector::zeros(); LEN]
}

#[inline]
fn lerp<const N: usize>(a: SVector<f64, N>, b: SVector<f64, N>, t: f64) -> SVector<f64, N> {
    // The two-product form is exact at t = 0 and t = 1, so corners are corners.
    a * (1.0 - t) + b * t
}

/// One step: `points` shrinks by one; returns the new length.
#[inline]
fn step<const N: usize>(points: &mut [SVector<f64, N>], t: f64) {
    for i in 1..points.len() {
        points[i - 1] = lerp(points[i - 1], points[i], t);
    }
}

/// The point at `t`; overwrites `points`.
#[inline]
pub(super) fn value<const N: usize>(points: &mut [SVector<f64, N>], t: f64) -> SVector<f64, N> {
    for len in (2..=points.len()).rev() {
        step(&mut points[..len], t);
    }
    points[0]
}

/// The point at `t` of a cubic: the same operations, unrolled.
#[inline]
pub(super) fn cubic<const N: usize>([a, b, c, d]: [SVector<f64, N>; 4], t: f64) -> SVector<f64, N> {
    let (ab, bc, cd) = (lerp(a, b, t), lerp(b, c, t), lerp(c, d, t));
    lerp(lerp(ab, bc, t), lerp(bc, cd, t), t)
}

/// Value, first and second derivative at `t`; overwrites `points`.
#[inline]
pub(super) fn value_and_derivatives<const N: usize>(
    points: &mut [SVector<f64, N>],
    t: f64,
) -> [SVector<f64, N>; 3] {
    let degree = points.len() - 1;
    for len in (4..=points.len()).rev() {
        step(&mut points[..len], t);
    }
    #[allow(clippy::cast_precision_loss, reason = "a degree is at most 15")]
    let n = degree as f64;
    let second = if degree >= 2 {
        let bend = (points[2] - points[1]) - (points[1] - points[0]);
        step(&mut points[..3], t);
        bend * (n * (n - 1.0))
    } else {
        SVector::zeros()
    };
    let first = (points[1] - points[0]) * n;
    step(&mut points[..2], t);
    [points[0], first, second]
}

/// Value and first derivative at `t`; overwrites `points`.
#[inline]
pub(super) fn value_and_slope<const N: usize>(
    points: &mut [SVector<f64, N>],
    t: f64,
) -> [SVector<f64, N>; 2] {
    #[allow(clippy::cast_precision_loss, reason = "a degree is at most 15")]
    let n = (points.len() - 1) as f64;
    for len in (3..=points.len()).rev() {
        step(&mut points[..len], t);
    }
    let slope = (points[1] - points[0]) * n;
    step(&mut points[..2], t);
    [points[0], slope]
}

/// Splits at `t`: `points` becomes the part from `t` on; the part before it is
/// returned.
pub(super) fn split<const N: usize>(
    points: &mut [SVector<f64, N>],
    t: f64,
) -> Vec<SVector<f64, N>> {
    let mut left = Vec::with_capacity(points.len());
    for len in (1..=points.len()).rev() {
        left.push(points[0]);
        step(&mut points[..len], t);
    }
    left
}

/// The control points of the part from `t0` to `t1` (any order, inside or
/// outside the unit interval): two partial runs of the algorithm.
pub(super) fn restrict<const N: usize>(points: &mut [SVector<f64, N>], t0: f64, t1: f64) {
    let degree = points.len() - 1;
    // Blossom value i has t0 taken degree - i times and t1 taken i times.
    let original = points.to_vec();
    let mut work = original.clone();
    for (i, target) in points.iter_mut().enumerate() {
        work.copy_from_slice(&original);
        for (level, len) in (2..=degree + 1).rev().enumerate() {
            step(&mut work[..len], if level < degree - i { t0 } else { t1 });
        }
        *target = work[0];
    }
}

/// Raises the degree by one.
pub(super) fn elevate<const N: usize>(points: &[SVector<f64, N>]) -> Vec<SVector<f64, N>> {
    #[allow(clippy::cast_precision_loss, reason = "a degree is at most 15")]
    let ratio = |i: usize| i as f64 / points.len() as f64;
    let mut raised = Vec::with_capacity(points.len() + 1);
    raised.push(points[0]);
    for i in 1..points.len() {
        raised.push(points[i - 1] * ratio(i) + points[i] * (1.0 - ratio(i)));
    }
    raised.push(points[points.len() - 1]);
    raised
}
