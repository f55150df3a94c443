//! What a proved layout teaches the next one: where it was too wide.
//!
//! The lattice follows the second derivatives alone. Rows that hold different
//! numbers of points cannot keep in step everywhere, parameter lines wander,
//! third derivatives count: the proof sees all of it. So the figures of a
//! layout are gathered on a coarse grid, and the next layout is made for a
//! chord divided by them.

/// Cells in each direction.
const CELLS: usize = 6;

/// The figure that this share of a cell's triangles keep decides; the rest is
/// left to refinement.
const SHARE: f64 = 0.85;

/// A layout aims this much below the chord, since the next one differs a
/// little everywhere.
const MARGIN: f64 = 1.015;

/// Finer than this helps no further; what still fails is refined.
const MOST: f64 = 4.0;

/// How much finer a piece must be laid out than its second derivatives say.
#[derive(Debug, Clone)]
pub(super) struct Correction {
    factors: [f64; CELLS * CELLS],
}

impl Correction {
    pub(super) fn none() -> Self {
        Self {
            factors: [1.0; CELLS * CELLS],
        }
    }

    /// The factor at (u, v), bilinear between the cells' centres.
    pub(super) fn at(&self, [u, v]: [f64; 2]) -> f64 {
        let (i, s) = between(u);
        let (j, t) = between(v);
        let at = |i: usize, j: usize| self.factors[i.min(CELLS - 1) * CELLS + j.min(CELLS - 1)];
        (at(i, j) * (1.0 - s) + at(i + 1, j) * s) * (1.0 - t)
            + (at(i, j + 1) * (1.0 - s) + at(i + 1, j + 1) * s) * t
    }

    /// Takes in the figures of a layout made with this correction: places of
    /// triangles, and deviation over chord.
    pub(super) fn learn(&mut self, figures: impl Iterator<Item = ([f64; 2], f64)>) {
        let mut cells: Vec<Vec<f64>> = vec![Vec::new(); CELLS * CELLS];
        let mut all = Vec::new();
        for ([u, v], figure) in figures {
            cells[cell(u) * CELLS + cell(v)].push(figure);
            all.push(figure);
        }
        let overall = quantile(&mut all).unwrap_or(1.0);
        for (factor, figures) in self.factors.iter_mut().zip(&mut cells) {
            let kept = quantile(figures).unwrap_or(overall);
            *factor = (*factor * (kept * MARGIN).clamp(0.85, 2.0)).min(MOST);
        }
    }
}

fn quantile(figures: &mut [f64]) -> Option<f64> {
    let count = figures.len();
    let at = (1..count)
        .find(|&k| crate::sampling::ratio(k, count) >= SHARE)
        .unwrap_or(count);
    let at = at.checked_sub(1)?;
    Some(*figures.select_nth_unstable_by(at, f64::total_cmp).1)
}

#[allow(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "a parameter in 0..1 times a cell count"
)]
fn cell(t: f64) -> usize {
    let scaled = t * crate::sampling::ratio(CELLS, 1);
    (scaled as usize).min(CELLS - 1)
}

/// The cell centre at or before t, and how far t is towards the next.
fn between(t: f64) -> (usize, f64) {
    let scaled = (t * crate::sampling::ratio(CELLS, 1) - 0.5).max(0.0);
    let cell = cell(scaled / crate::sampling::ratio(CELLS, 1));
    (cell, scaled - crate::sampling::ratio(cell, 1))
}
