//! The foot of the windscreen pillar: it grows out of the wing's shoulder and
//! ledge, turns upwards and grows slimmer.

use super::door;
use super::side::{self, Upper};
use crate::demo::guide::Guide;
use crate::demo::patch::{PanelText, PatchText, SurfaceText};
use crate::demo::profile::{Pen, Stroke};
use crate::demo::sheet::Frame;
use crate::scalar::Vector;

const KNOTS: [f64; 10] = [0.0, 0.0, 0.0, 0.0, 1.0, 2.0, 3.0, 3.0, 3.0, 3.0];

/// The panel.
pub(super) fn panel(upper: &Upper) -> PanelText {
    let corner = upper.upper.end();
    let (foot, tangent) = side::upper_place(upper.origin, corner, door::FRONT);
    let w = side::shrink(door::FRONT);
    let guide = [
        foot,
        foot + tangent * 55.0,
        foot + Vector::new(200.0, 12.0, 60.0),
        foot + Vector::new(380.0, 55.0, 175.0),
        foot + Vector::new(540.0, 105.0, 287.0),
        foot + Vector::new(650.0, 145.0, 364.0),
    ];
    let across = [w, w, 0.9, 0.8, 0.72, 0.68].map(|s| Vector::new(0.0, -s, 0.0));
    let up = [
        [0.0, w],
        [0.0, w],
        [-0.17, 0.92],
        [-0.33, 0.82],
        [-0.4, 0.72],
        [-0.4, 0.68],
    ]
    .map(|[x, z]| Vector::new(x, 0.0, z));
    let frame = Frame::new(
        &Guide::cubic_bspline(&guide, &KNOTS),
        &Guide::cubic_bspline(&across, &KNOTS),
        &Guide::cubic_bspline(&up, &KNOTS),
        3,
    );
    let origin = |stroke: &Stroke| Stroke {
        points: stroke
            .points
            .iter()
            .map(|p| [p[0] - corner[0], p[1] - corner[1]])
            .collect(),
        weights: stroke.weights.clone(),
    };
    let (tip, direction) = upper.tip;
    let inner = Pen::start(tip, direction)
        .conic(14.0, [-0.7, -0.72])
        .strokes();
    let rows = [
        ("outer", origin(&upper.shoulder)),
        ("top", origin(&upper.ledge)),
        ("inner", origin(&inner[0])),
    ];
    let mut patches = Vec::new();
    for (row, stroke) in &rows {
        for k in 0..frame.spans() {
            patches.push(PatchText::new(
                format!("{row} {}", k + 1),
                SurfaceText::Bezier(frame.net(k, stroke)),
            ));
        }
    }
    PanelText {
        name: "pillar",
        comment: &[
            "Windscreen pillar, flush with the wing's shoulder and ledge at its foot; the inner",
            "edge is rounded off towards the windscreen (rational quadratic across).",
        ],
        patches,
    }
}
