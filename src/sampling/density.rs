//! How close the samples of a seam must stand at one place.
//!
//! ```text
//! 1 / h = max over the uses of
//!   sqrt(kappa / (8 lambda e))           the curve within lambda e of its chords
//!   sqrt(|M| / (8.94 e)), |M| W / (8 e)  the smaller, where K < 0
//!   sqrt(L^2 + M^2) / psi                where a normal angle psi is asked for
//! ```
//!
//! L, M, N is the second form in the frame (along, across), W the width of the
//! piece. lambda is 0.64 where K > 0: the rows and the columns of a lattice whose
//! triangles are as wide as high stand 8 lambda e = 5.12 e apart (in squares of
//! the second form), so samples that far apart fit them both ways. It is 0.9 where
//! the surface across is straight (or saddle-shaped) as far as the piece goes. The
//! twist terms are the lattice's own: along a straight edge of a saddle the
//! samples stand as far apart as the rows inside.

use super::Limits;
use crate::bezier::{BezierPatch, CurveJet, Side};

/// The part of the chord an edge may use where the surface bends across it.
const BENT_ACROSS: f64 = 0.64;

/// The part it may use where the surface is straight across.
const STRAIGHT_ACROSS: f64 = 0.9;

/// A surface that takes part in a seam.
#[derive(Debug)]
pub(super) struct Use<'a> {
    pub(super) surface: &'a BezierPatch,
    pub(super) side: Side,
    /// Parameters on that side at the start and end of the master's stretch.
    pub(super) t: [f64; 2],
}

/// Samples per unit length wanted where the master has the jet `curve`; `s` is
/// the place in the stretch, 0 to 1.
pub(super) fn density(curve: &CurveJet, uses: &[Use], s: f64, limits: &Limits) -> f64 {
    let e = limits.chord;
    let curvature = curve.curvature();
    let mut bent = 0.0_f64;
    // A hair closer than asked, so that rounding cannot make an edge too long.
    let mut least = limits.max_edge.map_or(0.0, |edge| (1.0 + 1e-9) / edge);
    for usage in uses {
        if let Some(turn) = limits.normal_rad {
            // At a pole the form is that of the surface just inside.
            let inside = s + (0.5 - s) * 0.01;
            if let Some(form) = shape(usage, s).or_else(|| shape(usage, inside)) {
                least = least.max(form.along.hypot(form.twist) / (0.9 * turn));
            }
        }
        let Some(shape) = shape(usage, s) else {
            continue;
        };
        let gaussian = shape.along * shape.across - shape.twist * shape.twist;
        bent = bent.max((shape.across.abs() * shape.width * shape.width / (8.0 * e)).min(1.0));
        if gaussian < 0.0 && shape.twist.abs() > 0.0 {
            let twist = shape.twist.abs();
            least = least.max(
                (twist / (8.94 * limits.interior))
                    .sqrt()
                    .min(twist * shape.width / (8.0 * limits.interior)),
            );
        }
    }
    let lambda = STRAIGHT_ACROSS - (STRAIGHT_ACROSS - BENT_ACROSS) * bent;
    least.max((curvature / (8.0 * lambda * e)).sqrt())
}

/// A surface that is narrower across than this part of its speed along has run
/// into a pole: its second form there is rounding over rounding.
const NARROW: f64 = 1e-9;

/// The second form of a use in the frame of its edge, and its width.
struct Shape {
    along: f64,
    twist: f64,
    across: f64,
    width: f64,
}

fn shape(usage: &Use, s: f64) -> Option<Shape> {
    let t = usage.t[0] * (1.0 - s) + usage.t[1] * s;
    let [u, v] = usage.side.at(t);
    let jet = usage.surface.jet(u, v);
    let normal = jet.normal()?;
    let [l, m, n] = jet.second_form(&normal);
    let (first, second, ss, sc, cc) = match usage.side {
        Side::V0 | Side::V1 => (jet.du, jet.dv, l, m, n),
        Side::U0 | Side::U1 => (jet.dv, jet.du, n, m, l),
    };
    let speed = first.norm_squared();
    let lean = first.dot(&second) / speed;
    let perpendicular = second - first * lean;
    let width = perpendicular.norm();
    if speed <= 0.0 || width <= NARROW * speed.sqrt() {
        return None;
    }
    Some(Shape {
        along: ss / speed,
        twist: (sc - lean * ss) / (speed.sqrt() * width),
        across: (cc - 2.0 * lean * sc + lean * lean * ss) / (width * width),
        width,
    })
}
