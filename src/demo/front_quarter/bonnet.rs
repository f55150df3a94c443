//! The left half of the bonnet; the right half is its mirror image.
//!
//! Along the vehicle it is one polynomial of degree 5, cut into four columns; across,
//! the profile runs from the wing to the centre plane, where it is level, so
//! that both halves meet tangentially.

use super::side::{self, SHUT, Upper};
use super::wing;
use crate::demo::guide::Guide;
use crate::demo::patch::{PanelText, PatchText, SurfaceText};
use crate::demo::profile::{Pen, Stroke};
use crate::demo::sheet::Frame;
use crate::scalar::Vector;

const FRONT: f64 = wing::NOSE;
const REAR: f64 = wing::REAR;
const COLUMNS: [f64; 5] = [FRONT, -350.0, -60.0, 230.0, REAR];
/// Half-width and crown of the section that the profile is drawn in.
const SECTION: [f64; 2] = [735.0, 82.0];
/// Height of the crown along the bonnet, from the front, as Bezier values.
const CROWN: [f64; 6] = [22.0, 55.0, 80.0, 88.0, 86.0, 82.0];
/// How far the front and rear edges bow out at the centre, likewise.
const BOW: [f64; 6] = [-120.0, -70.0, -20.0, 10.0, 30.0, 50.0];

/// The panel.
pub(super) fn panel(upper: &Upper) -> PanelText {
    let fractions: Vec<f64> = COLUMNS
        .iter()
        .map(|x| (x - FRONT) / (REAR - FRONT))
        .collect();
    let (tip, direction) = upper.tip;
    let shift = [direction[0] * SHUT, direction[1] * SHUT];
    let edge = side::upper_curve(upper.origin, tip, shift, &COLUMNS);
    let crown: Vec<Vector> = CROWN
        .iter()
        .zip(BOW)
        .map(|(&c, b)| Vector::new(b, 0.0, c))
        .collect();
    let frame = Frame::new(
        &edge.map(|p| Vector::new(p.x, 0.0, p.z)),
        &edge.map(|p| Vector::new(0.0, p.y, 0.0)),
        &Guide::bezier(&crown, &fractions),
        5,
    );
    let rows = ["outer", "hollow", "edge", "centre"];
    let mut patches = Vec::new();
    for (row, stroke) in rows.iter().zip(strokes()) {
        for k in 0..frame.spans() {
            let net = frame.net(k, &stroke);
            let net = if matches!(*row, "outer" | "centre") {
                net.elevated_v(5)
            } else {
                net
            };
            patches.push(PatchText::new(
                format!("{row} {}", k + 1),
                SurfaceText::Bezier(net),
            ));
        }
    }
    PanelText {
        name: "bonnet",
        comment: &[
            "Left half of the bonnet, degree 5 along the vehicle; from the wing to the centre:",
            "an outer row (5, 5), a hollow and a rounded edge (5, 3) that set off the raised",
            "middle, and the middle row (5, 5), level at the centre plane.",
        ],
        patches,
    }
}

fn strokes() -> Vec<Stroke> {
    Pen::start([735.0, 0.0], [-1.0, 0.25])
        .to([460.0, 52.0], [-1.0, 0.13])
        .to([420.0, 60.6], [-1.0, 0.3])
        .to([360.0, 71.4], [-1.0, 0.06])
        .to([0.0, 82.0], [-1.0, 0.0])
        .strokes()
        .into_iter()
        .map(|stroke| Stroke {
            points: stroke
                .points
                .iter()
                .map(|p| [p[0] / SECTION[0], p[1] / SECTION[1]])
                .collect(),
            weights: None,
        })
        .collect()
}
