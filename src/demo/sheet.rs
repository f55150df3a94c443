//! Control nets swept from a profile along guides.
//!
//! ```text
//! S(u, v) = A(u) + P(u) p(v) + Q(u) q(v)
//! ```
//!
//! Control point (i, j) is A_i + P_i p_j + Q_i q_j, with weight w_j: exact, and
//! tangent across every joint of the guides and of the profile, because S_u is
//! continuous along with (p, q) and S_v keeps its direction along with (p', q').

use super::guide::{Guide, elevated};
use super::profile::Stroke;
use crate::bezier::{BezierPatch, NetError, binomial};
use crate::scalar::{Point, Vector};

/// A control net, rows along u, with weights if it is rational.
#[derive(Debug, Clone)]
pub(super) struct Net {
    pub(super) rows: Vec<Vec<Vector>>,
    pub(super) weights: Option<Vec<Vec<f64>>>,
}

impl Net {
    /// The same polynomial surface with degree `degree` along v.
    pub(super) fn elevated_v(&self, degree: usize) -> Self {
        Self {
            rows: self.rows.iter().map(|row| elevated(row, degree)).collect(),
            weights: None,
        }
    }

    /// The surface on the unit square.
    ///
    /// # Errors
    /// [`NetError`] if the net is ragged or not finite.
    pub(super) fn patch(&self) -> Result<BezierPatch, NetError> {
        let points = self
            .rows
            .iter()
            .flatten()
            .map(|&p| Point::from(p))
            .collect();
        let weights = self.weights.as_ref().map(|rows| rows.concat());
        BezierPatch::new(
            (self.rows.len() - 1, self.rows[0].len() - 1),
            points,
            weights,
        )
    }
}

/// The guides of a sweep, all cut at the same places and of one degree.
#[derive(Debug, Clone)]
pub(super) struct Frame {
    a: Guide,
    p: Guide,
    q: Guide,
}

impl Frame {
    /// Guides raised to a common degree along u, `degree` at least.
    pub(super) fn new(a: &Guide, p: &Guide, q: &Guide, degree: usize) -> Self {
        let degree = degree.max(a.degree()).max(p.degree()).max(q.degree());
        Self {
            a: a.elevated(degree),
            p: p.elevated(degree),
            q: q.elevated(degree),
        }
    }

    /// The number of patches along u.
    pub(super) fn spans(&self) -> usize {
        self.a.spans().len()
    }

    /// The net over one span of the guides and one stroke of the profile.
    pub(super) fn net(&self, span: usize, stroke: &Stroke) -> Net {
        let (a, p, q) = (
            &self.a.spans()[span],
            &self.p.spans()[span],
            &self.q.spans()[span],
        );
        let rows = (0..a.len())
            .map(|i| {
                stroke
                    .points
                    .iter()
                    .map(|&[dp, dq]| a[i] + p[i] * dp + q[i] * dq)
                    .collect()
            })
            .collect::<Vec<_>>();
        let weights = stroke
            .weights
            .as_ref()
            .map(|weights| vec![weights.clone(); rows.len()]);
        Net { rows, weights }
    }
}

/// Bernstein coefficients of the product of two scalar polynomials on [0, 1].
///
/// `c_k = sum C(m, i) C(n, k - i) a_i b_(k-i) / C(m + n, k)` (Farin).
pub(super) fn product(a: &[f64], b: &[f64]) -> Vec<f64> {
    let (m, n) = (a.len() - 1, b.len() - 1);
    (0..=m + n)
        .map(|k| {
            let sum: f64 = (k.saturating_sub(n)..=k.min(m))
                .map(|i| binomial(m, i) * binomial(n, k - i) * a[i] * b[k - i])
                .sum();
            sum / binomial(m + n, k)
        })
        .collect()
}

/// The same for two polynomials in (u, v), rows along u.
pub(super) fn product_2d(a: &[Vec<f64>], b: &[Vec<f64>]) -> Vec<Vec<f64>> {
    let (m, n) = (a.len() - 1, b.len() - 1);
    let columns = a[0].len() + b[0].len() - 1;
    (0..=m + n)
        .map(|k| {
            let mut sum = vec![0.0; columns];
            for i in k.saturating_sub(n)..=k.min(m) {
                let factor = binomial(m, i) * binomial(n, k - i);
                for (total, term) in sum.iter_mut().zip(product(&a[i], &b[k - i])) {
                    *total += factor * term;
                }
            }
            sum.iter().map(|total| total / binomial(m + n, k)).collect()
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn products_of_bernstein_forms() {
        // t times 1 - t is (0, 1/2, 0) in degree 2.
        assert_eq!(product(&[0.0, 1.0], &[1.0, 0.0]), vec![0.0, 0.5, 0.0]);
        let u = vec![vec![0.0, 0.0], vec![1.0, 1.0]];
        let v = vec![vec![0.0, 1.0], vec![0.0, 1.0]];
        let uv = product_2d(&u, &v);
        assert_eq!(
            uv,
            vec![
                vec![0.0, 0.0, 0.0],
                vec![0.0, 0.25, 0.5],
                vec![0.0, 0.5, 1.0]
            ]
        );
    }
}
