//! Polynomials with a proved remainder on -1 <= x <= 1.
//!
//! ```text
//! f(x) = sum over k <= 8 of c_k x^k + e(x),   |e(x)| <= r
//! ```
//!
//! What a product has beyond the eighth power goes into the remainder with the
//! absolute values of its coefficients, and so does an allowance for rounding
//! (Taylor models; Makino and Berz 2003, from memory). Powers come from the
//! binomial series, whose tail is bounded by a geometric one.

use crate::scalar::Vector;

/// The highest power kept.
const ORDER: usize = 8;

/// Allowance for rounding, a unit of sum |a_i| sum |b_j| in a product.
const ROUNDING: f64 = 16.0 * f64::EPSILON;

/// Coefficients that need no room of their own.
const SHORT: usize = 24;

/// A function on -1 <= x <= 1 up to a proved remainder.
#[derive(Debug, Clone, Copy)]
pub(super) struct Taylor {
    c: [f64; ORDER + 1],
    r: f64,
}

/// C(k, i) / C(8, i): from powers to Bernstein coefficients.
static TO_BERNSTEIN: [[f64; ORDER + 1]; ORDER + 1] = to_bernstein();

const fn to_bernstein() -> [[f64; ORDER + 1]; ORDER + 1] {
    let mut rows = [[0.0; ORDER + 1]; ORDER + 1];
    let mut k = 0;
    while k <= ORDER {
        let (mut i, mut value) = (0, 1.0);
        while i <= k {
            rows[k][i] = value;
            value *= (k - i) as f64 / (ORDER - i) as f64;
            i += 1;
        }
        k += 1;
    }
    rows
}

fn ratio(a: usize, b: usize) -> f64 {
    #[allow(clippy::cast_precision_loss, reason = "degrees are far below 2^52")]
    let (a, b) = (a as f64, b as f64);
    a / b
}

impl Taylor {
    pub(super) fn constant(value: f64) -> Self {
        let mut c = [0.0; ORDER + 1];
        c[0] = value;
        Self { c, r: 0.0 }
    }

    /// The polynomial with the given Bernstein coefficients on the unit
    /// interval, x = 2 t - 1.
    ///
    /// With the shift E, p = ((1 + E) / 2 + x (E - 1) / 2)^n b_0, so c_k is
    /// C(n, k) times the k-th halved differences, averaged n - k times.
    pub(super) fn of_bernstein(b: &[f64]) -> Self {
        let n = b.len() - 1;
        let mut c = [0.0; ORDER + 1];
        let mut r = 0.0;
        let largest = b.iter().fold(0.0, |m: f64, x| m.max(x.abs()));
        let (mut held, mut room) = ([0.0; SHORT], [0.0; SHORT]);
        let mut long = Vec::new();
        let (differences, work) = if n < SHORT {
            (&mut held[..=n], &mut room[..=n])
        } else {
            long.resize(2 * n + 2, 0.0);
            long.split_at_mut(n + 1)
        };
        differences.copy_from_slice(b);
        let mut factor = 1.0;
        for k in 0..=n {
            let left = n - k + 1;
            if let Some(target) = c.get_mut(k) {
                work[..left].copy_from_slice(&differences[..left]);
                for len in (1..left).rev() {
                    for i in 0..len {
                        work[i] = 0.5 * (work[i] + work[i + 1]);
                    }
                }
                *target = factor * work[0];
            } else {
                let most = differences[..left].iter();
                r += factor * most.fold(0.0, |m: f64, x| m.max(x.abs()));
            }
            for i in 0..left - 1 {
                differences[i] = 0.5 * (differences[i + 1] - differences[i]);
            }
            factor *= ratio(n - k, k + 1);
        }
        Self {
            c,
            r: r + largest * ROUNDING * ratio(n + 1, 1),
        }
    }

    /// The three coordinates of a polynomial, at y(x) if that is given; `None`
    /// unless |y| is at most 1.
    pub(super) fn of_vectors(b: &[Vector], y: Option<&Self>) -> Option<[Self; 3]> {
        let mut found = [Self::constant(0.0); 3];
        for (k, target) in found.iter_mut().enumerate() {
            let list: Vec<f64> = b.iter().map(|p| p[k]).collect();
            let model = Self::of_bernstein(&list);
            *target = match y {
                Some(y) => model.composed(y)?,
                None => model,
            };
        }
        Some(found)
    }

    /// The polynomial of degree 8 through values at the nine places of
    /// [`Taylor::places`].
    pub(super) fn through(values: &[f64; ORDER + 1]) -> Self {
        let x = Self::places();
        // Newton's divided differences, then Horner's scheme.
        let mut d = *values;
        for level in 1..=ORDER {
            for i in (level..=ORDER).rev() {
                d[i] = (d[i] - d[i - 1]) / (x[i] - x[i - level]);
            }
        }
        let mut c = [0.0; ORDER + 1];
        for k in (0..=ORDER).rev() {
            for i in (1..=ORDER).rev() {
                c[i] = c[i - 1] - x[k] * c[i];
            }
            c[0] = d[k] - x[k] * c[0];
        }
        Self { c, r: 0.0 }
    }

    /// Nine places, closer together towards the ends, which are among them.
    pub(super) fn places() -> [f64; ORDER + 1] {
        std::array::from_fn(|k| -(std::f64::consts::PI * ratio(k, ORDER)).cos())
    }

    fn sum(&self) -> f64 {
        self.c.iter().map(|c| c.abs()).sum()
    }

    pub(super) fn plus(&self, other: &Self, factor: f64) -> Self {
        let mut found = *self;
        for (a, b) in found.c.iter_mut().zip(&other.c) {
            *a += factor * b;
        }
        found.r += factor.abs() * other.r;
        found
    }

    pub(super) fn scaled(&self, factor: f64) -> Self {
        Self {
            c: self.c.map(|c| c * factor),
            r: self.r * factor.abs(),
        }
    }

    /// The same with a remainder larger by `more`.
    pub(super) fn widened(mut self, more: f64) -> Self {
        self.r += more;
        self
    }

    pub(super) fn times(&self, other: &Self) -> Self {
        let mut c = [0.0; ORDER + 1];
        for (i, a) in self.c.iter().enumerate() {
            for (target, b) in c[i..].iter_mut().zip(&other.c) {
                *target += a * b;
            }
        }
        // tail[i]: what the other has from power ORDER + 1 - i on.
        let (mut beyond, mut tail) = (0.0, 0.0);
        for i in 1..=ORDER {
            tail += other.c[ORDER + 1 - i].abs();
            beyond += self.c[i].abs() * tail;
        }
        let (a, b) = (self.sum(), other.sum());
        Self {
            c,
            r: self.r * (b + other.r) + a * other.r + beyond + a * b * ROUNDING,
        }
    }

    /// self(y(x)); `None` unless |y| is at most 1.
    pub(super) fn composed(&self, y: &Self) -> Option<Self> {
        if y.most().is_nan() || y.most() > 1.0 {
            return None;
        }
        let mut found = Self::constant(self.c[ORDER]);
        for c in self.c[..ORDER].iter().rev() {
            found = found.times(y);
            found.c[0] += c;
        }
        Some(found.widened(self.r))
    }

    /// self^exponent for -1 <= exponent < 0; `None` where positiveness is not
    /// plain.
    pub(super) fn power(&self, exponent: f64) -> Option<Self> {
        let middle = self.c[0];
        if middle.is_nan() || middle <= f64::MIN_POSITIVE {
            return None;
        }
        let mut y = self.scaled(1.0 / middle);
        y.c[0] = 0.0;
        let width = y.sum() + y.r;
        if width.is_nan() || width >= 0.75 {
            return None;
        }
        // No coefficient of the series is above 1, nor above the one before.
        let mut a = [1.0; ORDER + 2];
        for k in 0..=ORDER {
            a[k + 1] = a[k] * (exponent - ratio(k, 1)) / ratio(k + 1, 1);
        }
        let mut found = Self::constant(a[ORDER]);
        for a in a[..ORDER].iter().rev() {
            found = found.times(&y);
            found.c[0] += a;
        }
        let tail = a[ORDER + 1].abs() * width.powi(9) / (1.0 - width);
        Some(found.widened(tail).scaled(middle.powf(exponent)))
    }

    fn bernstein(&self) -> [f64; ORDER + 1] {
        // x = 2 t - 1 in powers of t, then b_k = sum C(k,i) / C(n,i) p_i.
        let mut p = [0.0; ORDER + 1];
        for c in self.c.iter().rev() {
            for i in (1..=ORDER).rev() {
                p[i] = 2.0 * p[i - 1] - p[i];
            }
            p[0] = c - p[0];
        }
        std::array::from_fn(|k| {
            let terms = p.iter().zip(&TO_BERNSTEIN[k]).take(k + 1);
            terms.map(|(p, factor)| p * factor).sum()
        })
    }

    /// Proved bounds of the function, the lower first.
    pub(super) fn range(&self) -> [f64; 2] {
        let b = self.bernstein();
        // Powers of two and binomials: 2^8 times the coefficients at most.
        let slack = self.r + self.sum() * 512.0 * ROUNDING;
        let low = b.iter().copied().fold(f64::INFINITY, f64::min);
        let high = b.iter().copied().fold(f64::NEG_INFINITY, f64::max);
        [low - slack, high + slack]
    }

    /// A proved bound of |f|; infinite or NaN where there is none.
    pub(super) fn most(&self) -> f64 {
        let plain = self.sum() + self.r;
        let [low, high] = self.range();
        plain.min(high.max(-low))
    }

    /// The place of -1, -0.75, ..., 1 where the polynomial is largest.
    pub(super) fn peak(&self) -> f64 {
        let value = |x: f64| self.c.iter().rev().fold(0.0, |v, c| v * x + c).abs();
        (0..=8_u8)
            .map(|k| f64::from(k) / 4.0 - 1.0)
            .max_by(|a, b| value(*a).total_cmp(&value(*b)))
            .unwrap_or(0.0)
    }
}

/// a . b.
pub(super) fn dot(a: &[Taylor; 3], b: &[Taylor; 3]) -> Taylor {
    let sum = a[0].times(&b[0]).plus(&a[1].times(&b[1]), 1.0);
    sum.plus(&a[2].times(&b[2]), 1.0)
}

/// a x b.
pub(super) fn cross(a: &[Taylor; 3], b: &[Taylor; 3]) -> [Taylor; 3] {
    [(1, 2), (2, 0), (0, 1)].map(|(i, j)| a[i].times(&b[j]).plus(&a[j].times(&b[i]), -1.0))
}

#[cfg(test)]
mod tests {
    use super::*;

    fn places() -> impl Iterator<Item = f64> {
        (0..=200).map(|k| f64::from(k) / 100.0 - 1.0)
    }

    fn holds(model: &Taylor, f: impl Fn(f64) -> f64) {
        let [low, high] = model.range();
        for x in places() {
            let kept = model.c.iter().rev().fold(0.0, |v, c| v * x + c);
            let error = (f(x) - kept).abs();
            assert!(error <= model.r, "{x}: {error} > {}", model.r);
            assert!(f(x) >= low && f(x) <= high);
            assert!(f(x).abs() <= model.most());
        }
    }

    #[test]
    fn the_function_keeps_within_the_remainder() {
        let b: Vec<f64> = (0..13).map(|k| 3.0 + (1.7 * f64::from(k)).sin()).collect();
        let curve = crate::bezier::bernstein::Bernstein(b.clone());
        let p = |x: f64| curve.eval((x + 1.0) / 2.0);
        let model = Taylor::of_bernstein(&b);
        holds(&model, p);
        let narrow = Taylor::of_bernstein(&curve.restrict([0.3, 0.5]).0);
        let q = |x: f64| curve.eval(0.4 + 0.1 * x);
        holds(&narrow, q);
        holds(&narrow.times(&model), |x| q(x) * p(x));
        holds(&narrow.plus(&model, -2.0), |x| q(x) - 2.0 * p(x));
        holds(&narrow.power(-1.0).unwrap(), |x| 1.0 / q(x));
        let root = narrow.power(-0.5).unwrap();
        holds(&root, |x| 1.0 / q(x).sqrt());
        assert!(root.r < 1e-4);
        let inner = Taylor::of_bernstein(&[-0.9, 0.3, 0.8]);
        let y = |x: f64| {
            let t = (x + 1.0) / 2.0;
            -0.9 * (1.0 - t).powi(2) + 0.6 * t * (1.0 - t) + 0.8 * t * t
        };
        holds(&model.composed(&inner).unwrap(), |x| p(y(x)));
        assert!(model.composed(&inner.scaled(1.2)).is_none());
    }

    #[test]
    fn interpolation_passes_through_its_places() {
        let values = Taylor::places().map(|x| (2.0 * x).cos());
        let model = Taylor::through(&values);
        for x in places() {
            let kept = model.c.iter().rev().fold(0.0, |v, c| v * x + c);
            assert!((kept - (2.0 * x).cos()).abs() < 1e-4);
        }
    }
}
