//! Curves as Bezier pieces, made alike so that surfaces can be built on them.

use super::homogeneous::{Lifted, elevated, project, real, split};
use crate::scalar::Point;

/// A curve as homogeneous Bezier pieces of one degree, piece k over
/// `breaks[k]..breaks[k + 1]`.
#[derive(Debug, Clone)]
pub(super) struct CurvePieces {
    pub(super) breaks: Vec<f64>,
    pub(super) pieces: Vec<Vec<Lifted>>,
}

impl CurvePieces {
    pub(super) fn degree(&self) -> usize {
        self.pieces[0].len() - 1
    }

    /// Homogeneous start and end.
    pub(super) fn ends(&self) -> [Lifted; 2] {
        let last = &self.pieces[self.pieces.len() - 1];
        [self.pieces[0][0], last[last.len() - 1]]
    }

    pub(super) fn end_points(&self) -> [Point; 2] {
        self.ends().map(|end| project(&end))
    }

    /// The parameter moved affinely to 0..1.
    pub(super) fn normalised(mut self) -> Self {
        let (first, last) = (self.breaks[0], self.breaks[self.breaks.len() - 1]);
        for at in &mut self.breaks {
            *at = (*at - first) / (last - first);
        }
        if let Some(end) = self.breaks.last_mut() {
            *end = 1.0;
        }
        self
    }

    /// The same curve with both end weights 1: weights scaled, and the
    /// parameter changed by the linear fraction t = d1 s / D(s),
    /// D(s) = d0 (1 - s) + d1 s, which multiplies the homogeneous curve by
    /// D(s)^degree. The shape does not change; where the end weights agree,
    /// neither does the parameter. For curves on 0..1.
    pub(super) fn with_unit_end_weights(mut self) -> Self {
        let degree = self.degree();
        let power = -1.0 / real(degree);
        let [first, last] = self.ends().map(|end| end.w);
        if (first - last).abs() <= 1e-14 * first.max(last) {
            for piece in &mut self.pieces {
                for point in piece.iter_mut() {
                    *point /= first;
                }
            }
            return self;
        }
        let (d0, d1) = (first.powf(power), last.powf(power));
        let inner = self.breaks.len() - 1;
        for at in &mut self.breaks[1..inner] {
            let t = *at;
            *at = d0 * t / (d0 * t + d1 * (1.0 - t));
        }
        let factors: Vec<f64> = self
            .breaks
            .iter()
            .map(|s| d0 * (1.0 - s) + d1 * s)
            .collect();
        for (piece, ends) in self.pieces.iter_mut().zip(factors.windows(2)) {
            for (i, point) in piece.iter_mut().enumerate() {
                *point *= power_of(ends[0], degree - i) * power_of(ends[1], i);
            }
        }
        self
    }

    /// The same curve cut at `breaks` as well and raised to `degree`.
    pub(super) fn refined(self, breaks: &[f64], degree: usize) -> Self {
        let mut pieces = Vec::with_capacity(breaks.len() - 1);
        let mut old = self.breaks[1..].iter().zip(self.pieces);
        let mut start = breaks[0];
        let mut rest: Option<(f64, Vec<Lifted>)> = None;
        for &end in &breaks[1..] {
            let Some((stop, piece)) = rest.take().or_else(|| old.next().map(|(s, p)| (*s, p)))
            else {
                break;
            };
            if same(end, stop) {
                pieces.push(elevated(piece, degree));
            } else {
                let [left, right] = split(&piece, (end - start) / (stop - start));
                pieces.push(elevated(left, degree));
                rest = Some((stop, right));
            }
            start = end;
        }
        Self {
            breaks: breaks.to_vec(),
            pieces,
        }
    }
}

fn power_of(base: f64, exponent: usize) -> f64 {
    (0..exponent).fold(1.0, |value, _| value * base)
}

/// Breaks on 0..1 closer than this are one break.
fn same(a: f64, b: f64) -> bool {
    (a - b).abs() < 1e-10
}

/// All breaks of both curves, ascending; those of the first stand where two
/// agree.
pub(super) fn common_breaks(a: &CurvePieces, b: &CurvePieces) -> Vec<f64> {
    let extra = b
        .breaks
        .iter()
        .copied()
        .filter(|&t| !a.breaks.iter().any(|&s| same(s, t)));
    let mut breaks: Vec<f64> = a.breaks.iter().copied().chain(extra).collect();
    breaks.sort_by(f64::total_cmp);
    breaks
}
