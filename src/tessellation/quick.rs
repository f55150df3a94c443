//! Quick bounds of a triangle on a piece without weights.
//!
//! The bound is that of `interpolation` from second derivatives alone: they are
//! taken in the middle of the triangle's box l1 x l2, and how far they change
//! from there is bounded for the whole piece by the nets of the third,
//!
//! ```text
//! dA <= (max |S_uuu| l1 + max |S_uuv| l2) / 2,   and so on,
//! ```
//!
//! for heights in the direction of the normal: |n . T| <= |m . T| + |n - m| |T|,
//! m one direction for the piece.

use super::certificate::THIN;
use super::fill::Proved;
use super::grid::Grid;
use super::nets::Nets;
use super::quadratic::Quadratic;
use crate::bezier::BezierPatch;
use crate::sampling::ratio;
use crate::scalar::{Point, Vector};

/// Covers the roundings of a root and of the few products before it.
pub(super) const ROUNDED_UP: f64 = 1.0 + 16.0 * f64::EPSILON;

/// Second derivatives on a grid, and bounds on what the grid does not say.
#[derive(Debug)]
pub(super) struct Quick {
    /// S_uu, S_uv, S_vv.
    grid: Grid<[Vector; 3]>,
    /// How far each may be from bilinear between nodes.
    off: [f64; 3],
    /// Largest third derivatives uuu, uuv, uvv, vvv, and the same along `normal`.
    third: [f64; 4],
    third_along: [f64; 4],
    /// About the piece's normal.
    pub(super) normal: Vector,
}

/// Bounds of one triangle.
#[derive(Debug, Clone, Copy)]
pub(super) struct Bound {
    pub(super) normal: Vector,
    pub(super) height: f64,
    pub(super) sideways: f64,
    pub(super) edges: f64,
    /// What second derivatives in the middle do not say, in any direction.
    pub(super) rest: f64,
    /// Square of the smallest altitude.
    pub(super) altitude_squared: f64,
}

impl Bound {
    /// Of a triangle without a trustworthy normal.
    const NONE: Self = Self {
        normal: Vector::new(0.0, 0.0, 0.0),
        height: f64::INFINITY,
        sideways: f64::INFINITY,
        edges: f64::INFINITY,
        rest: f64::INFINITY,
        altitude_squared: 0.0,
    };

    /// The figures without a look at the ring.
    pub(super) fn alone(&self) -> Proved {
        let direct = (self.height * self.height + self.sideways * self.sideways).sqrt();
        Proved {
            to_mesh: direct * ROUNDED_UP,
            to_surface: self.height.max(self.edges),
        }
    }

    /// What a ring that tilts by `tan` at most makes of it.
    pub(super) fn ringed(&self, tan: f64) -> f64 {
        (self.height + (2.0 * self.sideways + self.height * tan) * tan) * ROUNDED_UP
    }
}

impl Quick {
    /// `None` for pieces with weights.
    pub(super) fn new(surface: &BezierPatch, nets: &Nets) -> Option<Self> {
        if surface.is_rational() {
            return None;
        }
        let width = ratio(1, nets.cells);
        let largest = |i: usize, j: usize| nets.derived(i, j).largest(0.0);
        let (m, n) = surface.degree();
        let corner = |i, j| surface.control_point(i, j);
        let normal = (corner(m, n) - corner(0, 0))
            .cross(&(corner(0, n) - corner(m, 0)))
            .try_normalize(0.0)
            .unwrap_or_else(Vector::zeros);
        let along = |i: usize, j: usize| {
            let values = nets.derived(i, j).values().iter();
            values
                .map(|x| x.xyz().dot(&normal).abs())
                .fold(0.0, f64::max)
        };
        let [uu, uv, vv] = [[2, 0], [1, 1], [0, 2]].map(|[i, j]| nets.grid(nets.derived(i, j)));
        let nodes = (0..uu.len()).map(|k| [uu[k].xyz(), uv[k].xyz(), vv[k].xyz()]);
        Some(Self {
            grid: Grid::new(nets.cells, nodes.collect()),
            off: [[2, 0], [1, 1], [0, 2]]
                .map(|[i, j]| (largest(i + 2, j) + largest(i, j + 2)) * width * width / 8.0),
            third: [0, 1, 2, 3].map(|k| largest(3 - k, k)),
            third_along: [0, 1, 2, 3].map(|k| along(3 - k, k)),
            normal,
        })
    }

    /// Second derivatives along the edges of a triangle, from its middle.
    pub(super) fn bends(&self, places: [[f64; 2]; 3]) -> [Vector; 3] {
        let second = self.at(middle(places).0);
        [0, 1, 2].map(|k| {
            let (x, y) = (places[k], places[(k + 1) % 3]);
            let (du, dv) = (y[0] - x[0], y[1] - x[1]);
            second[0] * (du * du) + second[1] * (2.0 * du * dv) + second[2] * (dv * dv)
        })
    }

    /// Barycentric place where the height of a triangle is about largest.
    pub(super) fn peak(&self, places: [[f64; 2]; 3], normal: &Vector) -> [f64; 3] {
        let square = self.bends(places).map(|bend| bend.dot(normal));
        Quadratic::largest_error(square).1
    }

    /// The bounds of one triangle, with `more` added to each.
    pub(super) fn bound(&self, places: [[f64; 2]; 3], points: [Point; 3], more: f64) -> Bound {
        let [a, b, c] = points;
        let sides = [b - a, c - b, a - c];
        let cross = sides[0].cross(&sides[1]);
        let lengths = sides.map(|side| side.norm_squared());
        let longest = larger(lengths[0], larger(lengths[1], lengths[2]));
        let area_squared = cross.norm_squared();
        let area = area_squared.sqrt();
        if area <= THIN * longest || longest <= 0.0 {
            return Bound::NONE;
        }
        let normal = cross / area;
        let (place, [l1, l2]) = middle(places);
        let second = self.at(place);
        let form = second.map(|d| d.dot(&normal));
        // |n - m| for unit vectors, whichever way m points.
        let turned = larger(2.0 - 2.0 * normal.dot(&self.normal).abs(), 0.0).sqrt() + 1e-7;
        let (uu, uv, vv) = (l1 * l1 / 8.0, l1 * l2 / 4.0, l2 * l2 / 8.0);
        let boxed = |[a, b, c]: [f64; 3]| a * uu + b * uv + c * vv;
        let any = [0, 1, 2].map(|k| (self.third[k] * l1 + self.third[k + 1] * l2) / 2.0);
        let along = [0, 1, 2].map(|k| {
            let along = (self.third_along[k] * l1 + self.third_along[k + 1] * l2) / 2.0;
            lesser(any[k], along + turned * any[k]) + self.off[k]
        });
        let rest_along = boxed(along) * ROUNDED_UP + more;
        let rest = boxed([0, 1, 2].map(|k| any[k] + self.off[k])) * ROUNDED_UP + more;
        let mut square = [0.0; 3];
        let (mut sideways, mut edges) = (0.0_f64, 0.0_f64);
        for k in 0..3 {
            let (x, y) = (places[k], places[(k + 1) % 3]);
            let (du, dv) = (y[0] - x[0], y[1] - x[1]);
            let (uu, uv, vv) = (du * du, 2.0 * du * dv, dv * dv);
            square[k] = form[0] * uu + form[1] * uv + form[2] * vv;
            let bend = second[0] * uu + second[1] * uv + second[2] * vv;
            let aside = (bend - normal * square[k]).norm_squared();
            sideways = larger(sideways, aside);
            edges = larger(edges, aside + square[k] * square[k]);
        }
        Bound {
            normal,
            height: Quadratic::largest_error(square).0 * ROUNDED_UP + rest_along,
            sideways: sideways.sqrt() / 6.0 * ROUNDED_UP + rest,
            edges: edges.sqrt() / 8.0 * ROUNDED_UP + rest,
            rest,
            altitude_squared: area_squared / longest,
        }
    }

    /// Second derivatives at a place by the grid.
    fn at(&self, place: [f64; 2]) -> [Vector; 3] {
        let ([a, b, c, d], weights) = self.grid.around(place);
        [0, 1, 2]
            .map(|k| a[k] * weights[0] + b[k] * weights[1] + c[k] * weights[2] + d[k] * weights[3])
    }
}

/// Of two numbers that are not NaN; a single instruction each.
pub(super) fn larger(a: f64, b: f64) -> f64 {
    if a > b { a } else { b }
}

pub(super) fn lesser(a: f64, b: f64) -> f64 {
    if a < b { a } else { b }
}

/// The middle of a triangle's box, and the box's sides.
fn middle(places: [[f64; 2]; 3]) -> ([f64; 2], [f64; 2]) {
    let [a, b, c] = places;
    let low = [0, 1].map(|x| lesser(a[x], lesser(b[x], c[x])));
    let sides = [0, 1].map(|x| larger(a[x], larger(b[x], c[x])) - low[x]);
    ([0, 1].map(|x| low[x] + sides[x] / 2.0), sides)
}

#[cfg(test)]
mod tests {
    use super::super::random::random;
    use super::*;

    /// No sample of the surface may lie outside what was proved, for triangles
    /// of all sizes and places.
    #[test]
    fn samples_never_exceed_the_bounds() {
        let mut seed = 11_u64;
        for round in 0..400 {
            let (m, n) = (1 + round % 5, 1 + round / 5 % 4);
            let rise = [0.3, 1e-3, 3.0][round % 3];
            let points = (0..(m + 1) * (n + 1)).map(|k| {
                let (x, y) = (ratio(k / (n + 1), m), ratio(k % (n + 1), n));
                let [x, y] = [x, y].map(|t| t + 0.2 * random(&mut seed));
                Point::new(x, y, rise * random(&mut seed))
            });
            let surface = BezierPatch::new((m, n), points.collect(), None).unwrap();
            let quick = Quick::new(&surface, &Nets::new(&surface)).unwrap();
            let size = [0.02, 0.1, 0.4, 0.8][round / 7 % 4];
            let start = [0, 1].map(|_| random(&mut seed) * (1.0 - size));
            let places = [0, 1, 2].map(|_| start.map(|x| x + size * random(&mut seed)));
            let corners = places.map(|[u, v]| surface.eval(u, v));
            let bound = quick.bound(places, corners, 1e-14);
            for _ in 0..300 {
                let (mut a, mut b) = (random(&mut seed), random(&mut seed));
                if a + b > 1.0 {
                    (a, b) = (1.0 - a, 1.0 - b);
                }
                let l = [1.0 - a - b, a, b];
                let at = |axis: usize| (0..3).map(|c| l[c] * places[c][axis]).sum::<f64>();
                let from = surface.eval(at(0), at(1)) - corners[0];
                let height = from.dot(&bound.normal).abs();
                assert!(height <= bound.height, "{round}: {bound:?}");
                let edge = [0, 1].map(|x| places[0][x] * (1.0 - a) + places[1][x] * a);
                let on_edge = surface.eval(edge[0], edge[1]) - corners[0];
                let chord = corners[1] - corners[0];
                let along = (on_edge.dot(&chord) / chord.norm_squared()).clamp(0.0, 1.0);
                assert!((on_edge - chord * along).norm() <= bound.edges, "{round}");
                let beyond = (0..3).map(|k| {
                    let [p, q] = [corners[k], corners[(k + 1) % 3]];
                    let outward = (q - p).cross(&bound.normal).normalize();
                    (from - (p - corners[0])).dot(&outward)
                });
                assert!(beyond.fold(0.0, f64::max) <= bound.sideways, "{round}");
            }
        }
    }

    /// On a bent panel the bound of a small triangle is 1 to 1.1 of the largest of
    /// many samples.
    #[test]
    fn bounds_of_small_triangles_are_close() {
        let points = (0..16).map(|k| {
            let (x, y) = (ratio(k / 4, 3), ratio(k % 4, 3));
            let z = -0.04 * x * x - 0.03 * y * y + 0.004 * (2.0 * x + y).sin();
            Point::new(x, y, z)
        });
        let surface = BezierPatch::new((3, 3), points.collect(), None).unwrap();
        let quick = Quick::new(&surface, &Nets::new(&surface)).unwrap();
        for k in 0..10 {
            let (u, v) = (ratio(k, 11), ratio(3 * k % 10, 11));
            let places = [[u, v], [u + 0.08, v], [u + 0.03, v + 0.07]];
            let corners = places.map(|[u, v]| surface.eval(u, v));
            let bound = quick.bound(places, corners, 0.0);
            let mut highest = 0.0_f64;
            for i in 0..=40 {
                for j in 0..=40 - i {
                    let (a, b) = (ratio(i, 40), ratio(j, 40));
                    let l = [1.0 - a - b, a, b];
                    let at = |axis: usize| (0..3).map(|c| l[c] * places[c][axis]).sum::<f64>();
                    let from = surface.eval(at(0), at(1)) - corners[0];
                    highest = highest.max(from.dot(&bound.normal).abs());
                }
            }
            assert!(highest <= bound.height && bound.height <= 1.1 * highest);
        }
    }
}
