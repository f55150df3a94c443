//! Curves that carry a profile through space.
//!
//! A guide is a vector-valued polynomial spline in Bezier form,
//!
//! ```text
//! G(t) = sum g_i B_i(t) on each span,   g_d of one span = g_0 of the next, bitwise
//! ```
//!
//! cut from one polynomial or one cubic B-spline by its blossom (Ramshaw 1989),
//! so neighbouring spans are tangent to round-off. Only sums, products,
//! quotients and square roots are used in this room: its sets come out the same
//! to the byte on every machine.

use crate::scalar::Vector;

/// A spline in Bezier form, all spans of one degree.
#[derive(Debug, Clone)]
pub(super) struct Guide {
    spans: Vec<Vec<Vector>>,
}

impl Guide {
    /// `c[0] + c[1] t + c[2] t^2` between ascending breaks.
    pub(super) fn quadratic(c: &[Vector; 3], breaks: &[f64]) -> Self {
        let blossom = |a: f64, b: f64| c[0] + c[1] * ((a + b) / 2.0) + c[2] * (a * b);
        let spans = breaks
            .windows(2)
            .map(|s| {
                vec![
                    blossom(s[0], s[0]),
                    blossom(s[0], s[1]),
                    blossom(s[1], s[1]),
                ]
            })
            .collect();
        Self { spans }
    }

    /// A Bezier curve on [0, 1], cut at ascending breaks in that range.
    pub(super) fn bezier(points: &[Vector], breaks: &[f64]) -> Self {
        let degree = points.len() - 1;
        let spans = breaks
            .windows(2)
            .map(|s| {
                (0..=degree)
                    .map(|i| {
                        let arguments: Vec<f64> = (0..degree)
                            .map(|k| if k < degree - i { s[0] } else { s[1] })
                            .collect();
                        bezier_blossom(points, &arguments)
                    })
                    .collect()
            })
            .collect();
        Self { spans }
    }

    /// A cubic B-spline over `knots`, which has four more entries than there
    /// are points and fourfold ends; one span for each pair of differing inner
    /// knots.
    pub(super) fn cubic_bspline(points: &[Vector], knots: &[f64]) -> Self {
        let mut spans: Vec<Vec<Vector>> = Vec::new();
        for k in 3..points.len() {
            let (a, b) = (knots[k], knots[k + 1]);
            if a >= b {
                continue;
            }
            let mut span: Vec<Vector> = [[a, a, a], [a, a, b], [a, b, b], [b, b, b]]
                .iter()
                .map(|arguments| bspline_blossom(points, knots, k, arguments))
                .collect();
            if let Some(before) = spans.last() {
                span[0] = before[3];
            }
            spans.push(span);
        }
        Self { spans }
    }

    /// The same vector on every span.
    pub(super) fn constant(value: Vector, spans: usize) -> Self {
        Self {
            spans: vec![vec![value]; spans],
        }
    }

    /// The guide with a linear map applied to every control vector.
    pub(super) fn map(&self, linear: impl Fn(Vector) -> Vector) -> Self {
        Self {
            spans: self
                .spans
                .iter()
                .map(|span| span.iter().map(|&g| linear(g)).collect())
                .collect(),
        }
    }

    /// The same guide in a degree not below its own.
    pub(super) fn elevated(&self, degree: usize) -> Self {
        Self {
            spans: self
                .spans
                .iter()
                .map(|span| elevated(span, degree))
                .collect(),
        }
    }

    /// The control vectors of each span.
    pub(super) fn spans(&self) -> &[Vec<Vector>] {
        &self.spans
    }

    /// The highest degree of its spans.
    pub(super) fn degree(&self) -> usize {
        self.spans.first().map_or(0, |span| span.len() - 1)
    }
}

/// Control vectors of the same polynomial in a higher degree (Farin).
pub(super) fn elevated(span: &[Vector], degree: usize) -> Vec<Vector> {
    let mut points = span.to_vec();
    while points.len() <= degree {
        let n = real(points.len());
        let mut raised = vec![points[0]];
        for i in 1..points.len() {
            let a = real(i) / n;
            raised.push(points[i - 1] * a + points[i] * (1.0 - a));
        }
        raised.push(points[points.len() - 1]);
        points = raised;
    }
    points
}

/// Blossom value of a Bezier curve on [0, 1], as many arguments as its degree.
pub(super) fn bezier_blossom(points: &[Vector], arguments: &[f64]) -> Vector {
    let mut values = points.to_vec();
    for &t in arguments {
        for i in 0..values.len() - 1 {
            values[i] = values[i] * (1.0 - t) + values[i + 1] * t;
        }
        values.pop();
    }
    values[0]
}

/// Blossom value of a cubic B-spline's polynomial on [knots[k], knots[k + 1]].
fn bspline_blossom(points: &[Vector], knots: &[f64], k: usize, arguments: &[f64; 3]) -> Vector {
    let mut values = points[k - 3..=k].to_vec();
    for (level, &t) in arguments.iter().enumerate() {
        for i in 0..3 - level {
            let (from, to) = (knots[k - 2 + level + i], knots[k + 1 + i]);
            let a = (t - from) / (to - from);
            values[i] = values[i] * (1.0 - a) + values[i + 1] * a;
        }
    }
    values[0]
}

/// A count as a real number; exact for every count met here.
#[allow(clippy::cast_precision_loss, reason = "counts are far below 2^53")]
pub(super) fn real(count: usize) -> f64 {
    count as f64
}

#[cfg(test)]
mod tests {
    use super::*;

    fn v(x: f64) -> Vector {
        Vector::new(x, x * x, 1.0)
    }

    /// A cubic B-spline reproduces a cubic whose blossom gives its points.
    #[test]
    fn spans_of_a_bspline_reproduce_a_polynomial() {
        let f = |a: f64, b: f64, c: f64| Vector::new((a + b + c) / 3.0, a * b * c, 2.0);
        let knots = [0.0, 0.0, 0.0, 0.0, 0.8, 1.5, 3.0, 3.0, 3.0, 3.0];
        let points: Vec<Vector> = (0..6)
            .map(|i| f(knots[i + 1], knots[i + 2], knots[i + 3]))
            .collect();
        let guide = Guide::cubic_bspline(&points, &knots);
        assert_eq!(guide.spans().len(), 3);
        for (span, t) in guide.spans().iter().zip([0.4, 1.15, 2.25]) {
            let middle = bezier_blossom(span, &[0.5; 3]);
            assert!((middle - f(t, t, t)).norm() < 1e-14);
        }
    }

    #[test]
    fn cuts_and_elevation_keep_the_curve() {
        let points = [v(0.0), v(3.0), v(5.0), v(4.0)];
        let guide = Guide::bezier(&points, &[0.0, 0.25, 1.0]).elevated(6);
        let whole = bezier_blossom(&points, &[0.625; 3]);
        assert!((bezier_blossom(&guide.spans()[1], &[0.5; 6]) - whole).norm() < 1e-13);
        assert_eq!(guide.spans()[0][6], guide.spans()[1][0]);
    }
}
