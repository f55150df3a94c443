//! Where the rows of a lattice stand on a piece, and how many points they have.

use super::lattice::{Along, Ground, SAMPLES, Step};
use crate::sampling::{Cumulative, ratio};

/// A point nearer to the side of the piece than this part of a step is left
/// to the side's own samples.
const SIDE_CLEARANCE: f64 = 0.5;

/// A row count is rounded up only above this fraction: the rows then stand
/// slightly wider than asked, and the certificate decides.
const ROW_SLACK: f64 = 0.12;

/// The interior points of a piece, row after row: for each row its q and the
/// ascending p of its points; no row is empty. `before` is the chain of samples on the edge q = 0, by
/// ascending p: the first row is placed against it.
pub(super) fn rows(plan: &Plan, before: &[f64]) -> Vec<(f64, Vec<f64>)> {
    let mut rows = Vec::new();
    let mut chain = before.to_vec();
    let (places, gap) = plan.row_places();
    for q in places {
        let row = plan.row(q, gap, &chain);
        if !row.is_empty() {
            chain.clone_from(&row);
            rows.push((q, row));
        }
    }
    rows
}

/// Steps of the lattice all over a piece.
pub(super) struct Plan<'a> {
    pub(super) ground: &'a Ground<'a>,
    pub(super) along: Along,
    /// Steps on a grid, q-major.
    steps: Vec<Step>,
}

impl<'a> Plan<'a> {
    pub(super) fn new(ground: &'a Ground<'a>, along: Along) -> Self {
        let mut steps = Vec::with_capacity((SAMPLES + 1) * (SAMPLES + 1));
        for j in 0..=SAMPLES {
            for i in 0..=SAMPLES {
                let [row, column] = match along {
                    Along::U => [i, j],
                    Along::V => [j, i],
                };
                let bend = &ground.bends[row * (SAMPLES + 1) + column];
                let place = [ratio(row, SAMPLES), ratio(column, SAMPLES)];
                steps.push(ground.step(bend, along, place));
            }
        }
        Self {
            ground,
            along,
            steps,
        }
    }

    /// Points estimated for a lattice with these rows.
    pub(super) fn cost(&self) -> f64 {
        let rows: f64 = self.rows_total().max(1.0);
        let per_row = (0..=SAMPLES).map(|j| self.row_total(j)).sum::<f64>() / ratio(SAMPLES + 1, 1);
        rows * per_row.max(1.0)
    }

    pub(super) fn row_steps(&self, j: usize) -> &[Step] {
        &self.steps[j * (SAMPLES + 1)..(j + 1) * (SAMPLES + 1)]
    }

    /// Row density at one q: the power mean of order 4 along the row, near the
    /// densest place without being ruled by one point.
    fn density(&self, j: usize) -> f64 {
        let steps = self.row_steps(j);
        let mean = steps.iter().map(|s| s.rows_cross.powi(4)).sum::<f64>() / ratio(steps.len(), 1);
        mean.powf(0.25)
    }

    /// Row density across the rows at one p.
    pub(super) fn column(&self, i: usize) -> Cumulative {
        Cumulative::new((0..=SAMPLES).map(|j| self.row_steps(j)[i].rows_cross))
    }

    /// The step at the i-th p and any q, linear between samples.
    #[allow(
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "a parameter in 0..1 times a sample count"
    )]
    pub(super) fn step_at(&self, i: usize, q: f64) -> Step {
        let scaled = q.clamp(0.0, 1.0) * ratio(SAMPLES, 1);
        let j = (scaled as usize).min(SAMPLES - 1);
        let inside = scaled - ratio(j, 1);
        let (a, b) = (&self.row_steps(j)[i], &self.row_steps(j + 1)[i]);
        let mix = |x: f64, y: f64| x * (1.0 - inside) + y * inside;
        Step {
            rows_step: mix(a.rows_step, b.rows_step),
            rows_cross: mix(a.rows_cross, b.rows_cross),
            form: [0, 1, 2].map(|k| mix(a.form[k], b.form[k])),
            e: mix(a.e, b.e),
        }
    }

    fn row_sums(&self) -> Cumulative {
        Cumulative::new((0..=SAMPLES).map(|j| self.density(j)))
    }

    /// Number of row distances over the whole piece, not rounded.
    pub(super) fn rows_total(&self) -> f64 {
        self.row_sums().total()
    }

    /// Number of steps in the row at sample j.
    pub(super) fn row_total(&self, j: usize) -> f64 {
        Cumulative::new(self.row_steps(j).iter().map(|s| s.rows_step)).total()
    }

    /// The q of every row, and the mean distance between rows.
    fn row_places(&self) -> (Vec<f64>, f64) {
        let sums = self.row_sums();
        let count = round_up(sums.total(), ROW_SLACK);
        let places = (1..count).map(|k| sums.reach(sums.total() * ratio(k, count)));
        (places.collect(), 1.0 / ratio(count, 1))
    }

    fn row(&self, q: f64, gap: f64, before: &[f64]) -> Vec<f64> {
        let steps: Vec<Step> = (0..=SAMPLES)
            .map(|i| {
                let place = self.along.place(ratio(i, SAMPLES), q);
                let bend = self.ground.field.at(place);
                self.ground.step(&bend, self.along, place)
            })
            .collect();
        let sums = Cumulative::new(steps.iter().map(|s| s.rows_step));
        let total = sums.total();
        if total < 2.0 * SIDE_CLEARANCE {
            return Vec::new();
        }
        let offset = Self::offset(&steps, &sums, gap, before);
        let mut row = Vec::new();
        let mut phase = offset;
        while phase < total - SIDE_CLEARANCE {
            if phase > SIDE_CLEARANCE {
                row.push(sums.reach(phase));
            }
            phase += 1.0;
        }
        row
    }

    /// The phase in 0..1 at which this row's points stand best against the row
    /// before: the circular mean over the row of where each place would have it.
    pub(super) fn offset(steps: &[Step], sums: &Cumulative, gap: f64, before: &[f64]) -> f64 {
        let (mut x, mut y) = (0.0, 0.0);
        for (i, step) in steps.iter().enumerate() {
            if step.rows_step <= 0.0 {
                continue;
            }
            let p = ratio(i, SAMPLES);
            let target = p + step.shift(gap);
            if !(0.0..=1.0).contains(&target) {
                continue;
            }
            let turn = (sums.at(target) - index_in(before, p)) * std::f64::consts::TAU;
            x += turn.cos();
            y += turn.sin();
        }
        (y.atan2(x) / std::f64::consts::TAU).rem_euclid(1.0)
    }
}

/// Where `p` stands among ascending `chain`, as a fractional index, carried on
/// evenly beyond the ends.
pub(super) fn index_in(chain: &[f64], p: f64) -> f64 {
    let last = chain.len() - 1;
    if last == 0 {
        return 0.0;
    }
    let cell = chain.partition_point(|&c| c <= p).clamp(1, last) - 1;
    ratio(cell, 1) + (p - chain[cell]) / (chain[cell + 1] - chain[cell])
}

/// At least 1; rounds up only when the fraction exceeds `slack`.
#[allow(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "counts are predicted and limited before anything is built"
)]
pub(super) fn round_up(total: f64, slack: f64) -> usize {
    ((total - slack).ceil().max(1.0)) as usize
}
