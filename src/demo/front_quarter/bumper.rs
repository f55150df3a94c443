//! The left half of the bumper: the side's profile carried round the corner to
//! the nose.
//!
//! The guide is one cubic B-spline whose last span is the side's own parabola
//! (four points are the parabola's blossom), and the profile's outward direction
//! stays square to the vehicle along that span: so the bumper continues wing and
//! lamp glass, and its corner is continuous in curvature along the guide.

use super::fault::{self, Break};
use super::side::{self, BOTTOM, RIDGE, SHUT, Upper, WAIST};
use super::wing;
use crate::demo::guide::Guide;
use crate::demo::patch::{PanelText, PatchText, SurfaceText};
use crate::demo::profile::{Pen, Plane};
use crate::demo::sheet::Frame;
use crate::scalar::Vector;

/// Rear edge, in front of the wing.
pub(super) const REAR: f64 = wing::FRONT - SHUT;
/// Where the side's span ends and the corner begins.
const CORNER: f64 = wing::NOSE;
/// Knots of the guide from the nose on.
const KNOTS: [f64; 12] = [0.0, 0.0, 0.0, 0.0, 0.8, 1.5, 2.1, 2.6, 3.6, 3.6, 3.6, 3.6];
/// Names of the rows, upwards.
const ROWS: [&str; 4] = ["chin", "lower", "waist", "ridge"];

/// The panel.
pub(super) fn panel(upper: &Upper) -> PanelText {
    let frame = frame(upper.origin[0]);
    let strokes = strokes(upper);
    let mut patches = Vec::new();
    for (row, stroke) in ROWS.iter().zip(&strokes) {
        for k in 0..frame.spans() {
            let net = frame.net(k, stroke);
            let name = format!("{row} {}", k + 1);
            if *row == "waist" && k == 1 {
                let neighbour = frame.net(k - 1, stroke);
                let mut patch = PatchText::new(
                    name,
                    SurfaceText::Bezier(fault::tilted(&neighbour, &net, Break::CLEAR)),
                );
                patch.comment = Some(
                    "FAULT 2: tilted by up to 0.8 degrees against `bumper/waist 1`; degree (3, 5).",
                );
                patches.push(patch);
            } else {
                patches.push(PatchText::new(name, SurfaceText::Bezier(net)));
            }
        }
    }
    PanelText {
        name: "bumper",
        comment: &[
            "Left half of the bumper, from the nose (column 1) round the corner to the wing",
            "(column 5): chin, two rows of face, and the character line at the upper edge.",
        ],
        patches,
    }
}

fn strokes(upper: &Upper) -> [crate::demo::profile::Stroke; 4] {
    let (at, direction) = side::flank(BOTTOM);
    // Drawn downwards from the face and turned over, so that it ends there exactly.
    let mut chin = Pen::start(at, [-direction[0], -direction[1]])
        .arc(95.0, [-0.94, -0.34])
        .strokes()
        .swap_remove(0);
    chin.points.reverse();
    let origin = |stroke: crate::demo::profile::Stroke| crate::demo::profile::Stroke {
        points: stroke
            .points
            .iter()
            .map(|p| [p[0] - upper.origin[0], p[1]])
            .collect(),
        weights: stroke.weights,
    };
    [
        chin,
        side::flank_stroke(BOTTOM, WAIST),
        side::flank_stroke(WAIST, RIDGE),
        upper.ridge.clone(),
    ]
    .map(origin)
}

/// Guides of the half-width `reference`: where the profile has p = 0.
fn frame(reference: f64) -> Frame {
    // x on the last span is linear in the knots' parameter.
    let (start, end) = (KNOTS[7], KNOTS[8]);
    let at = |t: f64| CORNER + (REAR - CORNER) * ((t - start) / (end - start));
    let plan = side::plan_coefficients();
    let rise = side::rise_coefficients();
    let blossom = |i: usize| {
        let [a, b, c] = [at(KNOTS[i + 1]), at(KNOTS[i + 2]), at(KNOTS[i + 3])];
        let (first, second) = ((a + b + c) / 3.0, (a * b + b * c + c * a) / 3.0);
        let parabola = |k: [f64; 3]| k[0] + k[1] * first + k[2] * second;
        Vector::new(first, -(reference + parabola(plan)), parabola(rise))
    };
    let mut points = vec![
        Vector::new(-880.0, 0.0, -95.0),
        Vector::new(-880.0, -165.0, -95.0),
        Vector::new(-866.0, -435.0, -93.0),
        Vector::new(-821.0, -650.0, -88.0),
    ];
    points.extend((4..8).map(blossom));
    let outward = [
        [-1.0, 0.0],
        [-1.0, -0.1],
        [-0.93, -0.4],
        [-0.6, -0.8],
        [0.0, -1.0],
        [0.0, -1.0],
        [0.0, -1.0],
        [0.0, -1.0],
    ];
    let outward: Vec<Vector> = outward
        .iter()
        .map(|[x, y]: &Plane| Vector::new(*x, *y, 0.0))
        .collect();
    let a = Guide::cubic_bspline(&points, &KNOTS);
    let spans = a.spans().len();
    Frame::new(
        &a,
        &Guide::cubic_bspline(&outward, &KNOTS),
        &Guide::constant(Vector::new(0.0, 0.0, 1.0), spans),
        3,
    )
}
