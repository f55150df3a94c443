//! The front part of the door skin: two rows of flank, the character line and
//! the upper flank, all on the master surface of the side.

use super::fault::{self, Break};
use super::side::{self, BOTTOM, RIDGE, SHUT, Upper, WAIST};
use crate::demo::patch::{PanelText, PatchText, SurfaceText};

/// Front edge of the door, behind the wing.
pub(super) const FRONT: f64 = super::wing::REAR + SHUT;
/// Where the modelled part ends.
pub(super) const REAR: f64 = 1150.0;
const COLUMNS: [f64; 4] = [FRONT, 740.0, 945.0, REAR];

/// The panel.
pub(super) fn panel(upper: &Upper) -> PanelText {
    let lower = side::lower_frame(&COLUMNS);
    let above = side::upper_frame(upper.origin, &COLUMNS);
    // The door's top edge keeps clear of the pillar's foot.
    let top = upper.upper.restricted(
        0.0,
        upper.upper.parameter_before_end(SHUT / side::shrink(FRONT)),
    );
    let rows = [
        ("lower", &lower, side::flank_stroke(BOTTOM, WAIST)),
        ("waist", &lower, side::flank_stroke(WAIST, RIDGE)),
        ("ridge", &lower, upper.ridge_cubic.clone()),
        ("upper", &above, top),
    ];
    let mut patches = Vec::new();
    for (row, frame, stroke) in &rows {
        for k in 0..frame.spans() {
            let net = frame.net(k, stroke);
            let name = format!("{row} {}", k + 1);
            if *row == "upper" && k == 2 {
                let neighbour = frame.net(k - 1, stroke);
                let mut patch = PatchText::new(
                    name,
                    SurfaceText::Bezier(fault::tilted(&neighbour, &net, Break::SLIGHT)),
                );
                patch.comment = Some(
                    "FAULT 3: tilted by up to 0.12 degrees against `door/upper 2`; degree (3, 5).",
                );
                patches.push(patch);
            } else {
                patches.push(PatchText::new(name, SurfaceText::Indexed(net)));
            }
        }
    }
    PanelText {
        name: "door",
        comment: &[
            "Front part of the door skin, bicubic, its points in the shared table; the character",
            "line (radius 15) runs on from the wing as a cubic.",
        ],
        patches,
    }
}
