//! The error of linear interpolation, from the ranges of second derivatives:
//! a proof for one triangle that needs no net.
//!
//! Let f be a polynomial on a parameter triangle with edges d_k inside a box
//! l1 x l2. Take its Taylor polynomial of degree 3 at the middle of the box; its
//! second derivatives then stay within dA, dB, dC of that cubic's. So f differs
//! from the linear interpolant of its corner values by at most
//!
//! ```text
//! max |q(d_0, d_1, d_2)| + max |c_I| + (dA l1^2 + 2 dB l1 l2 + dC l2^2) / 8.
//! ```
//!
//! q is the error for the constant second derivatives of the middle; its
//! largest value has a closed form (`Quadratic`), and keeping their signs is
//! what makes the bound tight. c_I are the Bernstein coefficients of the error
//! for the third derivatives alone: with a and b what these make of f_dd at the
//! ends of an edge, -(2 a + b) / 18 and -(a + 2 b) / 18 on it, and in the middle
//! the sum of the two beside a corner plus f_de / 6 there, d and e the edges
//! from it. The last part is the bound of Filip, Magedson and Markot (1986).
//!
//! With S = N / w and a corner s of the triangle, f runs over
//! n . (N - w s) for the heights and over the vector N - w s for the rest: the
//! first vanishes at the corners as S does in the triangle's plane. For the
//! rest let P = I(w S) / I w, I the linear interpolant: a weighted mean of the
//! corners, which covers the flat triangle once, and
//!
//! ```text
//! w (S - P) = (g - I g) - (w - I w) (P - s),   g = N - w s.
//! ```
//!
//! Everything is divided by the least weight in the triangle.
//!
//! The derivatives are read from a grid, bilinear between its nodes: off by at
//! most (g_u^2 max |f_uu| + g_v^2 max |f_vv|) / 8 of a derivative's own second
//! derivatives, which their nets bound, as they bound the fourth derivatives in
//! the remainder.
//!
//! A vertex that does not lie on the piece (a seam joined over a gap) adds its
//! distance to every figure.

use super::certificate::{Cell, Flat};
use super::grid::Grid;
use super::nets::{Homogeneous, Net, Nets};
use super::quadratic::Quadratic;
use super::quick::ROUNDED_UP;
use crate::bezier::BezierPatch;
use crate::sampling::ratio;
use crate::scalar::Point;

/// Orders along u and v of the derivatives in the grid.
const ORDERS: [[usize; 2]; 7] = [[2, 0], [1, 1], [0, 2], [3, 0], [2, 1], [1, 2], [0, 3]];

/// Second and third derivatives of a piece as homogeneous vectors (N, w), N taken from
/// `origin`.
#[derive(Debug)]
pub(super) struct SecondDerivatives {
    origin: Point,
    /// No corner of a triangle may be farther from the origin.
    reach: f64,
    /// uu, uv, vv, uuu, uuv, uvv, vvv.
    grid: Grid<[Homogeneous; 7]>,
    /// How far each may be from bilinear.
    off: [f64; 7],
    /// Bounds of the fourth derivatives uuuu, uuuv, uuvv, uvvv, vvvv.
    fourth: [f64; 5],
    /// The net of weights, where there are any.
    weights: Option<Net>,
}

impl SecondDerivatives {
    pub(super) fn new(surface: &BezierPatch, nets: &Nets) -> Self {
        let reach = reach(surface, &nets.origin);
        let width = ratio(1, nets.cells);
        let largest = |i: usize, j: usize| nets.derived(i, j).largest(reach);
        let off =
            ORDERS.map(|[i, j]| (largest(i + 2, j) + largest(i, j + 2)) * width * width / 8.0);
        let grids = ORDERS.map(|[i, j]| nets.grid(nets.derived(i, j)));
        let nodes = (0..grids[0].len()).map(|node| [0, 1, 2, 3, 4, 5, 6].map(|k| grids[k][node]));
        Self {
            origin: nets.origin,
            reach,
            grid: Grid::new(nets.cells, nodes.collect()),
            off,
            fourth: [0, 1, 2, 3, 4].map(|k| largest(4 - k, k)),
            weights: surface.is_rational().then(|| nets.itself().clone()),
        }
    }

    /// The weight of the piece at a place: 1 where there are none.
    pub(super) fn weight(&self, place: [f64; 2]) -> f64 {
        self.weights.as_ref().map_or(1.0, |net| net.at(place).w)
    }

    /// Bounds a cell against a target whose corners stand at `places`, as
    /// `Prover::cell` does: with corners off the piece by `off` at most, and
    /// `slack` for rounding. `None` where this proof does not apply.
    pub(super) fn cell(
        &self,
        places: [[f64; 2]; 3],
        weights: [f64; 3],
        target: &Flat,
        off: f64,
        slack: f64,
    ) -> Option<Cell> {
        let normal = target.normal?;
        let s = target.corners[0] - self.origin;
        if s.norm() > self.reach {
            return None;
        }
        let low = [0, 1].map(|x| places[0][x].min(places[1][x]).min(places[2][x]));
        let high = [0, 1].map(|x| places[0][x].max(places[1][x]).max(places[2][x]));
        let [l1, l2] = [high[0] - low[0], high[1] - low[1]];
        let middle = [low[0] + l1 / 2.0, low[1] + l2 / 2.0];
        let derivatives = self.at(middle);
        let vectors = derivatives.map(|x| x.xyz() - s * x.w);
        let boxed = |[a, b, c]: [f64; 3]| (a * l1 * l1 + 2.0 * b * l1 * l2 + c * l2 * l2) / 8.0;
        let beyond = [0, 1, 2].map(|k| {
            let [f, g, h] = [self.fourth[k], self.fourth[k + 1], self.fourth[k + 2]];
            self.off[k]
                + (self.off[k + 3] * l1 + self.off[k + 4] * l2) / 2.0
                + (f * l1 * l1 + 2.0 * g * l1 * l2 + h * l2 * l2) / 8.0
        });
        let turn =
            |k: usize, size: &dyn Fn(usize) -> f64| (size(k + 3) * l1 + size(k + 4) * l2) / 2.0;
        let third = [3, 4, 5, 6].map(|k| vectors[k].dot(&normal));
        let rest = boxed(beyond) + third_part(third, places, middle);
        let length = |k: usize| vectors[k].norm();
        let rest_any = boxed([0, 1, 2].map(|k| turn(k, &length) + beyond[k]));
        let mut least = 1.0;
        let mut bent = 0.0;
        if self.weights.is_some() {
            let [a, b, c] = weights;
            let weight = |k: usize| derivatives[k].w.abs();
            // `beyond` measures weights as lengths at the reach.
            let rate = |k: usize| weight(k) + turn(k, &weight) + beyond[k] / self.reach;
            bent = boxed([0, 1, 2].map(rate));
            least = a.min(b).min(c) - bent;
            if least <= 0.0 {
                return None;
            }
        }
        let mut square = [0.0; 3];
        let mut edges = [0.0; 3];
        let (mut sideways, mut longest) = (0.0_f64, 0.0_f64);
        for k in 0..3 {
            let next = (k + 1) % 3;
            let (du, dv) = (
                places[next][0] - places[k][0],
                places[next][1] - places[k][1],
            );
            let bend =
                vectors[0] * (du * du) + vectors[1] * (2.0 * du * dv) + vectors[2] * (dv * dv);
            let along = target.corners[next] - target.corners[k];
            let length = along.norm();
            longest = longest.max(length);
            square[k] = bend.dot(&normal);
            sideways = sideways.max((bend - normal * square[k]).norm_squared());
            // Without weights and with an even enough parameter the curve runs
            // past neither end of its chord: only its distance across counts.
            let onward = bend.dot(&along) / length;
            let even = onward.abs() + 8.0 * rest_any <= 2.0 * length;
            edges[k] = if self.weights.is_none() && even {
                (bend - along * (onward / length)).norm() / 8.0
            } else {
                bend.norm() / 8.0
            };
        }
        let (likely, peak) = Quadratic::largest_error(square);
        let most = weights[0].max(weights[1]).max(weights[2]).max(least);
        let grow = off * most / least + slack;
        let height = (likely + rest) / least + grow;
        let sideways = (sideways.sqrt() / 6.0 + rest_any + bent * longest) / least + grow;
        Some(Cell {
            height,
            sideways,
            direct: (height * height + sideways * sideways).sqrt() * ROUNDED_UP,
            edges: edges.map(|edge| (edge + rest_any + bent * longest) / least + grow),
            likely: likely / least,
            peak,
        })
    }

    /// The derivatives at a place by the grid.
    fn at(&self, place: [f64; 2]) -> [Homogeneous; 7] {
        let ([a, b, c, d], weights) = self.grid.around(place);
        [0, 1, 2, 3, 4, 5, 6]
            .map(|k| a[k] * weights[0] + b[k] * weights[1] + c[k] * weights[2] + d[k] * weights[3])
    }
}

/// How far from the origin a corner may be: the net's own extent, and a little
/// more, because vertices of joined seams may lie outside it.
pub(super) fn reach(surface: &BezierPatch, origin: &Point) -> f64 {
    let far = surface.control_points().map(|p| (p - origin).norm());
    1.25 * far.fold(0.0, f64::max)
}

/// The largest Bernstein coefficient of the error of linear interpolation for
/// the third derivatives `t` alone, the second ones vanishing at `middle`.
fn third_part(t: [f64; 4], places: [[f64; 2]; 3], middle: [f64; 2]) -> f64 {
    let apply = |[xu, xv]: [f64; 2], [yu, yv]: [f64; 2], [zu, zv]: [f64; 2]| {
        let [uu, uv, vv] = [
            t[0] * xu + t[1] * xv,
            t[1] * xu + t[2] * xv,
            t[2] * xu + t[3] * xv,
        ];
        uu * yu * zu + uv * (yu * zv + yv * zu) + vv * yv * zv
    };
    let between = |a: [f64; 2], b: [f64; 2]| [b[0] - a[0], b[1] - a[1]];
    let from = places.map(|p| between(middle, p));
    let mut largest = 0.0_f64;
    let mut beside = [0.0; 2];
    for k in 0..3 {
        let next = (k + 1) % 3;
        let edge = between(places[k], places[next]);
        let (a, b) = (apply(from[k], edge, edge), apply(from[next], edge, edge));
        let (start, end) = (-(2.0 * a + b) / 18.0, -(a + 2.0 * b) / 18.0);
        largest = largest.max(start.abs()).max(end.abs());
        match k {
            0 => beside[0] = start,
            2 => beside[1] = end,
            _ => {}
        }
    }
    let mixed = apply(
        from[0],
        between(places[0], places[1]),
        between(places[0], places[2]),
    );
    largest.max((mixed / 6.0 + beside[0] + beside[1]).abs())
}

#[cfg(test)]
mod tests {
    use super::super::certificate::Prover;
    use super::super::random::random;
    use super::*;

    fn patch(round: usize, seed: &mut u64) -> BezierPatch {
        let scale = [1.0, 1e-6, 1e6][round / 11 % 3];
        let (m, n) = (1 + round % 5, 1 + round / 5 % 4);
        let height = [0.3, 1e-3, 3.0][round % 3];
        let points = (0..(m + 1) * (n + 1)).map(|k| {
            let (x, y) = (ratio(k / (n + 1), m), ratio(k % (n + 1), n));
            let [x, y] = [x, y].map(|t| t + 0.2 * random(seed));
            Point::new(x, y, height * random(seed)) * scale
        });
        let points = points.collect();
        let weights = round
            .is_multiple_of(2)
            .then(|| (0..(m + 1) * (n + 1)).map(|_| 0.3 + random(seed)).collect());
        BezierPatch::new((m, n), points, weights).unwrap()
    }

    /// No sample of the surface may lie outside what was proved, for triangles
    /// of all sizes and places; nor may the bound by nets, which shares nothing
    /// with this one, be far above it for small ones.
    #[test]
    fn samples_never_exceed_the_bounds() {
        let mut seed = 3_u64;
        let mut bounded = 0;
        for round in 0..600 {
            let surface = patch(round, &mut seed);
            let derivatives = SecondDerivatives::new(&surface, &Nets::new(&surface));
            let size = [0.02, 0.1, 0.4, 0.8][round / 7 % 4];
            let start = [0, 1].map(|_| random(&mut seed) * (1.0 - size));
            let places = [0, 1, 2].map(|_| start.map(|x| x + size * random(&mut seed)));
            let flat = Flat::new(places.map(|[u, v]| surface.eval(u, v)));
            let weights = places.map(|place| derivatives.weight(place));
            let slack = Prover::new(&surface).slack();
            let Some(cell) = derivatives.cell(places, weights, &flat, 0.0, slack) else {
                continue;
            };
            bounded += 1;
            let normal = flat.normal.unwrap();
            let by_net = Prover::new(&surface).cell(places, &flat, true);
            assert!(by_net.height <= 1.5 * cell.height + 2.0 * slack || size > 0.3);
            for _ in 0..300 {
                let (mut a, mut b) = (random(&mut seed), random(&mut seed));
                if a + b > 1.0 {
                    (a, b) = (1.0 - a, 1.0 - b);
                }
                let l = [1.0 - a - b, a, b];
                let at = |axis: usize| (0..3).map(|c| l[c] * places[c][axis]).sum::<f64>();
                let from = surface.eval(at(0), at(1)) - flat.corners[0];
                assert!(from.dot(&normal).abs() <= cell.height, "{round}: {cell:?}");
                let edge = [0, 1].map(|x| places[0][x] * (1.0 - a) + places[1][x] * a);
                let on_edge = surface.eval(edge[0], edge[1]) - flat.corners[0];
                let chord = flat.corners[1] - flat.corners[0];
                let along = (on_edge.dot(&chord) / chord.norm_squared()).clamp(0.0, 1.0);
                assert!((on_edge - chord * along).norm() <= cell.edges[0], "{round}");
                let beyond = (0..3).map(|k| {
                    let [p, q] = [flat.corners[k], flat.corners[(k + 1) % 3]];
                    let outward = (q - p).cross(&normal).normalize();
                    (from - (p - flat.corners[0])).dot(&outward)
                });
                assert!(beyond.fold(0.0, f64::max) <= cell.sideways, "{round}");
            }
        }
        assert!(bounded > 300, "{bounded}");
    }

    /// What bounds weights has no unit: the same surface in metres has the same
    /// figures, a thousandth of them.
    #[test]
    fn figures_go_with_the_unit() {
        let mut seed = 5_u64;
        for round in [0, 2, 4, 6, 8] {
            let surface = patch(round, &mut seed);
            let small = surface.map(|p| Point::from(p.coords * 1e-3));
            let places = [[0.2, 0.3], [0.5, 0.35], [0.3, 0.6]];
            let [large, small] = [surface, small].map(|surface| {
                let derivatives = SecondDerivatives::new(&surface, &Nets::new(&surface));
                let flat = Flat::new(places.map(|[u, v]| surface.eval(u, v)));
                let weights = places.map(|place| derivatives.weight(place));
                derivatives.cell(places, weights, &flat, 0.0, 0.0)
            });
            let (large, small) = (large.unwrap(), small.unwrap());
            let same =
                |a: f64, b: f64| approx::assert_relative_eq!(a, 1e3 * b, max_relative = 1e-9);
            same(large.height, small.height);
            same(large.sideways, small.sideways);
            same(large.edges[1], small.edges[1]);
        }
    }

    /// A cubic cylinder z = x^3 on a triangle: the error of the chord from 0 to
    /// 1 is the largest x - x^3, 2 / (3 sqrt 3), by hand; the bound is 3 / 8 from
    /// the second derivative in the middle and 1 / 6 from the third, both taken
    /// across a plane at 45 degrees.
    #[test]
    fn a_cubic_is_bounded_as_by_hand() {
        let points = [0, 1, 2, 3].into_iter().flat_map(|i| {
            let z = if i == 3 { 1.0 } else { 0.0 };
            [0.0, 1.0].map(|y| Point::new(f64::from(i) / 3.0, y, z))
        });
        let surface = BezierPatch::new((3, 1), points.collect(), None).unwrap();
        let derivatives = SecondDerivatives::new(&surface, &Nets::new(&surface));
        let places = [[0.0, 0.0], [1.0, 0.0], [1.0, 1.0]];
        let flat = Flat::new(places.map(|[u, v]| surface.eval(u, v)));
        let cell = derivatives.cell(places, [1.0; 3], &flat, 0.0, 0.0).unwrap();
        let tilted = 0.5_f64.sqrt();
        assert!(cell.height >= 2.0 / 27.0_f64.sqrt() * tilted);
        approx::assert_relative_eq!(
            cell.height,
            (3.0 / 8.0 + 1.0 / 6.0) * tilted,
            max_relative = 1e-12
        );
    }
}
