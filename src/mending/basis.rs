//! A point and its first derivatives as sums over the points of a control net.
//!
//! ```text
//! S = sum R_i P_i,   R_i = w_i N_i / W,   R_i' = (w_i N_i' - R_i W') / W,   W = sum w_i N_i
//! ```
//!
//! N_i are products of B-spline basis functions (de Boor's recursion); a Bezier
//! net is the one with knots 0 and 1 only.

/// The share of one control point.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Share {
    /// Its position in the net, rows along u, v fastest.
    pub(super) index: usize,
    /// R, R_u, R_v.
    pub(super) r: [f64; 3],
}

/// Knots and degrees along u and v.
#[derive(Debug, Clone)]
pub(super) struct Basis {
    pub(super) degree: [usize; 2],
    pub(super) knots: [Vec<f64>; 2],
    /// By point, v fastest; 1 for a polynomial net.
    pub(super) weights: Vec<f64>,
    pub(super) columns: usize,
}

/// Values and derivatives of the functions that do not vanish on a span, and
/// the index of the first of them.
fn along(knots: &[f64], degree: usize, within: f64, t: f64) -> (usize, Vec<[f64; 2]>) {
    // The span that holds a place inside the piece.
    let last = knots.len() - degree - 2;
    let span = (degree..=last)
        .rev()
        .find(|&k| knots[k] <= within)
        .unwrap_or(degree);
    let ratio = |a: f64, b: f64| if b > 0.0 { a / b } else { 0.0 };
    let values = |p: usize| -> Vec<f64> {
        let mut row = vec![1.0];
        for d in 1..=p {
            let mut next = vec![0.0; d + 1];
            for (k, value) in row.iter().enumerate() {
                // N_i of degree d - 1, i = span - (d - 1) + k.
                let i = span + 1 + k - d;
                let width = knots[i + d] - knots[i];
                next[k] += ratio(knots[i + d] - t, width) * value;
                next[k + 1] += ratio(t - knots[i], width) * value;
            }
            row = next;
        }
        row
    };
    let own = values(degree);
    let lower = values(degree - 1);
    let first = span - degree;
    #[allow(clippy::cast_precision_loss, reason = "a degree is at most 15")]
    let p = degree as f64;
    let found = own.iter().enumerate().map(|(k, value)| {
        let i = first + k;
        let left = if k == 0 { 0.0 } else { lower[k - 1] };
        let right = lower.get(k).copied().unwrap_or(0.0);
        let slope = ratio(left, knots[i + degree] - knots[i])
            - ratio(right, knots[i + degree + 1] - knots[i + 1]);
        [*value, p * slope]
    });
    (first, found.collect())
}

impl Basis {
    /// The shares at the patch's own (u, v), on the piece that holds `within`.
    pub(super) fn at(&self, within: [f64; 2], own: [f64; 2]) -> Vec<Share> {
        let [u, v] = [0, 1].map(|k| along(&self.knots[k], self.degree[k], within[k], own[k]));
        let mut shares = Vec::with_capacity(u.1.len() * v.1.len());
        let mut total = [0.0; 3];
        for (i, a) in u.1.iter().enumerate() {
            for (j, b) in v.1.iter().enumerate() {
                let index = (u.0 + i) * self.columns + v.0 + j;
                let w = self.weights[index];
                let r = [w * a[0] * b[0], w * a[1] * b[0], w * a[0] * b[1]];
                for (sum, r) in total.iter_mut().zip(r) {
                    *sum += r;
                }
                shares.push(Share { index, r });
            }
        }
        for share in &mut shares {
            let value = share.r[0] / total[0];
            share.r = [
                value,
                (share.r[1] - value * total[1]) / total[0],
                (share.r[2] - value * total[2]) / total[0],
            ];
        }
        shares
    }
}
