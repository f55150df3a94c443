//! The largest absolute value of a quadratic over a triangle, in closed form.
//!
//! ```text
//! q(l) = sum q_i l_i^2 + 2 (m_01 l_0 l_1 + m_12 l_1 l_2 + m_20 l_2 l_0),   l >= 0, sum l = 1
//! ```
//!
//! A quadratic is extreme at a corner, at the vertex of the parabola along an
//! edge, or at its one critical point inside.

/// A quadratic in Bernstein form over a triangle.
#[derive(Debug, Clone, Copy, Default)]
pub(super) struct Quadratic {
    /// Coefficients at the corners 0, 1, 2.
    pub(super) corner: [f64; 3],
    /// Coefficients between corners 0-1, 1-2 and 2-0.
    pub(super) between: [f64; 3],
}

impl Quadratic {
    /// The error of linear interpolation for a constant Hessian: zero at the
    /// corners, Q(d) / 8 in the middle of an edge d, where `square` holds
    /// Q(d) of the edges 0-1, 1-2 and 2-0.
    #[cfg(test)]
    fn interpolation_error(square: [f64; 3]) -> Self {
        Self {
            corner: [0.0; 3],
            between: square.map(|q| q / 4.0),
        }
    }

    /// The largest error of linear interpolation for a constant Hessian, whose
    /// Q(d) on the edges 0-1, 1-2 and 2-0 is `square`, and where it is taken:
    /// in the middle of an edge, Q / 8, or inside, where for squares a, b, c
    ///
    /// ```text
    /// l ~ (b (a + c - b), c (a + b - c), a (b + c - a)),   a b c / (2 D),   D the sum of these
    /// ```
    ///
    /// (half the squared circumradius of a triangle with these squared edges).
    pub(super) fn largest_error(square: [f64; 3]) -> (f64, [f64; 3]) {
        let [a, b, c] = square;
        let mut best = (a.abs() / 8.0, [0.5, 0.5, 0.0]);
        if b.abs() / 8.0 > best.0 {
            best = (b.abs() / 8.0, [0.0, 0.5, 0.5]);
        }
        if c.abs() / 8.0 > best.0 {
            best = (c.abs() / 8.0, [0.5, 0.0, 0.5]);
        }
        let l = [b * (a + c - b), c * (a + b - c), a * (b + c - a)];
        let sum = l[0] + l[1] + l[2];
        if l.iter().all(|x| *x > 0.0) {
            // All of one sign, which makes the sum positive.
            let inside = (a * b * c).abs() / (2.0 * sum);
            if inside > best.0 {
                best = (inside, l.map(|x| x / sum));
            }
        }
        best
    }

    fn value(&self, l: [f64; 3]) -> f64 {
        let [a, b, c] = l;
        self.corner[0] * a * a
            + self.corner[1] * b * b
            + self.corner[2] * c * c
            + 2.0 * (self.between[0] * a * b + self.between[1] * b * c + self.between[2] * c * a)
    }

    /// The largest |q| and the barycentric place where it is taken.
    pub(super) fn largest(&self) -> (f64, [f64; 3]) {
        let mut best = (0.0, [1.0 / 3.0; 3]);
        let mut offer = |l: [f64; 3]| {
            let size = self.value(l).abs();
            if size > best.0 {
                best = (size, l);
            }
        };
        for k in 0..3 {
            let next = (k + 1) % 3;
            let mut l = [0.0; 3];
            l[k] = 1.0;
            offer(l);
            // Along the edge: a (1-t)^2 + 2 m t (1-t) + b t^2.
            let (a, b, m) = (self.corner[k], self.corner[next], self.between[k]);
            let bend = a - 2.0 * m + b;
            let t = (a - m) / bend;
            if t > 0.0 && t < 1.0 {
                l[k] = 1.0 - t;
                l[next] = t;
                offer(l);
            }
        }
        if let Some(l) = self.critical_point() {
            offer(l);
        }
        best
    }

    /// Where the gradient vanishes, if that is inside the triangle.
    fn critical_point(&self) -> Option<[f64; 3]> {
        // With l_2 = 1 - x - y: gradient (g + A x + B y, h + B x + C y) / 2.
        let [q0, q1, q2] = self.corner;
        let [m01, m12, m20] = self.between;
        let (a, b, c) = (
            q0 - 2.0 * m20 + q2,
            m01 - m12 - m20 + q2,
            q1 - 2.0 * m12 + q2,
        );
        let (g, h) = (m20 - q2, m12 - q2);
        let determinant = a * c - b * b;
        let x = (b * h - c * g) / determinant;
        let y = (b * g - a * h) / determinant;
        let z = 1.0 - x - y;
        (x > 0.0 && y > 0.0 && z > 0.0).then_some([x, y, z])
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    /// An equilateral triangle of edge L under f = (x^2 + y^2) / 2: the error is
    /// R^2 / 2 = L^2 / 6, taken at the centre.
    #[test]
    fn equilateral_error_is_half_the_square_of_the_circumradius() {
        let (largest, place) = Quadratic::interpolation_error([1.0; 3]).largest();
        assert_relative_eq!(largest, 1.0 / 6.0, epsilon = 1e-15);
        assert_relative_eq!(place[0], 1.0 / 3.0, epsilon = 1e-15);
    }

    #[test]
    fn the_short_form_for_a_constant_hessian_is_the_same() {
        let wave = |k: u32, f: f64| (f64::from(k) * f).sin();
        for k in 0..2000 {
            let square = [wave(k, 1.1), wave(k, 2.3) + 0.3, wave(k, 0.9) + 0.2];
            let (expected, _) = Quadratic::interpolation_error(square).largest();
            let (largest, place) = Quadratic::largest_error(square);
            assert_relative_eq!(largest, expected, max_relative = 1e-12);
            let there = Quadratic::interpolation_error(square).value(place).abs();
            assert_relative_eq!(there, largest, max_relative = 1e-12);
        }
    }

    #[test]
    fn no_sample_exceeds_the_largest() {
        let wave = |k: u32, f: f64| (f64::from(k) * f).sin();
        for k in 0..200 {
            let q = Quadratic {
                corner: [wave(k, 1.1), wave(k, 2.3), wave(k, 0.9)],
                between: [wave(k, 3.7), wave(k, 1.9), wave(k, 5.1)],
            };
            let (largest, place) = q.largest();
            assert_relative_eq!(q.value(place).abs(), largest);
            let mut sampled = 0.0_f64;
            for i in 0..=60 {
                for j in 0..=60 - i {
                    let (x, y) = (f64::from(i) / 60.0, f64::from(j) / 60.0);
                    sampled = sampled.max(q.value([x, y, 1.0 - x - y]).abs());
                }
            }
            assert!(sampled <= largest * (1.0 + 1e-12));
            assert!(sampled >= largest * 0.99);
        }
    }
}
