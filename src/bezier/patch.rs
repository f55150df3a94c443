//! A rational tensor-product Bezier patch.

use nalgebra::SVector;

use super::casteljau;
use super::net::{MAX_DEGREE, Net, NetError, project};
use super::triangle::{TriangleNet, TriangleRestriction};
use super::{BezierCurve, Side, SurfaceJet};
use crate::scalar::{Point, Vector};

/// A rational tensor-product Bezier patch on the unit square.
///
/// The net is stored with v running fastest: control point (i, j), i along u,
/// stands at `i * (degree_v + 1) + j`.
#[derive(Debug, Clone, PartialEq)]
pub struct BezierPatch {
    degree: (usize, usize),
    net: Net,
}

impl BezierPatch {
    /// A patch of the given degrees from (degree_u + 1) (degree_v + 1) control
    /// points, v fastest, and as many weights if it is rational.
    ///
    /// # Errors
    /// [`NetError`] when degrees, counts, coordinates or weights are out of
    /// range.
    pub fn new(
        degree: (usize, usize),
        points: Vec<Point>,
        weights: Option<Vec<f64>>,
    ) -> Result<Self, NetError> {
        for d in [degree.0, degree.1] {
            if d == 0 || d > MAX_DEGREE {
                return Err(NetError::Degree(d));
            }
        }
        let expected = (degree.0 + 1) * (degree.1 + 1);
        if points.len() != expected {
            return Err(NetError::PointCount {
                found: points.len(),
                expected,
            });
        }
        Ok(Self {
            degree,
            net: Net::new(points, weights)?,
        })
    }

    /// The degrees along u and v.
    #[must_use]
    pub fn degree(&self) -> (usize, usize) {
        self.degree
    }

    /// Whether the weights differ.
    #[must_use]
    pub fn is_rational(&self) -> bool {
        matches!(self.net, Net::Rational(_))
    }

    fn index(&self, i: usize, j: usize) -> usize {
        i * (self.degree.1 + 1) + j
    }

    /// Control point (i, j) in space.
    #[must_use]
    pub fn control_point(&self, i: usize, j: usize) -> Point {
        self.net.point(self.index(i, j))
    }

    /// Weight (i, j); 1 for a polynomial patch.
    #[must_use]
    pub fn weight(&self, i: usize, j: usize) -> f64 {
        self.net.weight(self.index(i, j))
    }

    /// All control points in space, v fastest.
    pub fn control_points(&self) -> impl Iterator<Item = Point> + '_ {
        (0..self.net.len()).map(|i| self.net.point(i))
    }

    /// S(u, v) by de Casteljau's algorithm. The corners come out exactly.
    #[must_use]
    pub fn eval(&self, u: f64, v: f64) -> Point {
        match &self.net {
            Net::Polynomial(net) => Point::from(self.value(net, u, v)),
            Net::Rational(net) => project(&self.value(net, u, v)),
        }
    }

    /// Whether rows and columns of the net are short.
    fn is_short(&self) -> bool {
        self.degree.0.max(self.degree.1) < casteljau::SHORT
    }

    fn value<const N: usize>(&self, net: &[SVector<f64, N>], u: f64, v: f64) -> SVector<f64, N> {
        if self.degree == (3, 3) {
            Self::bicubic(net, u, v)
        } else if self.is_short() {
            self.value_within::<N, { casteljau::SHORT }>(net, u, v)
        } else {
            self.value_within::<N, { casteljau::LONG }>(net, u, v)
        }
    }

    /// The usual case, with rows of known length.
    fn bicubic<const N: usize>(net: &[SVector<f64, N>], u: f64, v: f64) -> SVector<f64, N> {
        let mut column = [SVector::zeros(); 4];
        for (target, row) in column.iter_mut().zip(net.chunks_exact(4)) {
            *target = casteljau::cubic([row[0], row[1], row[2], row[3]], v);
        }
        casteljau::cubic(column, u)
    }

    fn value_within<const N: usize, const LEN: usize>(
        &self,
        net: &[SVector<f64, N>],
        u: f64,
        v: f64,
    ) -> SVector<f64, N> {
        let (mut column, mut row) = (casteljau::row::<N, LEN>(), casteljau::row::<N, LEN>());
        let stride = self.degree.1 + 1;
        for (target, source) in column.iter_mut().zip(net.chunks_exact(stride)) {
            row[..stride].copy_from_slice(source);
            *target = casteljau::value(&mut row[..stride], v);
        }
        casteljau::value(&mut column[..=self.degree.0], u)
    }

    /// S, S_u, S_v at (u, v): less work than [`BezierPatch::jet`].
    #[must_use]
    pub fn frame(&self, u: f64, v: f64) -> (Point, Vector, Vector) {
        match &self.net {
            Net::Polynomial(net) => {
                let [s, du, dv] = self.slopes(net, u, v);
                (Point::from(s), du, dv)
            }
            Net::Rational(net) => {
                let h = self.slopes(net, u, v);
                let s: Vector = h[0].xyz() / h[0].w;
                let slope = |d: usize| (h[d].xyz() - s * h[d].w) / h[0].w;
                (Point::from(s), slope(1), slope(2))
            }
        }
    }

    fn slopes<const N: usize>(
        &self,
        net: &[SVector<f64, N>],
        u: f64,
        v: f64,
    ) -> [SVector<f64, N>; 3] {
        if self.is_short() {
            self.slopes_within::<N, { casteljau::SHORT }>(net, u, v)
        } else {
            self.slopes_within::<N, { casteljau::LONG }>(net, u, v)
        }
    }

    fn slopes_within<const N: usize, const LEN: usize>(
        &self,
        net: &[SVector<f64, N>],
        u: f64,
        v: f64,
    ) -> [SVector<f64, N>; 3] {
        let mut columns = [casteljau::row::<N, LEN>(); 2];
        let mut row = casteljau::row::<N, LEN>();
        let stride = self.degree.1 + 1;
        for (i, source) in net.chunks_exact(stride).enumerate() {
            row[..stride].copy_from_slice(source);
            [columns[0][i], columns[1][i]] = casteljau::value_and_slope(&mut row[..stride], v);
        }
        let count = self.degree.0 + 1;
        let [s, du] = casteljau::value_and_slope(&mut columns[0][..count], u);
        let dv = casteljau::value(&mut columns[1][..count], u);
        [s, du, dv]
    }

    /// S, S_u, S_v, S_uu, S_uv, S_vv at (u, v).
    #[must_use]
    pub fn jet(&self, u: f64, v: f64) -> SurfaceJet {
        match &self.net {
            Net::Polynomial(net) => {
                let [s, du, dv, duu, duv, dvv] = self.derivatives(net, u, v);
                SurfaceJet {
                    point: Point::from(s),
                    du,
                    dv,
                    duu,
                    duv,
                    dvv,
                }
            }
            Net::Rational(net) => {
                // Quotient rule for S = N / w, in both parameters.
                let h = self.derivatives(net, u, v);
                let w = h[0].w;
                let s: Vector = h[0].xyz() / w;
                let du = (h[1].xyz() - s * h[1].w) / w;
                let dv = (h[2].xyz() - s * h[2].w) / w;
                let duu = (h[3].xyz() - du * (2.0 * h[1].w) - s * h[3].w) / w;
                let duv = (h[4].xyz() - du * h[2].w - dv * h[1].w - s * h[4].w) / w;
                let dvv = (h[5].xyz() - dv * (2.0 * h[2].w) - s * h[5].w) / w;
                SurfaceJet {
                    point: Point::from(s),
                    du,
                    dv,
                    duu,
                    duv,
                    dvv,
                }
            }
        }
    }

    fn derivatives<const N: usize>(
        &self,
        net: &[SVector<f64, N>],
        u: f64,
        v: f64,
    ) -> [SVector<f64, N>; 6] {
        if self.is_short() {
            self.derivatives_within::<N, { casteljau::SHORT }>(net, u, v)
        } else {
            self.derivatives_within::<N, { casteljau::LONG }>(net, u, v)
        }
    }

    fn derivatives_within<const N: usize, const LEN: usize>(
        &self,
        net: &[SVector<f64, N>],
        u: f64,
        v: f64,
    ) -> [SVector<f64, N>; 6] {
        let mut columns = [casteljau::row::<N, LEN>(); 3];
        let mut row = casteljau::row::<N, LEN>();
        let stride = self.degree.1 + 1;
        for (i, source) in net.chunks_exact(stride).enumerate() {
            row[..stride].copy_from_slice(source);
            let along_v = casteljau::value_and_derivatives(&mut row[..stride], v);
            for (column, value) in columns.iter_mut().zip(along_v) {
                column[i] = value;
            }
        }
        let count = self.degree.0 + 1;
        let [s, du, duu] = casteljau::value_and_derivatives(&mut columns[0][..count], u);
        let [dv, duv, _] = casteljau::value_and_derivatives(&mut columns[1][..count], u);
        let dvv = casteljau::value(&mut columns[2][..count], u);
        [s, du, dv, duu, duv, dvv]
    }

    /// The unit normal along S_u x S_v. At a collapsed edge it is the limit
    /// (V0: S_uv x S_v; V1: S_v x S_uv; U0: S_u x S_uv; U1: S_uv x S_u); where
    /// that vanishes too it is the normal a little further inside. `None` only
    /// if no normal is found there either.
    #[must_use]
    pub fn normal(&self, u: f64, v: f64) -> Option<Vector> {
        let jet = self.jet(u, v);
        if let Some(normal) = jet.normal() {
            return Some(normal);
        }
        let (a, b) = (jet.du.norm(), jet.dv.norm());
        let limit = if a < b {
            // S_u vanishes: the edge v = 0 or v = 1 is collapsed.
            let inward = if v < 0.5 { 1.0 } else { -1.0 };
            jet.duv.cross(&jet.dv) * inward
        } else {
            let inward = if u < 0.5 { 1.0 } else { -1.0 };
            jet.du.cross(&jet.duv) * inward
        };
        let scale = jet.duv.norm() * a.max(b);
        let collapsed = a.min(b) <= 1e-9 * a.max(b);
        if collapsed && limit.norm() > scale * 1e-9 && scale > 0.0 {
            return Some(limit.normalize());
        }
        [1e-6, 1e-5, 1e-4, 1e-3, 1e-2].iter().find_map(|step| {
            self.jet(u + (0.5 - u) * step, v + (0.5 - v) * step)
                .normal()
        })
    }

    /// One of the four boundary curves, run with the free parameter.
    #[must_use]
    pub fn edge(&self, side: Side) -> BezierCurve {
        let (m, n) = self.degree;
        let net = match side {
            Side::U0 => self.net.pick(0..=n),
            Side::U1 => self.net.pick((0..=n).map(|j| self.index(m, j))),
            Side::V0 => self.net.pick((0..=m).map(|i| self.index(i, 0))),
            Side::V1 => self.net.pick((0..=m).map(|i| self.index(i, n))),
        };
        BezierCurve::from_net(net)
    }

    /// The same surface with u and v exchanged (the normal turns over).
    #[must_use]
    pub fn transposed(&self) -> Self {
        let (m, n) = self.degree;
        let order = (0..=n).flat_map(|j| (0..=m).map(move |i| i * (n + 1) + j));
        Self {
            degree: (n, m),
            net: self.net.pick(order),
        }
    }

    /// The part over [u0, u1] x [v0, v1] as a patch of its own; exchanged
    /// limits reverse the parameter.
    #[must_use]
    pub fn restrict(&self, u: [f64; 2], v: [f64; 2]) -> Self {
        let net = match &self.net {
            Net::Polynomial(net) => Net::Polynomial(self.restricted(net, u, v)),
            Net::Rational(net) => Net::Rational(self.restricted(net, u, v)),
        };
        Self {
            degree: self.degree,
            net,
        }
    }

    fn restricted<const N: usize>(
        &self,
        net: &[SVector<f64, N>],
        u: [f64; 2],
        v: [f64; 2],
    ) -> Vec<SVector<f64, N>> {
        let stride = self.degree.1 + 1;
        let mut net = net.to_vec();
        for row in net.chunks_exact_mut(stride) {
            casteljau::restrict(row, v[0], v[1]);
        }
        let mut column = Vec::with_capacity(self.degree.0 + 1);
        for j in 0..stride {
            column.clear();
            column.extend((0..=self.degree.0).map(|i| net[i * stride + j]));
            casteljau::restrict(&mut column, u[0], u[1]);
            for (i, value) in column.iter().enumerate() {
                net[i * stride + j] = *value;
            }
        }
        net
    }

    /// Restricts the patch to a triangle of parameters: a triangular Bezier
    /// net of degree degree_u + degree_v, written into `into`.
    ///
    /// Points are given relative to `origin`, which keeps far-away geometry
    /// sharp.
    pub fn restrict_triangle(
        &self,
        corners: [[f64; 2]; 3],
        origin: &Point,
        restriction: &mut TriangleRestriction,
        into: &mut TriangleNet,
    ) {
        match &self.net {
            Net::Polynomial(net) => {
                restriction.polynomial(self.degree, net, corners, origin, into);
            }
            Net::Rational(net) => restriction.rational(self.degree, net, corners, origin, into),
        }
    }

    /// The patch moved by a map that must be affine.
    #[must_use]
    pub fn map(&self, affine: impl Fn(Point) -> Point) -> Self {
        Self {
            degree: self.degree,
            net: self.net.map(affine),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;

    fn farin() -> BezierPatch {
        let z = [[0.0, 0.0, 0.0], [0.0, 0.0, 2.0], [0.0, 4.0, 4.0]];
        let xy = [0.0, 2.0, 4.0];
        let points = (0..9).map(|k| Point::new(xy[k / 3], xy[k % 3], z[k / 3][k % 3]));
        BezierPatch::new((2, 2), points.collect(), None).unwrap()
    }

    /// Farin, *Curves and Surfaces for CAGD*, ch. 14, from memory; arithmetic
    /// rechecked: the biquadratic with these heights passes (2, 2, 1).
    #[test]
    fn farin_worked_example() {
        assert_relative_eq!(farin().eval(0.5, 0.5), Point::new(2.0, 2.0, 1.0));
    }

    pub(crate) fn octant() -> BezierPatch {
        let s = 0.5_f64.sqrt();
        let homogeneous = [
            [[0.0, 0.0, -1.0, 1.0], [s, 0.0, -s, s], [1.0, 0.0, 0.0, 1.0]],
            [[0.0, 0.0, -s, s], [0.5, 0.5, -0.5, 0.5], [s, s, 0.0, s]],
            [[0.0, 0.0, -1.0, 1.0], [0.0, s, -s, s], [0.0, 1.0, 0.0, 1.0]],
        ];
        let flat = homogeneous.as_flattened();
        let points = flat
            .iter()
            .map(|h| Point::new(h[0] / h[3], h[1] / h[3], h[2] / h[3]));
        let weights = flat.iter().map(|h| h[3]).collect();
        BezierPatch::new((2, 2), points.collect(), Some(weights)).unwrap()
    }

    /// The sphere octant as one rational biquadratic (a surface of revolution;
    /// standard, Farin, from memory; figures computed).
    #[test]
    fn sphere_octant_is_a_sphere() {
        let patch = octant();
        let s = 0.5_f64.sqrt();
        assert_relative_eq!(
            patch.eval(0.5, 0.5),
            Point::new(0.5, 0.5, -s),
            epsilon = 1e-15
        );
        for k in 0..=20 {
            for l in 0..=20 {
                let (u, v) = (f64::from(k) / 20.0, f64::from(l) / 20.0);
                let point = patch.eval(u, v);
                assert!((point.coords.norm() - 1.0).abs() < 4.5e-16);
                let normal = patch.normal(u, v).unwrap();
                assert_relative_eq!(normal.dot(&point.coords).abs(), 1.0, epsilon = 1e-12);
            }
        }
        let jet = patch.jet(0.3, 0.6);
        let (gaussian, mean) = jet.gaussian_and_mean().unwrap();
        assert_relative_eq!(gaussian, 1.0, epsilon = 1e-12);
        assert_relative_eq!(mean.abs(), 1.0, epsilon = 1e-12);
    }

    /// A pole whose control points agree to rounding only has its limit normal
    /// too, not a direction made of rounding.
    #[test]
    fn a_pole_moved_by_rounding_has_its_limit_normal() {
        let turn = nalgebra::Rotation3::from_euler_angles(0.3, 0.7, 1.1);
        let centre = Point::new(120.3, -40.7, 77.1);
        let patch = octant().map(|p| centre + turn * p.coords * 500.0);
        for k in 0..=10 {
            let u = f64::from(k) / 10.0;
            let radial = (patch.eval(u, 0.0) - centre).normalize();
            let normal = patch.normal(u, 0.0).unwrap();
            assert_relative_eq!(normal.dot(&radial).abs(), 1.0, epsilon = 1e-9);
        }
    }

    #[test]
    fn derivatives_match_differences() {
        let patch = octant();
        let (u, v, h) = (0.4, 0.7, 1e-5);
        let jet = patch.jet(u, v);
        let (east, west) = (patch.jet(u + h, v), patch.jet(u - h, v));
        let (north, south) = (patch.jet(u, v + h), patch.jet(u, v - h));
        let step = 2.0 * h;
        assert_relative_eq!(jet.du, (east.point - west.point) / step, epsilon = 1e-8);
        assert_relative_eq!(jet.dv, (north.point - south.point) / step, epsilon = 1e-8);
        assert_relative_eq!(jet.duu, (east.du - west.du) / step, epsilon = 1e-8);
        assert_relative_eq!(jet.duv, (east.dv - west.dv) / step, epsilon = 1e-8);
        assert_relative_eq!(jet.dvv, (north.dv - south.dv) / step, epsilon = 1e-8);
    }

    #[test]
    fn restriction_and_transposition_are_the_same_surface() {
        let patch = octant();
        let part = patch.restrict([0.2, 0.6], [0.9, 0.1]);
        assert_relative_eq!(part.eval(0.5, 0.25), patch.eval(0.4, 0.7), epsilon = 1e-14);
        assert_relative_eq!(
            patch.transposed().eval(0.7, 0.4),
            patch.eval(0.4, 0.7),
            epsilon = 1e-15
        );
        for side in Side::ALL {
            let [u, v] = side.at(0.3);
            assert_relative_eq!(
                patch.edge(side).eval(0.3),
                patch.eval(u, v),
                epsilon = 1e-15
            );
        }
    }
}
