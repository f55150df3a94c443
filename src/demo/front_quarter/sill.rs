//! The sill: three B-spline patches below the wing's rear end and the door.

use super::side::{self, BOTTOM, SHUT};
use super::{door, wing};
use crate::demo::patch::{PanelText, PatchText, SurfaceText};
use crate::demo::profile::Plane;
use crate::demo::sheet::Net;
use crate::scalar::Vector;

/// The width of the deliberate gap, in mm.
pub(super) const GAP: f64 = 0.06;

/// The panel.
pub(super) fn panel() -> PanelText {
    let top = BOTTOM - SHUT;
    let (edge, direction) = side::flank(top);
    // Seven B-spline points from the underside up; the last two continue the flank.
    let below = [edge[0] - 20.0 * direction[0], edge[1] - 20.0];
    let points: [Plane; 7] = [
        [690.0, 182.0],
        [735.0, 178.0],
        [775.0, 187.0],
        [801.0, 213.0],
        [818.0, 252.0],
        below,
        edge,
    ];
    let ends = [
        [wing::arch_end() + 7.0, 600.0],
        [600.0, 870.0],
        [870.0 + GAP, door::REAR],
    ];
    let patches = ends
        .iter()
        .enumerate()
        .map(|(k, range)| {
            let curves: Vec<_> = points
                .iter()
                .map(|&place| side::lower_curve(place, range))
                .collect();
            let rows = (0..3)
                .map(|i| {
                    curves
                        .iter()
                        .map(|c| c.spans()[0][i])
                        .collect::<Vec<Vector>>()
                })
                .collect();
            let knots = [
                vec![0.0, 0.0, 0.0, 1.0, 1.0, 1.0],
                vec![0.0, 0.0, 0.0, 0.0, 0.25, 0.5, 0.75, 1.0, 1.0, 1.0, 1.0],
            ];
            let mut patch = PatchText::new(
                (k + 1).to_string(),
                SurfaceText::BSpline {
                    degree: (2, 3),
                    knots,
                    net: Net {
                        rows,
                        weights: None,
                    },
                },
            );
            if k == 2 {
                patch.comment = Some("FAULT 1: begins 0.06 mm behind the end of `sill/2`.");
            }
            patch
        })
        .collect();
    PanelText {
        name: "sill",
        comment: &["Three B-spline patches, quadratic along the vehicle and cubic across."],
        patches,
    }
}
