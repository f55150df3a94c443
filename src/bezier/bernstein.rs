//! Products, halves and deflations of Bernstein polynomials.
//!
//! ```text
//! (sum a_i B_i^m) (sum b_j B_j^n) = sum c_k B_k^(m+n),   c_k = sum over i + j = k of C(m,i) C(n,j) / C(m+n,k) a_i b_j
//! ```

use std::ops::{Add, Mul, Sub};

use super::binomials;
use crate::scalar::Vector;

/// What can stand as a Bernstein coefficient.
pub(crate) trait Coefficient:
    Copy + Add<Output = Self> + Sub<Output = Self> + Mul<f64, Output = Self>
{
    /// The neutral element of addition.
    fn zero() -> Self;
    /// A norm, to tell what is as good as zero.
    fn size(&self) -> f64;
}

impl Coefficient for f64 {
    fn zero() -> Self {
        0.0
    }
    fn size(&self) -> f64 {
        self.abs()
    }
}

impl Coefficient for Vector {
    fn zero() -> Self {
        Self::zeros()
    }
    fn size(&self) -> f64 {
        self.norm()
    }
}

/// A polynomial on the unit interval by its Bernstein coefficients.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct Bernstein<T>(pub(crate) Vec<T>);

fn ratio(a: usize, b: usize) -> f64 {
    #[allow(clippy::cast_precision_loss, reason = "degrees are far below 2^52")]
    let (a, b) = (a as f64, b as f64);
    a / b
}

impl<T: Coefficient> Bernstein<T> {
    pub(crate) fn degree(&self) -> usize {
        self.0.len() - 1
    }

    /// The product under any bilinear `times`.
    pub(crate) fn product<U: Coefficient, R: Coefficient>(
        &self,
        other: &Bernstein<U>,
        times: impl Fn(T, U) -> R,
    ) -> Bernstein<R> {
        let (m, n) = (self.degree(), other.degree());
        let (row, column, all) = (binomials(m), binomials(n), binomials(m + n));
        let mut found = vec![R::zero(); m + n + 1];
        for (i, &a) in self.0.iter().enumerate() {
            for (j, &b) in other.0.iter().enumerate() {
                found[i + j] = found[i + j] + times(a, b) * (row[i] * column[j]);
            }
        }
        for (value, factor) in found.iter_mut().zip(all.iter()) {
            *value = *value * (1.0 / factor);
        }
        Bernstein(found)
    }

    /// Sum of two of one degree.
    pub(crate) fn plus(&self, other: &Self, factor: f64) -> Self {
        let terms = self.0.iter().zip(&other.0);
        Self(terms.map(|(&a, &b)| a + b * factor).collect())
    }

    /// The derivative.
    pub(crate) fn derivative(&self) -> Self {
        if self.degree() == 0 {
            return Self(vec![T::zero()]);
        }
        let n = ratio(self.degree(), 1);
        Self(self.0.windows(2).map(|w| (w[1] - w[0]) * n).collect())
    }

    /// The value at `t`, by de Casteljau's algorithm.
    pub(crate) fn eval(&self, t: f64) -> T {
        let mut held = [T::zero(); 24];
        let mut long = Vec::new();
        let work = if let Some(work) = held.get_mut(..self.0.len()) {
            work.copy_from_slice(&self.0);
            work
        } else {
            long.clone_from(&self.0);
            &mut long[..]
        };
        for len in (1..work.len()).rev() {
            for i in 0..len {
                work[i] = work[i] * (1.0 - t) + work[i + 1] * t;
            }
        }
        work[0]
    }

    /// The parts before and after `t`, each on the unit interval.
    pub(crate) fn split(&self, t: f64) -> (Self, Self) {
        let mut work = self.0.clone();
        let mut left = Vec::with_capacity(work.len());
        for len in (0..work.len()).rev() {
            left.push(work[0]);
            for i in 0..len {
                work[i] = work[i] * (1.0 - t) + work[i + 1] * t;
            }
        }
        (Self(left), Self(work))
    }

    /// The part from `range[0]` to `range[1]`, which may reach beyond the unit
    /// interval; a descending range reverses it.
    pub(crate) fn restrict(&self, range: [f64; 2]) -> Self {
        let (low, high) = (range[0].min(range[1]), range[0].max(range[1]));
        let mut part = self.clone();
        if (high - 1.0).abs() > 0.0 {
            part = part.split(high).0;
        }
        if low.abs() > 0.0 && high > 0.0 {
            part = part.split(low / high).1;
        }
        if range[0] > range[1] {
            part.0.reverse();
        }
        part
    }

    /// Every coefficient times `factor`.
    pub(crate) fn scaled(&self, factor: f64) -> Self {
        Self(self.0.iter().map(|&x| x * factor).collect())
    }

    /// Divides out t^ends[0] (1 - t)^ends[1], together at most the degree; the
    /// coefficients that stand in the way are taken for zero.
    pub(crate) fn divided(&self, ends: [usize; 2]) -> Self {
        let mut found = self.clone();
        for count in ends {
            for _ in 0..count {
                let n = found.degree();
                found.0.remove(0);
                for (k, value) in found.0.iter_mut().enumerate() {
                    *value = *value * ratio(n, k + 1);
                }
            }
            found.0.reverse();
        }
        found
    }

    /// Divides out factors t and 1 - t as long as the end coefficients are as
    /// good as zero: the direction of what is left is the limit at the ends.
    pub(crate) fn deflated(mut self) -> Self {
        let largest = self.0.iter().map(Coefficient::size).fold(0.0, f64::max);
        let tiny = largest * 1e-12;
        for _ in 0..2 {
            while self.degree() > 0 && self.0[0].size() <= tiny {
                // t q(t): coefficient k + 1 of the product is q_k (k + 1) / n.
                let n = self.degree();
                self.0.remove(0);
                for (k, value) in self.0.iter_mut().enumerate() {
                    *value = *value * ratio(n, k + 1);
                }
            }
            self.0.reverse();
        }
        self
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    #[test]
    fn products_halves_and_deflations_are_polynomials() {
        let a = Bernstein(vec![0.0, 2.0, -1.0, 3.0]);
        let b = Bernstein(vec![1.0, 0.5, 4.0]);
        let product = a.product(&b, |x, y| x * y);
        let slope = a.derivative();
        let less = a.clone().deflated();
        assert_eq!(less.degree(), 2);
        for k in 0..=10 {
            let t = f64::from(k) / 10.0;
            assert_relative_eq!(product.eval(t), a.eval(t) * b.eval(t), epsilon = 1e-14);
            assert_relative_eq!(less.eval(t) * t, a.eval(t), epsilon = 1e-14);
            let h = 1e-6;
            let difference = (a.eval(t + h) - a.eval(t - h)) / (2.0 * h);
            assert_relative_eq!(slope.eval(t), difference, epsilon = 1e-7);
            let part = b.restrict([0.8, 0.3]);
            assert_relative_eq!(part.eval(t), b.eval(0.8 - 0.5 * t), epsilon = 1e-14);
        }
    }
}
