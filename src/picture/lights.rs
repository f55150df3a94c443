//! Reflection lines: parallel light tubes seen in a polished surface.
//!
//! The tubes stand on a drum round what is drawn, evenly spaced and all parallel
//! to the drum's axis, which lies across or upright in the picture. The ray from
//! the eye is reflected at the *surface's* normal, r = 2 (n.v) n - v, and meets
//! the drum at an angle; light and dark change with that angle. A line is as
//! smooth as the normal: it bends where curvature jumps, and breaks where the
//! tangent plane does (Klass 1980, doi 10.1016/0010-4485(80)90151-5, for
//! reflection lines as a test of surfaces).

use std::f64::consts::TAU;

use super::camera::Camera;
use super::scene::Sight;
use crate::scalar::{Point, Vector};

/// The drum of lights.
#[derive(Debug, Clone, Copy)]
pub struct Lights {
    /// Light tubes to the full turn.
    pub count: f64,
    centre: Point,
    radius: f64,
    /// Towards the eye, across the axis.
    toward: Vector,
    /// The directions across the axis from which the angle is taken.
    across: [Vector; 2],
    /// Right and up on the picture, a pixel long.
    steps: [Vector; 2],
}

impl Lights {
    /// A drum of this radius round `centre`, its axis across the picture, or
    /// `upright`.
    #[must_use]
    pub fn new(camera: &Camera, centre: Point, radius: f64, count: f64, upright: bool) -> Self {
        let side = if upright { camera.right } else { camera.up };
        Self {
            count,
            centre,
            radius,
            toward: camera.toward,
            across: [side, camera.toward],
            steps: [camera.right * camera.pixel, camera.up * camera.pixel],
        }
    }

    /// The share of light, 0 to 1, over the pixel in which the surface is seen.
    /// Between light and dark it is averaged over the pixel's width.
    #[must_use]
    pub fn share(&self, sight: &Sight) -> f64 {
        let Some(normal) = sight.normal else {
            return 0.5;
        };
        let Some(here) = self.turns(&sight.jet.point, &normal) else {
            return 0.5;
        };
        let mut width = 0.0_f64;
        for step in self.steps {
            // The tangent step that moves what is seen by a pixel.
            let slope = step.dot(&normal) / self.toward.dot(&normal);
            let step = step - self.toward * slope;
            let beside = sight
                .normal_beside(&step)
                .and_then(|n| self.turns(&(sight.jet.point + step), &n));
            let Some(beside) = beside else { return 0.5 };
            let turn = beside - here;
            width += (turn - turn.round()).abs();
        }
        tubes(here * self.count, (width * self.count).max(1e-9))
    }

    /// The angle at which the reflected ray meets the drum, in turns; `None` for
    /// a ray along the axis.
    fn turns(&self, point: &Point, normal: &Vector) -> Option<f64> {
        let reflected = normal * (2.0 * normal.dot(&self.toward)) - self.toward;
        let ray = self.across.map(|a| a.dot(&reflected));
        let from = self.across.map(|a| a.dot(&(point - self.centre)));
        let square = ray[0] * ray[0] + ray[1] * ray[1];
        if square < 1e-12 {
            return None;
        }
        let along = from[0] * ray[0] + from[1] * ray[1];
        let inside = self.radius * self.radius - from[0] * from[0] - from[1] * from[1];
        let t = (-along + (along * along + square * inside).max(0.0).sqrt()) / square;
        let hit = [from[0] + t * ray[0], from[1] + t * ray[1]];
        Some(hit[0].atan2(hit[1]) / TAU)
    }
}

/// A square wave, light over the first half of each period, averaged over
/// `width` periods round `at`.
fn tubes(at: f64, width: f64) -> f64 {
    let lit = |x: f64| 0.5 * x.floor() + (x - x.floor()).min(0.5);
    ((lit(at + width / 2.0) - lit(at - width / 2.0)) / width).clamp(0.0, 1.0)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn tubes_average_what_they_cover() {
        for (at, width, share) in [
            (0.25, 0.1, 1.0),
            (0.75, 0.1, 0.0),
            (0.5, 0.2, 0.5),
            (0.0, 0.2, 0.5),
            (0.3, 7.0, 0.5),
            (-0.75, 0.1, 1.0),
        ] {
            assert!((tubes(at, width) - share).abs() < 0.08, "{at} {width}");
        }
    }
}
