//! The smallest displacements that meet linear conditions (least squares).
//!
//! Paige and Saunders' LSQR (1982) from zero: of all solutions the one of least
//! norm; where the conditions contradict each other, of all that miss them
//! least.

use crate::scalar::Vector;

/// One condition: sum c_k . d_k = value.
#[derive(Debug, Clone)]
pub(super) struct Condition {
    pub(super) terms: Vec<(usize, Vector)>,
    pub(super) value: f64,
}

/// Steps at most, a column.
const STEPS: usize = 2;

/// A residual this much smaller than at the start is enough for one round.
const RESIDUAL: f64 = 1e-6;

/// So is a slope this small: the conditions cannot be met better.
const SLOPE: f64 = 1e-9;

fn apply(rows: &[Condition], x: &[Vector], into: &mut [f64]) {
    for (row, out) in rows.iter().zip(into) {
        *out = row.terms.iter().map(|(k, c)| c.dot(&x[*k])).sum();
    }
}

fn apply_back(rows: &[Condition], y: &[f64], into: &mut [Vector]) {
    into.fill(Vector::zeros());
    for (row, y) in rows.iter().zip(y) {
        for (k, c) in &row.terms {
            into[*k] += c * *y;
        }
    }
}

fn norm(list: &[f64]) -> f64 {
    list.iter().map(|x| x * x).sum::<f64>().sqrt()
}

fn length(list: &[Vector]) -> f64 {
    list.iter().map(Vector::norm_squared).sum::<f64>().sqrt()
}

/// How much a displacement weighs against what is left of a condition: keeps
/// conditions that all but follow from others from asking for large moves
/// (Levenberg 1944).
const DAMPING: f64 = 1e-3;

/// Displacements of `columns` points, each held back a little.
pub(super) fn damped(mut rows: Vec<Condition>, columns: usize) -> Vec<Vector> {
    rows.extend((0..columns).flat_map(|k| {
        [Vector::x(), Vector::y(), Vector::z()].map(|axis| Condition {
            terms: vec![(k, axis * DAMPING)],
            value: 0.0,
        })
    }));
    smallest(&rows, columns)
}

/// Displacements of `columns` points.
pub(super) fn smallest(rows: &[Condition], columns: usize) -> Vec<Vector> {
    let mut x = vec![Vector::zeros(); columns];
    let mut u: Vec<f64> = rows.iter().map(|row| row.value).collect();
    let start = norm(&u);
    if start <= 0.0 {
        return x;
    }
    u.iter_mut().for_each(|u| *u /= start);
    let mut v = vec![Vector::zeros(); columns];
    apply_back(rows, &u, &mut v);
    let mut alpha = length(&v);
    if alpha <= 0.0 {
        return x;
    }
    v.iter_mut().for_each(|v| *v /= alpha);
    let mut w = v.clone();
    let (mut phi, mut rho) = (start, alpha);
    let (mut image, mut pull) = (vec![0.0; rows.len()], vec![Vector::zeros(); columns]);
    for _ in 0..STEPS * columns + 200 {
        apply(rows, &v, &mut image);
        for (u, image) in u.iter_mut().zip(&image) {
            *u = image - alpha * *u;
        }
        let beta = norm(&u);
        if beta > 0.0 {
            u.iter_mut().for_each(|u| *u /= beta);
            apply_back(rows, &u, &mut pull);
            for (v, pull) in v.iter_mut().zip(&pull) {
                *v = pull - *v * beta;
            }
            alpha = length(&v);
            if alpha > 0.0 {
                v.iter_mut().for_each(|v| *v /= alpha);
            }
        } else {
            alpha = 0.0;
        }
        let turned = rho.hypot(beta);
        let (cos, sin) = (rho / turned, beta / turned);
        let theta = sin * alpha;
        let step = cos * phi / turned;
        for ((x, w), v) in x.iter_mut().zip(&mut w).zip(&v) {
            *x += *w * step;
            *w = v - *w * (theta / turned);
        }
        rho = -cos * alpha;
        phi *= sin;
        let slope = (phi * alpha * cos).abs();
        if phi.abs() <= RESIDUAL * start || slope <= SLOPE * start || alpha <= 0.0 {
            break;
        }
    }
    x
}
