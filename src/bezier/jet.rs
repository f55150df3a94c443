//! Place, derivatives and curvatures of a surface at one point.

use crate::scalar::{Point, Vector};

/// A first derivative this much smaller than the other one is rounding.
const VANISHED: f64 = 1e-12;

/// S and its derivatives up to second order at one (u, v).
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SurfaceJet {
    /// S.
    pub point: Point,
    /// S_u.
    pub du: Vector,
    /// S_v.
    pub dv: Vector,
    /// S_uu.
    pub duu: Vector,
    /// S_uv.
    pub duv: Vector,
    /// S_vv.
    pub dvv: Vector,
}

impl SurfaceJet {
    /// S_u x S_v, not of unit length.
    #[must_use]
    pub fn cross(&self) -> Vector {
        self.du.cross(&self.dv)
    }

    /// The unit normal S_u x S_v / |S_u x S_v|, or `None` where the two are
    /// parallel to rounding (sine below 1e-9), or one of them is rounding beside
    /// the other (at a pole).
    #[must_use]
    pub fn normal(&self) -> Option<Vector> {
        let cross = self.cross();
        let norm = cross.norm();
        let (a, b) = (self.du.norm(), self.dv.norm());
        if a.min(b) <= VANISHED * a.max(b) {
            return None;
        }
        let scale = a * b;
        (norm > scale * 1e-9 && norm > f64::MIN_POSITIVE).then(|| cross / norm)
    }

    /// The second fundamental form (n.S_uu, n.S_uv, n.S_vv) for a unit normal.
    #[must_use]
    pub fn second_form(&self, normal: &Vector) -> [f64; 3] {
        [
            normal.dot(&self.duu),
            normal.dot(&self.duv),
            normal.dot(&self.dvv),
        ]
    }

    /// Normal curvature along the tangent `direction` (any length), in
    /// 1/length, positive where the surface bends towards `normal`. `None`
    /// where the tangent plane is not defined or `direction` is zero.
    #[must_use]
    pub fn normal_curvature(&self, normal: &Vector, direction: &Vector) -> Option<f64> {
        let [a, b] = self.steps_along(direction, 1e-18)?;
        let first = (self.du * a + self.dv * b).norm_squared();
        let [l, m, n] = self.second_form(normal);
        (first > 0.0).then(|| (l * a * a + 2.0 * m * a * b + n * b * b) / first)
    }

    /// (a, b) of the step a S_u + b S_v nearest to `direction` (least squares);
    /// `None` where the squared sine between S_u and S_v is at most `flat`.
    pub(crate) fn steps_along(&self, direction: &Vector, flat: f64) -> Option<[f64; 2]> {
        let (e, f, g) = (
            self.du.norm_squared(),
            self.du.dot(&self.dv),
            self.dv.norm_squared(),
        );
        let determinant = e * g - f * f;
        if determinant <= e * g * flat {
            return None;
        }
        let (p, q) = (direction.dot(&self.du), direction.dot(&self.dv));
        Some([(p * g - q * f) / determinant, (q * e - p * f) / determinant])
    }

    /// Gaussian and mean curvature, in 1/length^2 and 1/length; `None` where
    /// the normal is not defined.
    #[must_use]
    pub fn gaussian_and_mean(&self) -> Option<(f64, f64)> {
        let normal = self.normal()?;
        let (e, f, g) = (
            self.du.norm_squared(),
            self.du.dot(&self.dv),
            self.dv.norm_squared(),
        );
        let [l, m, n] = self.second_form(&normal);
        let determinant = e * g - f * f;
        Some((
            (l * n - m * m) / determinant,
            (e * n - 2.0 * f * m + g * l) / (2.0 * determinant),
        ))
    }
}
