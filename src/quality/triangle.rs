//! The figures of one triangle.

use crate::scalar::{Point, Vector};

/// Twice the area, over the square of the longest edge, at which a triangle is
/// flat: its area is then rounding.
const FLAT: f64 = 1e-12;

/// A triangle that has an area: lengths L, twice the area 2A. All figures below
/// are ratios or angles, so lengths are scaled and neither overflow nor vanish.
#[derive(Debug, Clone, Copy)]
pub struct Triangle {
    /// Edges from each corner to the next, the longest near 1.
    edges: [Vector; 3],
    lengths: [f64; 3],
    doubled_area: f64,
}

impl Triangle {
    /// The triangle with these corners; `None` where it is flat: a repeated
    /// corner, or corners on a line, to rounding.
    #[must_use]
    pub fn new([a, b, c]: [Point; 3]) -> Option<Self> {
        let edges = [b - a, c - b, a - c];
        let scale = edges.iter().map(|e| e.amax()).fold(0.0, f64::max);
        if !(scale > 0.0 && scale.is_finite()) {
            return None;
        }
        let edges = edges.map(|e| e / scale);
        let lengths = edges.map(|e| e.norm());
        // The two shorter edges have the least rounding in their product.
        let longest = (0..3).fold(0, |l, k| if lengths[k] > lengths[l] { k } else { l });
        let doubled_area = edges[(longest + 1) % 3]
            .cross(&edges[(longest + 2) % 3])
            .norm();
        (doubled_area > FLAT * lengths[longest].powi(2)).then_some(Self {
            edges,
            lengths,
            doubled_area,
        })
    }

    fn longest(&self) -> f64 {
        self.lengths.into_iter().fold(0.0, f64::max)
    }

    fn perimeter(&self) -> f64 {
        self.lengths.iter().sum()
    }

    /// The three angles at the corners, degrees.
    #[must_use]
    pub fn angles_deg(&self) -> [f64; 3] {
        [0, 1, 2].map(|k| {
            let dot = -self.edges[k].dot(&self.edges[(k + 2) % 3]);
            self.doubled_area.atan2(dot).to_degrees()
        })
    }

    /// The smallest angle, degrees: 60 at best.
    #[must_use]
    pub fn minimum_angle_deg(&self) -> f64 {
        self.angles_deg().into_iter().fold(f64::INFINITY, f64::min)
    }

    /// The largest angle, degrees: 60 at best.
    #[must_use]
    pub fn maximum_angle_deg(&self) -> f64 {
        self.angles_deg().into_iter().fold(0.0, f64::max)
    }

    /// `L_max / (2 sqrt 3 r)` with the inradius `r = 2A / (L_1 + L_2 + L_3)`: 1 at
    /// best.
    #[must_use]
    pub fn aspect_ratio(&self) -> f64 {
        self.longest() * self.perimeter() / (12.0_f64.sqrt() * self.doubled_area)
    }

    /// `R / (2 r)`, circumradius over twice the inradius: 1 at best.
    #[must_use]
    pub fn radius_ratio(&self) -> f64 {
        let product: f64 = self.lengths.iter().product();
        // R = L_1 L_2 L_3 / 4A. Dividing twice keeps the square from vanishing.
        product / self.doubled_area * self.perimeter() / (4.0 * self.doubled_area)
    }

    /// `(2 / sqrt 3) 2A / max(L_i L_j)`: 1 at best.
    #[must_use]
    pub fn scaled_jacobian(&self) -> f64 {
        let [a, b, c] = self.lengths;
        let product = (a * b).max(b * c).max(c * a);
        2.0 / 3.0_f64.sqrt() * self.doubled_area / product
    }

    /// `L_max / L_min`: 1 at best.
    #[must_use]
    pub fn edge_ratio(&self) -> f64 {
        self.longest() / self.lengths.into_iter().fold(f64::INFINITY, f64::min)
    }

    /// `4 sqrt 3 A / (L_1^2 + L_2^2 + L_3^2)`: 1 at best.
    #[must_use]
    pub fn shape(&self) -> f64 {
        let squares: f64 = self.lengths.iter().map(|l| l * l).sum();
        12.0_f64.sqrt() * self.doubled_area / squares
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    fn triangle(corners: [[f64; 3]; 3]) -> Triangle {
        Triangle::new(corners.map(Point::from)).unwrap()
    }

    fn figures(t: &Triangle) -> [f64; 7] {
        [
            t.minimum_angle_deg(),
            t.maximum_angle_deg(),
            t.aspect_ratio(),
            t.radius_ratio(),
            t.scaled_jacobian(),
            t.edge_ratio(),
            t.shape(),
        ]
    }

    fn assert_figures(t: &Triangle, meant: [f64; 7]) {
        for (found, meant) in figures(t).into_iter().zip(meant) {
            assert_relative_eq!(found, meant, max_relative = 1e-12);
        }
    }

    /// Verdict, SAND2007-1751: definitions quoted from memory, the figures of the
    /// 3-4-5 triangle computed from them: A = 6, r = 1, R = 5/2.
    #[test]
    fn the_triangle_with_sides_3_4_5() {
        let t = triangle([[0.0, 0.0, 1.0], [4.0, 0.0, 1.0], [0.0, 3.0, 1.0]]);
        for (found, meant) in figures(&t)
            .into_iter()
            .zip([36.8699, 90.0, 1.44338, 1.25, 0.69282, 1.66667, 0.83138])
        {
            assert_relative_eq!(found, meant, max_relative = 1e-5);
        }
        let root = 3.0_f64.sqrt();
        assert_figures(
            &t,
            [
                (0.75_f64).atan().to_degrees(),
                90.0,
                5.0 / (2.0 * root),
                1.25,
                2.0 / root * 12.0 / 20.0,
                5.0 / 3.0,
                24.0 * root / 50.0,
            ],
        );
    }

    /// Every measure is 1 for the equilateral triangle (Verdict), its angles 60.
    #[test]
    fn the_equilateral_triangle_is_the_best() {
        let h = 3.0_f64.sqrt() / 2.0;
        for size in [1e-300, 1e-3, 1.0, 1e9, 1e300] {
            let t = triangle([
                [0.0, 0.0, 0.0],
                [size, 0.0, 0.0],
                [0.5 * size, h * size, 0.0],
            ]);
            assert_figures(&t, [60.0, 60.0, 1.0, 1.0, 1.0, 1.0, 1.0]);
        }
    }

    /// Half a square, sides 1, 1, sqrt 2: r = (2 - sqrt 2) / 2, R = sqrt 2 / 2;
    /// and 30, 30, 120 degrees: sides 1, 1, sqrt 3, A = sqrt 3 / 4. Worked out by
    /// hand from the definitions.
    #[test]
    fn triangles_worked_out_by_hand() {
        let (two, three) = (2.0_f64.sqrt(), 3.0_f64.sqrt());
        let t = triangle([[1.0, 0.0, 0.0], [1.0, 1.0, 0.0], [0.0, 0.0, 0.0]]);
        let r = (2.0 - two) / 2.0;
        assert_figures(
            &t,
            [
                45.0,
                90.0,
                two / (2.0 * three * r),
                two / 2.0 / (2.0 * r),
                2.0 / three / two,
                two,
                three / 2.0,
            ],
        );
        let t = triangle([[0.0, 0.0, 0.0], [three, 0.0, 0.0], [three / 2.0, 0.5, 0.0]]);
        let r = three / 2.0 / (2.0 + three);
        assert_figures(
            &t,
            [
                30.0,
                120.0,
                three / (2.0 * three * r),
                1.0 / (2.0 * r),
                2.0 / three * (three / 2.0) / three,
                three,
                3.0 / 5.0,
            ],
        );
    }

    #[test]
    fn flat_triangles_have_no_figures_and_needles_have_finite_ones() {
        let at = |x: f64, y: f64| Point::new(x, y, 0.0);
        for flat in [
            [at(0.0, 0.0), at(0.0, 0.0), at(1.0, 0.0)],
            [at(1.0, 1.0); 3],
            [at(0.0, 0.0), at(1.0, 1.0), at(3.0, 3.0)],
            [at(0.0, 0.0), at(1.0, f64::NAN), at(3.0, 3.0)],
        ] {
            assert!(Triangle::new(flat).is_none());
        }
        for height in [1e-11, 1e-6] {
            let needle = Triangle::new([at(0.0, 0.0), at(1.0, 0.0), at(0.5, height)]).unwrap();
            assert!(figures(&needle).iter().all(|f| f.is_finite()));
            assert!(needle.minimum_angle_deg() > 0.0);
        }
    }
}
