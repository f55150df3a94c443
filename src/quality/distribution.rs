//! How the figures of one measure are spread.

use super::Measure;
use crate::scalar::Point;

/// How many of the worst are listed with their place.
pub const WORST: usize = 20;

/// A figure with its place.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Worst {
    /// The figure.
    pub value: f64,
    /// A triangle of the mesh it belongs to: itself, or one at the edge or point.
    pub triangle: usize,
    /// The triangle's centroid, the middle of the edge, or the point.
    pub at: Point,
}

/// The figures of one measure.
#[derive(Debug, Clone, PartialEq)]
pub struct Distribution {
    /// What is measured.
    pub measure: Measure,
    /// How many figures there are; at least one.
    pub count: usize,
    /// The least figure.
    pub minimum: f64,
    /// One figure in a hundred is at most this (nearest rank).
    pub one_percent: f64,
    /// Their mean.
    pub mean: f64,
    /// 99 figures in a hundred are at most this (nearest rank).
    pub ninety_nine_percent: f64,
    /// The largest figure.
    pub maximum: f64,
    /// How many lie beyond the bad end of the acceptable range.
    pub outside: usize,
    /// Where the bars of the histogram begin; the last has no end.
    pub bars: Vec<f64>,
    /// How many figures each bar holds.
    pub counts: Vec<usize>,
    /// The worst, the worst of all first.
    pub worst: Vec<Worst>,
}

impl Distribution {
    /// The distribution of the finite figures among these; each has its number,
    /// by which `place` finds it if it is among the worst `listed`. `None` where
    /// there is none. Linear in their number, and the same for equal figures in
    /// equal order.
    pub(super) fn of(
        measure: Measure,
        values: impl Iterator<Item = f64>,
        listed: usize,
        place: impl Fn(usize) -> (usize, Point),
    ) -> Option<Self> {
        let mut worst: Vec<(f64, usize)> = Vec::with_capacity(listed + 1);
        let mut found = Vec::new();
        let (mut outside, mut sum, mut lost) = (0, 0.0_f64, 0.0_f64);
        for (number, value) in values.enumerate().filter(|(_, value)| value.is_finite()) {
            let better = |(other, _): &(f64, usize)| measure.worse(value, *other).is_gt();
            if worst.len() < listed || worst.last().is_some_and(better) {
                // Behind its equals, so that of these the first are listed.
                let at = worst.partition_point(|other| !better(other));
                worst.insert(at, (value, number));
                worst.truncate(listed);
            }
            outside += usize::from(measure.is_outside(value));
            // Neumaier's sum: what an addition loses is carried along.
            let next = sum + value;
            lost += if sum.abs() >= value.abs() {
                (sum - next) + value
            } else {
                (value - next) + sum
            };
            sum = next;
            found.push(value);
        }
        let minimum = found.iter().copied().reduce(f64::min)?;
        let maximum = found.iter().copied().reduce(f64::max)?;
        let bars = measure.bars(maximum);
        let mut counts = vec![0; bars.len()];
        for value in &found {
            counts[bars.partition_point(|from| from <= value).max(1) - 1] += 1;
        }
        let count = found.len();
        #[allow(clippy::cast_precision_loss, reason = "counts stay below 2^52")]
        let mean = (sum + lost) / count as f64;
        let mut rank = |percent: usize| {
            let at = (count * percent).div_ceil(100).max(1) - 1;
            *found.select_nth_unstable_by(at, f64::total_cmp).1
        };
        Some(Self {
            measure,
            count,
            minimum,
            one_percent: rank(1),
            // Rounding of the sum must not put it beyond the ends.
            mean: mean.clamp(minimum, maximum),
            ninety_nine_percent: rank(99),
            maximum,
            outside,
            bars,
            counts,
            worst: worst
                .into_iter()
                .map(|(value, number)| {
                    let (triangle, at) = place(number);
                    Worst {
                        value,
                        triangle,
                        at,
                    }
                })
                .collect(),
        })
    }

    /// The worst figure.
    #[must_use]
    pub fn worst_value(&self) -> f64 {
        if self.measure.worse(self.minimum, self.maximum).is_gt() {
            self.minimum
        } else {
            self.maximum
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn of(measure: Measure, values: &[f64]) -> Option<Distribution> {
        let place = |n: usize| (n, Point::origin());
        Distribution::of(measure, values.iter().copied(), WORST, place)
    }

    /// Nearest rank: of 1 to 1000 one percent is the tenth, 99 the 990th.
    #[test]
    fn quantiles_are_exact() {
        // A permutation: 7 has no divisor in common with 1000.
        let values: Vec<f64> = (0..1000_u32).map(|k| f64::from(k * 7 % 1000 + 1)).collect();
        let found = of(Measure::MinimumAngle, &values).unwrap();
        let figures = [
            found.minimum,
            found.one_percent,
            found.mean,
            found.ninety_nine_percent,
            found.maximum,
        ];
        assert_eq!(
            figures.map(f64::to_bits),
            [1.0, 10.0, 500.5, 990.0, 1000.0].map(f64::to_bits)
        );
        assert_eq!(found.outside, 29);
        assert_eq!(found.counts.iter().sum::<usize>(), 1000);
        assert_eq!(found.counts[..2], [4, 5]);
        let worst: Vec<f64> = found.worst.iter().map(|w| w.value).collect();
        let meant: Vec<f64> = (1..=20_u32).map(f64::from).collect();
        assert_eq!(worst, meant);
        let found = of(Measure::AspectRatio, &values).unwrap();
        let worst: Vec<f64> = found.worst.iter().map(|w| w.value).collect();
        let meant: Vec<f64> = (981..=1000_u32).rev().map(f64::from).collect();
        assert_eq!(worst, meant);
    }

    #[test]
    fn a_single_figure_is_all_of_them_and_none_is_none() {
        let found = of(Measure::Shape, &[0.5, f64::NAN]).unwrap();
        assert_eq!(found.count, 1);
        for figure in [found.one_percent, found.mean, found.ninety_nine_percent] {
            assert_eq!(figure.to_bits(), 0.5_f64.to_bits());
        }
        assert!(of(Measure::Shape, &[]).is_none());
    }

    #[test]
    fn equals_are_listed_in_their_order_and_sizes_by_how_far_they_are_off() {
        let found = of(Measure::Growth, &[2.0; 50]).unwrap();
        let numbers: Vec<usize> = found.worst.iter().map(|w| w.triangle).collect();
        assert_eq!(numbers, (0..WORST).collect::<Vec<_>>());
        let found = of(Measure::Size, &[1.0, 0.25, 3.0, 1.1]).unwrap();
        let numbers: Vec<usize> = found.worst.iter().map(|w| w.triangle).collect();
        assert_eq!(numbers, [1, 2, 3, 0]);
        assert_eq!(found.worst_value().to_bits(), 0.25_f64.to_bits());
    }
}
