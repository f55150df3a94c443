//! The master surface of the vehicle's side, which wing, door, sill, lamp glass
//! and the rear of the bumper share, so that they stand flush across their shut
//! lines.
//!
//! ```text
//! below the ridge:  S(x, z') = (x, -(g(x) + s(z')), z' + m(x))
//! above it:         S(x, v)  = (x, -(g(x) + s_0 + w(x) s(v)), m(x) + z_0 + w(x) h(v))
//! ```
//!
//! g is the crown in plan (radius 6 m), m the rise of the character line, w the
//! lowering of the shoulder towards the front; all three are parabolas.

use crate::demo::guide::Guide;
use crate::demo::profile::{Pen, Plane, Stroke};
use crate::demo::sheet::Frame;
use crate::scalar::Vector;

/// Width of the shut lines, in mm.
pub(super) const SHUT: f64 = 4.0;
/// Lower edge of wing and door, on the line z' = const.
pub(super) const BOTTOM: f64 = 318.0;
/// Where the flank's upper and lower rows meet.
pub(super) const WAIST: f64 = 504.0;
/// Lower border of the character line's blend.
pub(super) const RIDGE: f64 = 725.0;
/// Radius of the character line.
pub(super) const RIDGE_RADIUS: f64 = 15.0;

/// g: 0 at x = 700, radius 6000.
const PLAN: [f64; 3] = [490_000.0 / 12_000.0, -1400.0 / 12_000.0, 1.0 / 12_000.0];
/// m.
const RISE: [f64; 3] = [0.0, 0.08, -1.0 / 24_000.0];
/// w: 1 at x = 600.
const SHRINK: [f64; 3] = [1.0 - 1.5e-7 * 360_000.0, 1.5e-7 * 1200.0, -1.5e-7];

/// The flank's half-width and height where it is widest, were it continued.
const CROWN: Plane = [914.0, 935.0];
/// The flank's crown radius in height.
const CROWN_RADIUS: f64 = 2500.0;

/// A parabola's value.
fn value(c: [f64; 3], x: f64) -> f64 {
    c[0] + c[1] * x + c[2] * (x * x)
}

/// A parabola's slope.
fn slope(c: [f64; 3], x: f64) -> f64 {
    c[1] + 2.0 * c[2] * x
}

/// m(x), the rise of a line z' = const.
pub(super) fn rise(x: f64) -> f64 {
    value(RISE, x)
}

/// m'(x).
pub(super) fn rise_slope(x: f64) -> f64 {
    slope(RISE, x)
}

/// m as coefficients of 1, x, x^2.
pub(super) const fn rise_coefficients() -> [f64; 3] {
    RISE
}

/// w(x).
pub(super) fn shrink(x: f64) -> f64 {
    value(SHRINK, x)
}

/// Half-width of the flank at z' before the crown in plan, as the coefficients
/// of 1, z', z'^2.
pub(super) fn flank_coefficients() -> [f64; 3] {
    let k = 1.0 / (2.0 * CROWN_RADIUS);
    [CROWN[0] - k * (CROWN[1] * CROWN[1]), 2.0 * k * CROWN[1], -k]
}

/// -g as coefficients of 1, x, x^2: what the crown in plan adds to a half-width.
pub(super) fn plan_coefficients() -> [f64; 3] {
    PLAN.map(|c| -c)
}

/// Half-width of the flank at z', and its direction there, upwards.
pub(super) fn flank(height: f64) -> (Plane, Plane) {
    let c = flank_coefficients();
    ([value(c, height), height], [slope(c, height), 1.0])
}

/// The flank's profile between two heights, exact, as a cubic.
pub(super) fn flank_stroke(from: f64, to: f64) -> Stroke {
    let [c0, c1, c2] = flank_coefficients();
    let at = |a: f64, b: f64| {
        [
            c0 + c1 * f64::midpoint(a, b) + c2 * (a * b),
            f64::midpoint(a, b),
        ]
    };
    Stroke {
        points: vec![at(from, from), at(from, to), at(to, to)],
        weights: None,
    }
    .elevated(3)
}

/// Directions of the side's profile in its order: above the ridge, at the top
/// of the upper flank, behind the shoulder, at the bonnet.
const TURNS: [Plane; 4] = [
    [-0.371, 0.928],
    [-0.497, 0.868],
    [-0.927, 0.375],
    [-0.97, 0.242],
];

/// Everything above the flank.
#[derive(Debug, Clone)]
pub(super) struct Upper {
    /// The character line, exact, from the flank on (absolute).
    pub(super) ridge: Stroke,
    /// The same as a cubic.
    pub(super) ridge_cubic: Stroke,
    /// Where the ridge ends: the origin of the strokes that follow.
    pub(super) origin: Plane,
    /// The upper flank, from the origin.
    pub(super) upper: Stroke,
    /// The shoulder, radius 80.
    pub(super) shoulder: Stroke,
    /// The ledge to the bonnet.
    pub(super) ledge: Stroke,
    /// Where the ledge ends, and its direction.
    pub(super) tip: (Plane, Plane),
}

impl Upper {
    pub(super) fn new() -> Self {
        let (at, direction) = flank(RIDGE);
        let blend = Pen::start(at, direction);
        let exact = blend.clone().conic(RIDGE_RADIUS, TURNS[0]);
        let (origin, _) = exact.tip();
        let mut cubic = blend.arc(RIDGE_RADIUS, TURNS[0]).strokes();
        let mut exact = exact.strokes();
        let mut ridge_cubic = cubic.swap_remove(0);
        let last = ridge_cubic.points.len() - 1;
        ridge_cubic.points[last] = origin;
        let pen = Pen::start([0.0, 0.0], TURNS[0])
            .to([-54.0, 116.0], TURNS[1])
            .arc(80.0, TURNS[2]);
        let (shoulder_end, _) = pen.tip();
        let pen = pen.to([shoulder_end[0] - 66.6, shoulder_end[1] + 21.6], TURNS[3]);
        let tip = pen.tip();
        let mut strokes = pen.strokes();
        let ledge = strokes.swap_remove(2);
        let shoulder = strokes.swap_remove(1);
        let upper = strokes.swap_remove(0);
        Self {
            ridge: exact.swap_remove(0),
            ridge_cubic,
            origin,
            upper,
            shoulder,
            ledge,
            tip,
        }
    }
}

/// Unit direction above the ridge.
pub(super) fn ridge_exit() -> Plane {
    crate::demo::profile::unit(TURNS[0])
}

/// Unit direction at the top of the upper flank.
pub(super) fn upper_exit() -> Plane {
    crate::demo::profile::unit(TURNS[1])
}

/// Control coefficients of the curve that carries the profile's place (s, h):
/// (x, -(g + s), m + h).
fn carrier(place: Plane) -> [Vector; 3] {
    [0, 1, 2].map(|k| {
        let at = |constant: f64, c: f64| if k == 0 { constant + c } else { c };
        let x = if k == 1 { 1.0 } else { 0.0 };
        Vector::new(x, -at(place[0], -PLAN[k]), at(place[1], RISE[k]))
    })
}

/// The curve of a place on the side below the ridge.
pub(super) fn lower_curve(place: Plane, breaks: &[f64]) -> Guide {
    Guide::quadratic(&carrier(place), breaks)
}

/// The curve of a place above the ridge, `tip` from the ridge's end in the
/// scaled profile and `shift` in mm.
pub(super) fn upper_curve(origin: Plane, tip: Plane, shift: Plane, breaks: &[f64]) -> Guide {
    let base = carrier([origin[0] + shift[0], origin[1] + shift[1]]);
    let coefficients = [0, 1, 2].map(|k| base[k] + Vector::new(0.0, -tip[0], tip[1]) * SHRINK[k]);
    Guide::quadratic(&coefficients, breaks)
}

/// Carries absolute profiles: flank and ridge.
pub(super) fn lower_frame(breaks: &[f64]) -> Frame {
    let spans = breaks.len() - 1;
    Frame::new(
        &lower_curve([0.0, 0.0], breaks),
        &Guide::constant(Vector::new(0.0, -1.0, 0.0), spans),
        &Guide::constant(Vector::new(0.0, 0.0, 1.0), spans),
        3,
    )
}

/// Carries profiles that start at the ridge's end.
pub(super) fn upper_frame(origin: Plane, breaks: &[f64]) -> Frame {
    let scaled = |direction: Vector| Guide::quadratic(&SHRINK.map(|c| direction * c), breaks);
    Frame::new(
        &lower_curve(origin, breaks),
        &scaled(Vector::new(0.0, -1.0, 0.0)),
        &scaled(Vector::new(0.0, 0.0, 1.0)),
        3,
    )
}

/// Place and tangent along x of the upper profile's point `tip` at x.
pub(super) fn upper_place(origin: Plane, tip: Plane, x: f64) -> (Vector, Vector) {
    let (w, dw) = (value(SHRINK, x), slope(SHRINK, x));
    let place = Vector::new(
        x,
        value(PLAN, x) - origin[0] - w * tip[0],
        value(RISE, x) + origin[1] + w * tip[1],
    );
    let tangent = Vector::new(
        1.0,
        slope(PLAN, x) - dw * tip[0],
        slope(RISE, x) + dw * tip[1],
    );
    (place, tangent)
}
