//! B-splines to Bezier pieces by blossoming.
//!
//! The control point i of the piece over [a, b] is f(a, .., a, b, .., b), b
//! taken i times, f the polar form of the polynomial on that span, evaluated by
//! de Boor's scheme with a different argument in each step (Ramshaw 1989). The
//! arguments lie in the span, so every step is a convex combination.

use super::context::Context;
use super::fault::{Step, SurfaceFault};
use super::homogeneous::{Lifted, lerp};
use crate::bezier::MAX_DEGREE;

/// A valid knot vector of one direction.
#[derive(Debug, Clone)]
pub(super) struct Knots<'a> {
    degree: usize,
    values: &'a [f64],
    /// Index k of each span [t_k, t_k+1] of the domain that has a length.
    spans: Vec<usize>,
}

impl<'a> Knots<'a> {
    /// Checks `values` for `points` control points; `at` leads to the list.
    pub(super) fn new(
        context: &mut Context<'_>,
        degree: usize,
        values: &'a [f64],
        points: usize,
        at: &[Step],
    ) -> Option<Self> {
        if degree == 0 || degree > MAX_DEGREE {
            return None; // The caller says so, at the degree.
        }
        if points <= degree {
            context.fault(
                at,
                SurfaceFault::TooFewPoints {
                    found: points,
                    degree,
                },
            );
            return None;
        }
        if values.len() != points + degree + 1 {
            context.fault(
                at,
                SurfaceFault::KnotCount {
                    found: values.len(),
                    points,
                    degree,
                },
            );
            return None;
        }
        let place = |k: usize| [at, &[Step::Item(k)]].concat();
        let mut good = true;
        for (k, &value) in values.iter().enumerate() {
            good &= context.knot(value, || place(k));
            if k > 0 && value < values[k - 1] {
                let before = values[k - 1];
                context.fault(&place(k), SurfaceFault::KnotOrder { value, before });
                good = false;
            }
        }
        if !good {
            return None;
        }
        let spans: Vec<usize> = (degree..points)
            .filter(|&k| values[k] < values[k + 1])
            .collect();
        let (Some(&first), Some(&last)) = (spans.first(), spans.last()) else {
            context.fault(at, SurfaceFault::EmptyDomain { degree, points });
            return None;
        };
        // Between two spans with a length there are (second - first) equal knots.
        for pair in spans.windows(2) {
            let count = pair[1] - pair[0];
            if count > degree {
                context.fault(
                    &place(pair[1]),
                    SurfaceFault::KnotMultiplicity {
                        value: values[pair[1]],
                        count,
                        degree,
                    },
                );
                good = false;
            }
        }
        debug_assert!(first <= last);
        good.then_some(Self {
            degree,
            values,
            spans,
        })
    }

    /// The distinct knots of the domain.
    pub(super) fn breaks(&self) -> Vec<f64> {
        let ends = self.spans.iter().map(|&k| self.values[k + 1]);
        std::iter::once(self.values[self.spans[0]])
            .chain(ends)
            .collect()
    }

    /// The Bezier pieces of the spline with these control points. The last
    /// point of a piece is bitwise the first of the next: at their common knot
    /// the two schemes form the same combinations, and the ones in which they
    /// differ have a ratio of exactly 0 or 1.
    pub(super) fn pieces(&self, control: &[Lifted]) -> Vec<Vec<Lifted>> {
        self.spans
            .iter()
            .map(|&k| {
                (0..=self.degree)
                    .map(|i| self.blossom(control, k, i))
                    .collect()
            })
            .collect()
    }

    /// f(a^(degree - i), b^i) on the span [a, b] = [t_k, t_k+1].
    fn blossom(&self, control: &[Lifted], k: usize, i: usize) -> Lifted {
        let (p, t) = (self.degree, self.values);
        let mut work = [Lifted::zeros(); MAX_DEGREE + 1];
        work[..=p].copy_from_slice(&control[k - p..=k]);
        for r in 1..=p {
            let argument = if r <= p - i { t[k] } else { t[k + 1] };
            for local in (r..=p).rev() {
                let j = local + k - p;
                let ratio = (argument - t[j]) / (t[j + p - r + 1] - t[j]);
                work[local] = lerp(work[local - 1], work[local], ratio);
            }
        }
        work[p]
    }
}
