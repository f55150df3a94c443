//! Rows of the lattice that start and end in samples of the upright sides.
//!
//! The samples of the four sides are given. Where they stand about as far apart
//! as the lattice wants its rows, a row that ends between two of them leaves
//! thin triangles at both; so a row is bent to start in a sample of the one side
//! and to end in a sample of the other, and the number of points in a row goes
//! from that of the side at q = 0 to that of the side at q = 1. What such rows
//! cannot do (sides of very different counts) is left to refinement.

use super::lattice::{SAMPLES, Step};
use super::plan::{Plan, round_up};
use super::quadratic::Quadratic;
use crate::sampling::{Cumulative, ratio};

/// A point nearer to the end of its row than this part of a step is left out.
const END_CLEARANCE: f64 = 0.12;

/// A count of the sides is taken for the rows' own where it is within these
/// multiples of what the surface asks for.
const FEWEST: f64 = 0.96;
const MOST: f64 = 1.12;

/// A row: the samples of the sides it runs between, and its inner points.
#[derive(Debug)]
pub(super) struct Course {
    /// Index of its sample on the side p = 0, and on p = 1.
    pub(super) ends: [usize; 2],
    /// (p, q) of its points, by ascending p.
    pub(super) points: Vec<[f64; 2]>,
    /// Steps along the row, at even p.
    pub(super) steps: Vec<Step>,
}

/// Parameters of the samples on the sides q = 0, q = 1, p = 0, p = 1.
pub(super) type Sides = [Vec<f64>; 4];

/// The rows strictly between the sides q = 0 and q = 1.
pub(super) fn courses(plan: &Plan, sides: &Sides) -> Vec<Course> {
    let [bottom, top, left, right] = sides;
    let columns: Vec<Cumulative> = (0..=SAMPLES).map(|i| plan.column(i)).collect();
    let wanted = plan.rows_total();
    let upright = (left.len() - 1).max(right.len() - 1);
    let count = if (FEWEST..=MOST).contains(&(ratio(upright, 1) / wanted)) {
        upright
    } else {
        round_up(wanted, 0.05)
    };
    let place = |column: usize, row: usize| {
        let sums = &columns[column];
        let share = ratio(row, count);
        if sums.total() > 0.0 {
            sums.reach(sums.total() * share)
        } else {
            share
        }
    };
    let starts = ends(left, count, |row| place(0, row));
    let stops = ends(right, count, |row| place(SAMPLES, row));
    let fit = |samples: &[f64], row: usize| {
        let fit = ratio(samples.len() - 1, 1) / plan.row_total(row);
        if (FEWEST..=MOST).contains(&fit) {
            fit
        } else {
            1.0
        }
    };
    let fits = [fit(bottom, 0), fit(top, SAMPLES)];
    let mut before = bottom.clone();
    let mut rows = Vec::with_capacity(count.saturating_sub(1));
    for row in 1..count {
        let ends = [starts[row], stops[row]];
        // Only where every sample has its row is the whole row bent: elsewhere
        // the distances to the samples jump from row to row.
        let lift = [(left, 0, 0), (right, 1, SAMPLES)].map(|(side, end, column)| {
            if side.len() == count + 1 {
                side[ends[end]] - place(column, row)
            } else {
                0.0
            }
        });
        let bent: Vec<f64> = (0..=SAMPLES)
            .map(|i| {
                let p = ratio(i, SAMPLES);
                place(i, row) + lift[0] * (1.0 - p) + lift[1] * p
            })
            .collect();
        let steps: Vec<Step> = bent
            .iter()
            .enumerate()
            .map(|(i, &q)| plan.step_at(i, q))
            .collect();
        let share = ratio(row, count);
        let fit = fits[0] * (1.0 - share) + fits[1] * share;
        let sums = Cumulative::new(steps.iter().map(|s| s.rows_step * fit));
        let gap = 1.0 / ratio(count, 1);
        let mut phase = Plan::offset(&steps, &sums, gap, &before);
        let total = sums.total();
        let mut points = Vec::new();
        let mut chain = Vec::new();
        while phase < total - END_CLEARANCE {
            if phase > END_CLEARANCE {
                let p = sums.reach(phase);
                points.push([p, between(&bent, p)]);
                chain.push(p);
            }
            phase += 1.0;
        }
        // Its ends stand as the side will have it, and would mislead the next row.
        if chain.len() > 1 {
            before = chain;
        }
        rows.push(Course {
            ends,
            points,
            steps,
        });
    }
    rows
}

/// For every row the sample of a side it ends in: the one nearest to its
/// `place`, each taken once while there are enough.
fn ends(samples: &[f64], rows: usize, place: impl Fn(usize) -> f64) -> Vec<usize> {
    let last = samples.len() - 1;
    let mut ends = vec![0];
    for row in 1..rows {
        let q = place(row);
        let after = samples.partition_point(|&s| s < q).clamp(1, last);
        let nearest = if q - samples[after - 1] < samples[after] - q {
            after - 1
        } else {
            after
        };
        let end = if last >= rows {
            nearest.clamp(ends[row - 1] + 1, last - (rows - row))
        } else {
            nearest.max(ends[row - 1])
        };
        ends.push(end);
    }
    ends.push(last);
    ends
}

/// A function given at even stations, at p.
#[allow(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "a parameter in 0..1 times a station count"
)]
fn between(values: &[f64], p: f64) -> f64 {
    let cells = values.len() - 1;
    let scaled = p * ratio(cells, 1);
    let cell = (scaled as usize).min(cells - 1);
    let inside = scaled - ratio(cell, 1);
    values[cell] * (1.0 - inside) + values[cell + 1] * inside
}

/// The error of a triangle in (p, q) for the second derivatives of a row.
#[allow(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "a parameter in 0..1 times a station count"
)]
pub(super) fn error(steps: &[Step], corners: [[f64; 2]; 3]) -> f64 {
    let p = (corners[0][0] + corners[1][0] + corners[2][0]) / 3.0;
    let nearest = (p * ratio(steps.len() - 1, 1) + 0.5) as usize;
    let [a, b, c] = steps[nearest.min(steps.len() - 1)].form;
    let square = [0, 1, 2].map(|k| {
        let (x, y) = (corners[k], corners[(k + 1) % 3]);
        let (dp, dq) = (y[0] - x[0], y[1] - x[1]);
        a * dp * dp + 2.0 * b * dp * dq + c * dq * dq
    });
    Quadratic::largest_error(square).0
}
