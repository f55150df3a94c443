//! What is left of a function on a triangle when a quadratic is taken off.
//!
//! The function has control values h of degree d, perhaps with weights w; the
//! quadratic q is raised to the same degree. For weighted values
//!
//! ```text
//! r_I = sum_J a_J w_(I-J) (h_(I-J) - q_J) / sum_J a_J w_(I-J),   |J| = 2,
//! ```
//!
//! are weighted means, so their largest bounds |f - q| for any positive
//! weights. Degree elevation of Bernstein polynomials, multiplied out.

use super::quadratic::Quadratic;
use crate::bezier::{binomial, binomials};
use crate::sampling::ratio;

/// Index tables of a triangular net of one degree.
#[derive(Debug, Default)]
pub(super) struct Shape {
    degree: usize,
    /// Control points along the edges 0-1, 1-2, 2-0.
    pub(super) edges: [Vec<usize>; 3],
    /// C(d, i).
    pub(super) binomials: Vec<f64>,
    /// (i, j, k) of every control point.
    triples: Vec<[usize; 3]>,
    /// Multinomial d! / (i! j! k!) of every control point.
    multinomials: Vec<f64>,
}

/// The six multi-indices of size 2 with their multinomials.
const TWO: [([usize; 3], f64); 6] = [
    ([2, 0, 0], 1.0),
    ([0, 2, 0], 1.0),
    ([0, 0, 2], 1.0),
    ([1, 1, 0], 2.0),
    ([0, 1, 1], 2.0),
    ([1, 0, 1], 2.0),
];

impl Shape {
    /// Makes the tables those of degree `d`.
    pub(super) fn prepare(&mut self, d: usize) {
        if self.degree == d {
            return;
        }
        self.degree = d;
        self.triples = (0..=d)
            .rev()
            .flat_map(|i| (0..=d - i).rev().map(move |j| [i, j, d - i - j]))
            .collect();
        let index = |t: [usize; 3]| position(d, t);
        self.edges = [
            (0..=d).map(|s| index([d - s, s, 0])).collect(),
            (0..=d).map(|s| index([0, d - s, s])).collect(),
            (0..=d).map(|s| index([s, 0, d - s])).collect(),
        ];
        self.binomials = binomials(d).into_owned();
        self.multinomials = self
            .triples
            .iter()
            .map(|&[i, j, _]| binomial(d, i) * binomial(d - i, j))
            .collect();
    }

    /// Largest control value of h - q, q raised to the degree of h.
    pub(super) fn rest_polynomial(&self, h: &[f64], q: &Quadratic) -> f64 {
        let d = ratio(self.degree, 1);
        let scale = 1.0 / (d * (d - 1.0));
        let mut worst = 0.0_f64;
        for (triple, height) in self.triples.iter().zip(h) {
            let [i, j, k] = triple.map(|x| ratio(x, 1));
            let raised = i * (i - 1.0) * q.corner[0]
                + j * (j - 1.0) * q.corner[1]
                + k * (k - 1.0) * q.corner[2]
                + 2.0 * (i * j * q.between[0] + j * k * q.between[1] + k * i * q.between[2]);
            worst = worst.max((height - raised * scale).abs());
        }
        worst
    }

    /// Largest of the weighted means of differences that h - q has for control
    /// values at two degrees more.
    pub(super) fn rest_rational(&self, h: &[f64], w: &[f64], q: &Quadratic) -> f64 {
        let d = self.degree;
        let coefficients = [
            q.corner[0],
            q.corner[1],
            q.corner[2],
            q.between[0],
            q.between[1],
            q.between[2],
        ];
        let mut worst = 0.0_f64;
        for i in 0..=d + 2 {
            for j in 0..=d + 2 - i {
                let raised = [i, j, d + 2 - i - j];
                let (mut sum, mut total) = (0.0, 0.0);
                for ((two, factor), coefficient) in TWO.iter().zip(coefficients) {
                    if (0..3).any(|x| raised[x] < two[x]) {
                        continue;
                    }
                    let low = [raised[0] - two[0], raised[1] - two[1], raised[2] - two[2]];
                    let at = position(d, low);
                    let a = factor * self.multinomials[at] * w[at];
                    sum += a * (h[at] - coefficient);
                    total += a;
                }
                worst = worst.max((sum / total).abs());
            }
        }
        worst
    }
}

/// Position of (i, j, k) in a net of degree d, as `TriangleNet` orders it.
fn position(d: usize, [i, j, _]: [usize; 3]) -> usize {
    let below = d - i;
    below * (below + 1) / 2 + (below - j)
}
