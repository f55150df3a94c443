//! How few triangles a piece could do with: the measure of ours.
//!
//! ```text
//! floor = max(2 (1 if an edge is collapsed), n_b - 2, integral sqrt |K| / (c e) dA),
//! n_b = sum over the edges that are not collapsed of max(1, integral sqrt(kappa / (8 e)) ds),
//! c = 3 sqrt 3 / 2 where K > 0, 2 sqrt 5 where K < 0
//! ```
//!
//! The area of the best triangle with its corners on the surface is from
//! Pottmann, Krasauskas, Hamann, Joy and Seibold (2000). Integrals by
//! Gauss-Legendre quadrature on a grid of subdivisions: sampled, not proved.

use crate::bezier::{BezierPatch, GAUSS_8, Side};

/// Subdivisions of the unit interval for the quadrature.
const PARTS: u32 = 2;

fn nodes() -> impl Iterator<Item = (f64, f64)> + Clone {
    (0..PARTS).flat_map(|part| {
        let scale = 1.0 / f64::from(PARTS);
        GAUSS_8
            .iter()
            .map(move |&(t, w)| ((f64::from(part) + t) * scale, w * scale))
    })
}

/// The floor of one piece at chord tolerance `chord`. `collapsed` tells which
/// sides are one point.
#[must_use]
pub fn floor(surface: &BezierPatch, collapsed: [bool; 4], chord: f64) -> f64 {
    let mut segments = 0.0;
    for side in Side::ALL {
        if collapsed[side.index()] {
            continue;
        }
        let curve = surface.edge(side);
        let count: f64 = nodes()
            .map(|(t, w)| {
                let jet = curve.jet(t);
                w * (jet.curvature() / (8.0 * chord)).sqrt() * jet.dt.norm()
            })
            .sum();
        segments += count.max(1.0);
    }
    let mut area = 0.0;
    for (u, wu) in nodes() {
        for (v, wv) in nodes() {
            let jet = surface.jet(u, v);
            let Some((gaussian, _)) = jet.gaussian_and_mean() else {
                continue;
            };
            let best = if gaussian > 0.0 {
                1.5 * 3.0_f64.sqrt()
            } else {
                2.0 * 5.0_f64.sqrt()
            };
            area += wu * wv * gaussian.abs().sqrt() * jet.cross().norm() / (best * chord);
        }
    }
    let least = if collapsed.contains(&true) { 1.0 } else { 2.0 };
    area.max(segments - 2.0).max(least)
}
