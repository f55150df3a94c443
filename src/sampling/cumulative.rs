//! A density along 0..1 and the places that share it out evenly.

/// A density that is linear between even stations, and its running integral.
#[derive(Debug)]
pub(crate) struct Cumulative {
    density: Vec<f64>,
    sums: Vec<f64>,
}

impl Cumulative {
    /// From the density at even stations, both ends included.
    pub(crate) fn new(density: impl Iterator<Item = f64>) -> Self {
        let density: Vec<f64> = density.collect();
        let mut sums = Vec::with_capacity(density.len());
        let mut sum = 0.0;
        sums.push(0.0);
        for pair in density.windows(2) {
            sum += (pair[0] + pair[1]) / 2.0 * ratio(1, density.len() - 1);
            sums.push(sum);
        }
        Self { density, sums }
    }

    fn cells(&self) -> usize {
        self.sums.len() - 1
    }

    /// The integral over 0..1.
    pub(crate) fn total(&self) -> f64 {
        self.sums[self.cells()]
    }

    /// The integral over 0..t.
    #[allow(
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "a parameter in 0..1 times a station count"
    )]
    pub(crate) fn at(&self, t: f64) -> f64 {
        let scaled = t * ratio(self.cells(), 1);
        let cell = (scaled as usize).min(self.cells() - 1);
        let inside = scaled - ratio(cell, 1);
        let (a, b) = (self.density[cell], self.density[cell + 1]);
        self.sums[cell] + inside * (a + (b - a) * inside / 2.0) * ratio(1, self.cells())
    }

    /// Where the integral from 0 reaches `target`.
    pub(crate) fn reach(&self, target: f64) -> f64 {
        let cell = self
            .sums
            .partition_point(|&s| s <= target)
            .clamp(1, self.cells())
            - 1;
        let (a, b) = (self.density[cell], self.density[cell + 1]);
        // a s + (b - a) s^2 / 2 = rest, in the form that is safe for b = a.
        let rest = ((target - self.sums[cell]) * ratio(self.cells(), 1)).max(0.0);
        let root = (a * a + 2.0 * (b - a) * rest).max(0.0).sqrt();
        let inside = if a + root > 0.0 {
            (2.0 * rest / (a + root)).min(1.0)
        } else {
            0.5
        };
        (ratio(cell, 1) + inside) * ratio(1, self.cells())
    }
}

#[allow(clippy::cast_precision_loss, reason = "counts stay far below 2^52")]
pub(crate) fn ratio(k: usize, n: usize) -> f64 {
    k as f64 / n as f64
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    #[test]
    fn a_linear_density_is_shared_out_exactly() {
        let sums = Cumulative::new((0..=8).map(|k| 1.0 + 2.0 * ratio(k, 8)));
        assert_relative_eq!(sums.total(), 2.0);
        for k in 0..=20 {
            let t = ratio(k, 20);
            assert_relative_eq!(sums.at(t), t + t * t, epsilon = 1e-14);
            assert_relative_eq!(sums.reach(t + t * t), t, epsilon = 1e-14);
        }
    }
}
