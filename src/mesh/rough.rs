//! About how many triangles a piece takes: the measure by which pieces are
//! chosen for a prediction, and scaled.
//!
//! ```text
//! size = integral of density dA + border - 2
//! density = max(sqrt |K| / (c e), 4 / (sqrt 3 L^2), 4 |K| / (sqrt 3 psi^2))
//! border  = sum over the sides of max(1, integral max(sqrt(kappa / (8 lambda e)), 1 / L) ds)
//! ```
//!
//! A disk with b border vertices and i inner ones has 2 i + b - 2 triangles.
//! The density is that of the best triangles for the chord e (Pottmann et al.
//! 2000), and of equilateral ones for the largest edge L and the normal angle
//! psi. Midpoint sums: sampled. A mesh has one to two and a half times as many
//! triangles, and more where a normal angle cuts them narrow; a prediction
//! finds out how many times.

use super::budget::as_float;
use crate::bezier::{BezierPatch, Side};
use crate::sampling::Limits;

/// Midpoints a parameter.
const PARTS: u8 = 8;

/// The part of the chord that edges use.
const EDGES: f64 = 0.8;

/// The size of one piece in triangles, inside and at the border.
#[derive(Debug, Clone, Copy, Default)]
pub(super) struct Size {
    pub(super) inner: f64,
    pub(super) border: f64,
}

impl Size {
    /// Both together; zero only where there is nothing.
    pub(super) fn whole(self) -> f64 {
        self.inner + self.border
    }
}

/// The size of one piece; `collapsed` tells which sides are one point.
pub(super) fn rough(surface: &BezierPatch, collapsed: [bool; 4], limits: &Limits) -> Size {
    let middle = |k: u8| (f64::from(k) + 0.5) / f64::from(PARTS);
    let cell = f64::from(PARTS).powi(-2);
    let mut inner = 0.0;
    for (i, j) in (0..PARTS).flat_map(|i| (0..PARTS).map(move |j| (i, j))) {
        let jet = surface.jet(middle(i), middle(j));
        let gaussian = jet.gaussian_and_mean().map_or(0.0, |(k, _)| k);
        inner += density(gaussian, limits) * jet.cross().norm() * cell;
    }
    let mut border = 0.0;
    for side in Side::ALL {
        if collapsed[side.index()] {
            continue;
        }
        let curve = surface.edge(side);
        let steps: f64 = (0..PARTS)
            .map(|k| {
                let jet = curve.jet(middle(k));
                let bent = (jet.curvature() / (8.0 * EDGES * limits.chord)).sqrt();
                let least = limits.max_edge.map_or(0.0, |edge| 1.0 / edge);
                bent.max(least) * jet.dt.norm() / f64::from(PARTS)
            })
            .sum();
        border += steps.max(1.0);
    }
    let least = if collapsed.contains(&true) { 1.0 } else { 2.0 };
    Size {
        inner,
        border: (border - 2.0).max(least),
    }
}

fn density(gaussian: f64, limits: &Limits) -> f64 {
    let best = if gaussian > 0.0 {
        1.5 * 3.0_f64.sqrt()
    } else {
        2.0 * 5.0_f64.sqrt()
    };
    let equilateral = 4.0 / 3.0_f64.sqrt();
    let bent = gaussian.abs().sqrt() / (best * limits.chord);
    let short = limits.max_edge.map_or(0.0, |l| equilateral / (l * l));
    let turned = limits
        .normal_rad
        .map_or(0.0, |psi| equilateral * gaussian.abs() / (psi * psi));
    bent.max(short).max(turned)
}

/// The pieces to be meshed for a prediction of the whole, with the sizes of
/// all: systematic sampling with chances in proportion to size (Madow 1949),
/// so that the sum is estimated by the mean of triangles over size. All pieces
/// where there are few; those without a size are never chosen.
pub(super) fn chosen(sizes: &[f64], most: usize) -> Vec<bool> {
    let wanted = sizes.iter().filter(|size| **size > 0.0).count();
    if wanted <= most {
        return sizes.iter().map(|size| *size > 0.0).collect();
    }
    let total: f64 = sizes.iter().sum();
    let step = total / as_float(most as u64);
    let (mut sum, mut next) = (0.0, 0.5 * step);
    sizes
        .iter()
        .map(|size| {
            sum += size;
            let hit = next < sum;
            while next < sum {
                next += step;
            }
            hit
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn large_pieces_are_chosen_and_small_ones_by_turns() {
        let mut sizes = vec![1.0; 100];
        sizes[40] = 50.0;
        sizes[7] = 0.0;
        let chosen = chosen(&sizes, 15);
        assert!(chosen[40] && !chosen[7]);
        let count = chosen.iter().filter(|c| **c).count();
        assert!((9..=12).contains(&count), "{count}");
        assert_eq!(super::chosen(&[2.0, 0.0, 1.0], 5), [true, false, true]);
    }
}
