//! The deliberate breaks in tangency.
//!
//! A patch is raised to degree 5 along the seam, and the two middle points of
//! its second row are lifted along the normal. They act on no other edge's
//! position or tangent plane, and the break fades out to zero at the seam's
//! ends.

use crate::bezier::BezierPatch;
use crate::demo::guide::real;
use crate::demo::sheet::Net;

/// A break by the tangent of its largest angle.
#[derive(Debug, Clone, Copy)]
pub(super) struct Break {
    tangent: f64,
}

impl Break {
    /// 0.8 degrees.
    pub(super) const CLEAR: Self = Self {
        tangent: 0.013_963_542_407_876_3,
    };
    /// 0.12 degrees.
    pub(super) const SLIGHT: Self = Self {
        tangent: 0.002_094_398_164_3,
    };
}

/// Places along the seam at which the angle is taken.
const SAMPLES: usize = 64;

/// The patch `net` tilted along its edge u = 0 against `neighbour`, whose edge
/// u = 1 lies there.
pub(super) fn tilted(neighbour: &Net, net: &Net, wanted: Break) -> Net {
    let net = net.elevated_v(5);
    let Ok(before) = neighbour.patch() else {
        return net;
    };
    let lift = |height: f64| {
        let mut lifted = net.clone();
        if let Some(normal) = before.normal(1.0, 0.5) {
            for point in &mut lifted.rows[1][2..4] {
                *point += normal * height;
            }
        }
        lifted
    };
    let (mut low, mut high) = (0.0, 100.0);
    for _ in 0..60 {
        let middle = f64::midpoint(low, high);
        let reached = lift(middle)
            .patch()
            .map_or(f64::INFINITY, |after| largest_tangent(&before, &after));
        if reached < wanted.tangent {
            low = middle;
        } else {
            high = middle;
        }
    }
    lift(low)
}

/// The largest tangent of the angle between the normals along the seam, sampled.
fn largest_tangent(before: &BezierPatch, after: &BezierPatch) -> f64 {
    (0..=SAMPLES)
        .filter_map(|k| {
            let t = real(k) / real(SAMPLES);
            let (a, b) = (before.normal(1.0, t)?, after.normal(0.0, t)?);
            Some(a.cross(&b).norm() / a.dot(&b))
        })
        .fold(0.0, f64::max)
}
