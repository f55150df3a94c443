//! Control points as homogeneous rows (w x, w y, w z, w).

use crate::scalar::Point;

/// A control point times its weight, and the weight.
pub(super) type Lifted = nalgebra::Vector4<f64>;

pub(super) fn lift(point: Point, weight: f64) -> Lifted {
    Lifted::new(point.x * weight, point.y * weight, point.z * weight, weight)
}

pub(super) fn project(lifted: &Lifted) -> Point {
    let w = lifted.w;
    Point::new(lifted.x / w, lifted.y / w, lifted.z / w)
}

/// a (1 - t) + b t, exact at both ends.
pub(super) fn lerp(a: Lifted, b: Lifted, t: f64) -> Lifted {
    a * (1.0 - t) + b * t
}

/// A count as a number; degrees and grid positions are small.
pub(super) fn real(count: usize) -> f64 {
    #[allow(clippy::cast_precision_loss, reason = "counts here are far below 2^53")]
    let value = count as f64;
    value
}

/// The same curve piece at a higher degree.
pub(super) fn elevated(mut points: Vec<Lifted>, degree: usize) -> Vec<Lifted> {
    while points.len() <= degree {
        let count = points.len();
        let mut raised = Vec::with_capacity(count + 1);
        raised.push(points[0]);
        for i in 1..count {
            raised.push(lerp(points[i], points[i - 1], real(i) / real(count)));
        }
        raised.push(points[count - 1]);
        points = raised;
    }
    points
}

/// The parts before and after `t` by de Casteljau's algorithm.
pub(super) fn split(points: &[Lifted], t: f64) -> [Vec<Lifted>; 2] {
    let mut right = points.to_vec();
    let mut left = Vec::with_capacity(points.len());
    for len in (1..=points.len()).rev() {
        left.push(right[0]);
        for i in 1..len {
            right[i - 1] = lerp(right[i - 1], right[i], t);
        }
    }
    [left, right]
}
