//! A rational Bezier curve.

use super::casteljau;
use super::net::{MAX_DEGREE, Net, NetError, quotient};
use crate::scalar::{Point, Vector};

/// A rational Bezier curve on 0 <= t <= 1, of degree 1 to [`MAX_DEGREE`].
#[derive(Debug, Clone, PartialEq)]
pub struct BezierCurve {
    net: Net,
}

/// Place and derivatives of a curve at one parameter.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CurveJet {
    /// C(t).
    pub point: Point,
    /// C'(t).
    pub dt: Vector,
    /// C''(t).
    pub dtt: Vector,
}

impl CurveJet {
    /// Curvature |C' x C''| / |C'|^3, in 1/length; zero where C' is.
    #[must_use]
    pub fn curvature(&self) -> f64 {
        let speed = self.dt.norm();
        if speed > 0.0 {
            self.dt.cross(&self.dtt).norm() / speed.powi(3)
        } else {
            0.0
        }
    }
}

impl BezierCurve {
    /// A curve from degree + 1 control points and, if rational, as many weights.
    ///
    /// # Errors
    /// [`NetError`] when counts, coordinates or weights are not those of a curve.
    pub fn new(points: Vec<Point>, weights: Option<Vec<f64>>) -> Result<Self, NetError> {
        let degree = points.len().saturating_sub(1);
        if degree == 0 || degree > MAX_DEGREE {
            return Err(NetError::Degree(degree));
        }
        Ok(Self {
            net: Net::new(points, weights)?,
        })
    }

    pub(super) fn from_net(net: Net) -> Self {
        Self { net }
    }

    /// The degree.
    #[must_use]
    pub fn degree(&self) -> usize {
        self.net.len() - 1
    }

    /// Whether the weights differ.
    #[must_use]
    pub fn is_rational(&self) -> bool {
        matches!(self.net, Net::Rational(_))
    }

    /// Control point `i` in space.
    #[must_use]
    pub fn control_point(&self, i: usize) -> Point {
        self.net.point(i)
    }

    /// All control points in space.
    pub fn control_points(&self) -> impl Iterator<Item = Point> + '_ {
        (0..self.net.len()).map(|i| self.net.point(i))
    }

    /// Weight of control point `i`; 1 for a polynomial curve.
    #[must_use]
    pub fn weight(&self, i: usize) -> f64 {
        self.net.weight(i)
    }

    /// C(t) by de Casteljau's algorithm.
    ///
    /// ```
    /// use chordwise::{bezier::BezierCurve, scalar::Point};
    /// let s = 0.5_f64.sqrt();
    /// let arc = BezierCurve::new(
    ///     vec![Point::new(1.0, 0.0, 0.0), Point::new(1.0, 1.0, 0.0), Point::new(0.0, 1.0, 0.0)],
    ///     Some(vec![1.0, s, 1.0]),
    /// )?;
    /// assert!((arc.eval(0.3).coords.norm() - 1.0).abs() < 1e-15);
    /// # Ok::<(), chordwise::bezier::NetError>(())
    /// ```
    #[must_use]
    pub fn eval(&self, t: f64) -> Point {
        let mut work3 = casteljau::row::<3, { casteljau::LONG }>();
        match &self.net {
            Net::Polynomial(points) => {
                let work = &mut work3[..points.len()];
                work.copy_from_slice(points);
                Point::from(casteljau::value(work, t))
            }
            Net::Rational(points) => {
                let mut work4 = casteljau::row::<4, { casteljau::LONG }>();
                let work = &mut work4[..points.len()];
                work.copy_from_slice(points);
                super::net::project(&casteljau::value(work, t))
            }
        }
    }

    /// C, C' and C'' at `t`.
    #[must_use]
    pub fn jet(&self, t: f64) -> CurveJet {
        let [value, dt, dtt] = match &self.net {
            Net::Polynomial(points) => {
                let mut work = casteljau::row::<3, { casteljau::LONG }>();
                let work = &mut work[..points.len()];
                work.copy_from_slice(points);
                casteljau::value_and_derivatives(work, t)
            }
            Net::Rational(points) => {
                let mut work = casteljau::row::<4, { casteljau::LONG }>();
                let work = &mut work[..points.len()];
                work.copy_from_slice(points);
                quotient(&casteljau::value_and_derivatives(work, t))
            }
        };
        CurveJet {
            point: Point::from(value),
            dt,
            dtt,
        }
    }

    /// The part from `t0` to `t1` as a curve of its own; `t0 > t1` reverses it.
    #[must_use]
    pub fn restrict(&self, t0: f64, t1: f64) -> Self {
        let mut net = self.net.clone();
        match &mut net {
            Net::Polynomial(points) => casteljau::restrict(points, t0, t1),
            Net::Rational(points) => casteljau::restrict(points, t0, t1),
        }
        Self { net }
    }

    /// The parts before and after `t`.
    #[must_use]
    pub fn split(&self, t: f64) -> (Self, Self) {
        let mut net = self.net.clone();
        let left = match &mut net {
            Net::Polynomial(points) => Net::Polynomial(casteljau::split(points, t)),
            Net::Rational(points) => Net::Rational(casteljau::split(points, t)),
        };
        (Self { net: left }, Self { net })
    }

    /// The same curve run backwards.
    #[must_use]
    pub fn reversed(&self) -> Self {
        Self {
            net: self.net.pick((0..self.net.len()).rev()),
        }
    }

    /// The same curve as a net of higher degree.
    ///
    /// # Errors
    /// [`NetError::Degree`] when `degree` is below the curve's or above
    /// [`MAX_DEGREE`].
    pub fn elevated(&self, degree: usize) -> Result<Self, NetError> {
        if degree < self.degree() || degree > MAX_DEGREE {
            return Err(NetError::Degree(degree));
        }
        let mut net = self.net.clone();
        while net.len() <= degree {
            net = match net {
                Net::Polynomial(points) => Net::Polynomial(casteljau::elevate(&points)),
                Net::Rational(points) => Net::Rational(casteljau::elevate(&points)),
            };
        }
        Ok(Self { net })
    }

    /// The curve moved by a map that must be affine.
    #[must_use]
    pub fn map(&self, affine: impl Fn(Point) -> Point) -> Self {
        Self {
            net: self.net.map(affine),
        }
    }

    /// Proved bound on the distance between the curve and the chord between
    /// its end points, both ways, by splitting off the quadratic part.
    #[must_use]
    pub fn chord_bound(&self) -> f64 {
        let end = self.control_point(self.degree());
        self.chord_bound_to(&self.control_point(0), &end)
    }

    /// The same against any segment, from `a` to `b`.
    #[must_use]
    pub fn chord_bound_to(&self, a: &Point, b: &Point) -> f64 {
        let local: Vec<Vector> = self.control_points().map(|p| p - a).collect();
        let weights: Vec<f64> = if self.is_rational() {
            (0..=self.degree()).map(|i| self.weight(i)).collect()
        } else {
            Vec::new()
        };
        super::chord_bound(&local, &weights, &Vector::zeros(), &(b - a))
    }

    /// Length by eight-point Gauss-Legendre quadrature: sampled, not proved.
    #[must_use]
    pub fn length(&self) -> f64 {
        GAUSS_8
            .iter()
            .map(|&(t, w)| w * self.jet(t).dt.norm())
            .sum()
    }
}

/// Nodes and weights of the eight-point Gauss-Legendre rule on the unit
/// interval (Abramowitz and Stegun, table 25.4).
pub(crate) const GAUSS_8: [(f64, f64); 8] = [
    (0.019_855_071_751_231_856, 0.050_614_268_145_188_13),
    (0.101_666_761_293_186_63, 0.111_190_517_226_687_24),
    (0.237_233_795_041_835_5, 0.156_853_322_938_943_64),
    (0.408_282_678_752_175_1, 0.181_341_891_689_181),
    (0.591_717_321_247_825, 0.181_341_891_689_181),
    (0.762_766_204_958_164_5, 0.156_853_322_938_943_64),
    (0.898_333_238_706_813_4, 0.111_190_517_226_687_24),
    (0.980_144_928_248_768_1, 0.050_614_268_145_188_13),
];

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    fn cubic() -> BezierCurve {
        let points = [
            (0.0, 0.0, 0.0),
            (1.0, 2.0, 0.5),
            (3.0, -1.0, 1.0),
            (4.0, 0.0, 2.0),
        ];
        let points = points.map(|(x, y, z)| Point::new(x, y, z)).to_vec();
        BezierCurve::new(points, Some(vec![1.0, 0.5, 2.0, 1.5])).unwrap()
    }

    #[test]
    fn restriction_elevation_and_reversal_trace_the_same_curve() {
        let curve = cubic();
        for k in 0..=10 {
            let t = f64::from(k) / 10.0;
            let here = curve.eval(t);
            assert_relative_eq!(curve.elevated(7).unwrap().eval(t), here, epsilon = 1e-14);
            assert_relative_eq!(curve.reversed().eval(1.0 - t), here, epsilon = 1e-14);
            let part = curve.restrict(0.2, 0.7).eval((t - 0.2) / 0.5);
            assert_relative_eq!(part, here, epsilon = 1e-13);
            let (left, right) = curve.split(0.4);
            let half = if t <= 0.4 {
                left.eval(t / 0.4)
            } else {
                right.eval((t - 0.4) / 0.6)
            };
            assert_relative_eq!(half, here, epsilon = 1e-14);
        }
    }

    #[test]
    fn derivatives_match_differences() {
        let curve = cubic();
        let h = 1e-5;
        let (before, here, after) = (curve.eval(0.3 - h), curve.jet(0.3), curve.eval(0.3 + h));
        assert_relative_eq!(here.dt, (after - before) / (2.0 * h), epsilon = 1e-7);
        let second = ((after - here.point) - (here.point - before)) / (h * h);
        assert_relative_eq!(here.dtt, second, epsilon = 1e-3);
    }

    /// Nairn, Peters and Lutterkort 1999 (constants recomputed): a curve keeps
    /// within N(d) times the largest second difference of its control polygon,
    /// N = 1/4 for a parabola, where the bound is attained.
    #[test]
    fn a_parabola_attains_the_control_polygon_distance() {
        let points = vec![
            Point::new(0.0, 0.0, 0.0),
            Point::new(1.0, 2.0, 0.0),
            Point::new(2.0, 0.0, 0.0),
        ];
        let curve = BezierCurve::new(points, None).unwrap();
        let second_difference = 4.0;
        assert_relative_eq!(2.0 - curve.eval(0.5).y, second_difference / 4.0);
    }
}
