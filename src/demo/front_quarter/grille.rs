//! The left half of the grille's bar, in the opening between bonnet and bumper.

use crate::demo::guide::Guide;
use crate::demo::patch::{PanelText, PatchText, SurfaceText};
use crate::demo::profile::{Pen, Plane, Stroke};
use crate::demo::sheet::Frame;
use crate::scalar::Vector;

/// The bar's radius, in mm.
const RADIUS: f64 = 14.0;
const KNOTS: [f64; 9] = [0.0, 0.0, 0.0, 0.0, 0.5, 1.0, 1.0, 1.0, 1.0];
/// The bar's axis, from the centre plane outwards; level there.
const AXIS: [[f64; 3]; 5] = [
    [-838.0, 0.0, 690.0],
    [-838.0, -80.0, 690.0],
    [-832.0, -210.0, 691.0],
    [-815.0, -330.0, 694.0],
    [-795.0, -408.0, 697.0],
];

/// The panel.
pub(super) fn panel() -> PanelText {
    let frame = Frame::new(
        &Guide::cubic_bspline(&AXIS.map(Vector::from), &KNOTS),
        &Guide::constant(Vector::new(-1.0, 0.0, 0.0), 2),
        &Guide::constant(Vector::new(0.0, 0.0, 1.0), 2),
        3,
    );
    let half: [Plane; 3] = [[0.0, -RADIUS], [1.0, 0.0], [0.0, 1.0]];
    let strokes: Vec<Stroke> = Pen::start(half[0], half[1])
        .conic(RADIUS, half[2])
        .conic(RADIUS, [-1.0, 0.0])
        .strokes();
    let mut patches = Vec::new();
    for (row, stroke) in ["lower", "upper"].iter().zip(&strokes) {
        for k in 0..frame.spans() {
            patches.push(PatchText::new(
                format!("{row} {}", k + 1),
                SurfaceText::Bezier(frame.net(k, stroke)),
            ));
        }
    }
    PanelText {
        name: "grille",
        comment: &[
            "The bar across the opening above the bumper: half a tube of radius 14, quarter circles",
            "as rational quadratics.",
        ],
        patches,
    }
}
