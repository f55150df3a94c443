//! What rounding may take from a bound.
//!
//! `TriangleRestriction` is good to (2 d + 2) ulp of the largest coordinate,
//! times the ratio of weights; middles of parameters are rounded by an ulp, which
//! moves the surface by at most d ratio^2 (extent of the net) ulp (Floater 1992
//! for the derivative). Both, doubled, are added to every bound.

use crate::bezier::BezierPatch;

/// The largest coordinate of a net.
pub(super) fn scale(surface: &BezierPatch) -> f64 {
    surface
        .control_points()
        .map(|p| p.coords.amax())
        .fold(0.0, f64::max)
}

/// The slack of a surface, see the module's text.
pub(in crate::mesh) fn slack(surface: &BezierPatch) -> f64 {
    let (m, n) = surface.degree();
    let (mut least, mut most) = (f64::INFINITY, 0.0_f64);
    for (i, j) in (0..=m).flat_map(|i| (0..=n).map(move |j| (i, j))) {
        least = least.min(surface.weight(i, j));
        most = most.max(surface.weight(i, j));
    }
    let ratio = most / least;
    let anchor = surface.control_point(0, 0);
    let extent = surface
        .control_points()
        .map(|p| (p - anchor).norm())
        .fold(0.0, f64::max);
    #[allow(clippy::cast_precision_loss, reason = "degrees are at most 15")]
    let degree = (m + n) as f64;
    let nets = (2.0 * degree + 8.0) * scale(surface) * ratio;
    let places = 4.0 * degree * ratio * ratio * extent;
    2.0 * f64::EPSILON * (nets + places)
}
