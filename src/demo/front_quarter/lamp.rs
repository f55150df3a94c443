//! The lamp: a glass in the side between wing and bumper, and the bowl of the
//! main beam that looks forward out of the opening above the bumper.

use super::side::{self, SHUT, Upper};
use super::{bumper, wing};
use crate::demo::patch::{CurveText, PanelText, PatchText, SurfaceText};
use crate::demo::profile::{Pen, Plane};
use crate::scalar::Vector;

/// Pole of the bowl.
const POLE: [f64; 3] = [-650.0, -520.0, 700.0];

/// The glass: one Coons patch, 4 mm inside the neighbours' edges.
pub(super) fn glass(upper: &Upper) -> PanelText {
    let ends = [wing::NOSE, bumper::REAR];
    let (below, above) = (side::ridge_exit(), side::upper_exit());
    let shifted = |d: Plane, by: f64| [d[0] * by, d[1] * by];
    let bottom = side::upper_curve(upper.origin, [0.0, 0.0], shifted(below, SHUT), &ends);
    let top = side::upper_curve(
        upper.origin,
        upper.upper.end(),
        shifted(above, -SHUT),
        &ends,
    );
    let (v0, v1) = (bottom.spans()[0].clone(), top.spans()[0].clone());
    // In the plane across the vehicle the ends bulge like the upper flank.
    let across = |from: Vector, to: Vector| {
        let curve = Pen::start([-from.y, from.z], below).to([-to.y, to.z], above);
        let mut points: Vec<Vector> = curve.strokes()[0]
            .points
            .iter()
            .map(|p| Vector::new(from.x, -p[0], p[1]))
            .collect();
        points[0] = from;
        points[3] = to;
        CurveText::polynomial(points)
    };
    let surface = SurfaceText::Coons {
        u0: across(v0[0], v1[0]),
        u1: across(v0[2], v1[2]),
        v0: CurveText::polynomial(v0),
        v1: CurveText::polynomial(v1),
    };
    PanelText {
        name: "lamp glass",
        comment: &["One Coons patch in the side, in front of the upper wing."],
        patches: vec![PatchText::new("1", surface)],
    }
}

/// The bowl and its rim: revolutions about an axis along the vehicle.
pub(super) fn bowl() -> PanelText {
    // Radius and distance ahead of the pole. The parabola r = 80 t, a = 60 t^2
    // has its pole at t = 0 and slope 3 : 2 at the rim.
    let parabola: [Plane; 3] = [[0.0, 0.0], [40.0, 0.0], [80.0, 60.0]];
    let rim = Pen::start(parabola[2], [2.0, 3.0])
        .conic(6.0, [1.0, -0.3])
        .strokes()
        .swap_remove(0);
    let place = |p: &Plane| Vector::new(POLE[0] - p[1], POLE[1] + p[0], POLE[2]);
    let revolution = |points: &[Plane], weights: Option<Vec<f64>>| SurfaceText::Revolution {
        profile: CurveText {
            points: points.iter().map(place).collect(),
            weights,
        },
        center: Vector::from(POLE),
        axis: Vector::new(-1.0, 0.0, 0.0),
    };
    let mut patches = vec![
        PatchText::new("bowl", revolution(&parabola, None)),
        PatchText::new("rim", revolution(&rim.points, rim.weights.clone())),
    ];
    patches[0].comment = Some("A paraboloid, open ahead; its edge v = 0 is a pole.");
    for patch in &mut patches {
        patch.flip = true;
    }
    PanelText {
        name: "lamp bowl",
        comment: &["The bowl of the main beam, 160 across, facing forward, and its rounded rim."],
        patches,
    }
}
