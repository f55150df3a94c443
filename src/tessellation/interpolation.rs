//! The error of linear interpolation, from the ranges of second derivatives:
//! a proof for one triangle that needs no net.
//!
//! Let f be a polynomial on a parameter triangle with edges d_k inside a box
//! l1 x l2, and its second derivatives stay within dA, dB, dC of H. Then f
//! differs from the linear interpolant of its corner values by at most
//!
//! ```text
//! max |q_H(d_0, d_1, d_2)| + (dA l1^2 + 2 dB l1 l2 + dC l2^2) / 8,
//! ```
//!
//! q_H the error for the constant H, whose largest value has a closed form
//! (`Quadratic`). The second part is the bound of Filip, Magedson and Markot
//! (1986); keeping the sign of H in the first is what makes it tight.
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
//! H is read from a grid, bilinear between its nodes: off by at most
//! (g_u^2 max |f_uu| + g_v^2 max |f_vv|) / 8 of the second derivative's own
//! second derivatives (from their nets), and it changes within a triangle by no
//! more than the differences of neighbouring nodes say. These are kept as their
//! parts along and across the normal m of their cell: for a triangle's normal n
//! they count |n . m| and |n x m|, since most of a third derivative lies in the
//! surface.
//!
//! A vertex that does not lie on the piece (a seam joined over a gap) adds its
//! distance to every figure.

use nalgebra::Vector4;

use super::certificate::{Cell, Flat};
use super::quadratic::Quadratic;
use crate::bezier::BezierPatch;
use crate::sampling::ratio;
use crate::scalar::{Point, Vector};

type Homogeneous = Vector4<f64>;

/// Grid cells in each direction; more where degrees or weights let second
/// derivatives vary.
const CELLS: usize = 6;
const CELLS_FINE: usize = 12;

/// Second derivatives of a piece as homogeneous vectors (N, w), N taken from
/// `origin`.
#[derive(Debug)]
pub(super) struct SecondDerivatives {
    origin: Point,
    /// No corner of a triangle may be farther from the origin.
    reach: f64,
    cells: usize,
    /// uu, uv, vv at the nodes, v fastest.
    nodes: Vec<[Homogeneous; 3]>,
    /// How fast they change: the largest in a cell and its neighbours; the last
    /// entry is for the whole piece.
    growth: Vec<Growth>,
    /// How far each may be from bilinear.
    off: [f64; 3],
    /// The net of weights, where there are any.
    weights: Option<Net>,
}

/// How fast the second derivatives change along u and along v, near a cell.
#[derive(Debug, Clone)]
struct Growth {
    /// Normal and middle of the cell, the middle from the origin.
    normal: Vector,
    middle: Vector,
    /// For uu, uv, vv, along u and along v: the part along the normal, the
    /// part across it, and that of the weight.
    rates: [[[f64; 3]; 2]; 3],
}

impl Growth {
    /// The parts of a difference of nodes.
    fn parts(&self, x: &Homogeneous) -> [f64; 3] {
        let vector = x.xyz() - self.middle * x.w;
        let along = vector.dot(&self.normal);
        let across = (vector.norm_squared() - along * along).max(0.0).sqrt();
        // The root loses half the digits where next to nothing is across.
        [along.abs(), across + 1e-7 * along.abs(), x.w.abs()]
    }

    /// The most by which the three change within l1 / 2 and l2 / 2: of
    /// n . (N - w s), and of the length of N - w s.
    fn spread(&self, normal: &Vector, s: &Vector, [l1, l2]: [f64; 2]) -> [[f64; 2]; 3] {
        let cosine = normal.dot(&self.normal).abs();
        let sine = normal.cross(&self.normal).norm();
        let aside = (s - self.middle).norm();
        self.rates.map(|rate| {
            let [n, t, w] = [0, 1, 2].map(|k| (rate[0][k] * l1 + rate[1][k] * l2) / 2.0);
            [n * cosine + t * sine + w * aside, n + t + w * aside]
        })
    }
}

/// A net of homogeneous control values, v fastest.
#[derive(Debug, Clone)]
struct Net {
    degree: [usize; 2],
    values: Vec<Homogeneous>,
}

impl Net {
    /// The derivative along one parameter; zero where the degree is.
    fn derivative(&self, axis: usize) -> Self {
        let [m, n] = self.degree;
        if self.degree[axis] == 0 {
            let mut zero = self.clone();
            zero.values.fill(Homogeneous::zeros());
            return zero;
        }
        let mut degree = self.degree;
        degree[axis] -= 1;
        let factor = ratio(self.degree[axis], 1);
        let step = if axis == 0 { n + 1 } else { 1 };
        let mut values = Vec::with_capacity(self.values.len());
        for i in 0..=m.min(degree[0]) {
            for j in 0..=n.min(degree[1]) {
                let at = i * (n + 1) + j;
                values.push((self.values[at + step] - self.values[at]) * factor);
            }
        }
        Self { degree, values }
    }

    fn second(&self, axes: [usize; 2]) -> Self {
        self.derivative(axes[0]).derivative(axes[1])
    }

    /// Value by the two rows of Bernstein polynomials.
    fn value(&self, [bu, bv]: [&[f64]; 2]) -> Homogeneous {
        let mut sum = Homogeneous::zeros();
        for (row, x) in self.values.chunks_exact(bv.len()).zip(bu) {
            let mut along = Homogeneous::zeros();
            for (value, y) in row.iter().zip(bv) {
                along += value * *y;
            }
            sum += along * *x;
        }
        sum
    }

    /// The largest size of a value, as a functional (n, -n . s) sees it.
    fn largest(&self, reach: f64) -> f64 {
        let sizes = self.values.iter().map(|x| size(x, reach));
        sizes.fold(0.0, f64::max)
    }
}

fn size(x: &Homogeneous, reach: f64) -> f64 {
    x.xyz().norm() + reach * x.w.abs()
}

/// Bernstein polynomials of one degree at t.
fn bernstein(degree: usize, t: f64) -> Vec<f64> {
    let mut row = vec![1.0];
    for _ in 0..degree {
        let mut next = vec![0.0; row.len() + 1];
        for (k, b) in row.iter().enumerate() {
            next[k] += b * (1.0 - t);
            next[k + 1] += b * t;
        }
        row = next;
    }
    row
}

impl SecondDerivatives {
    pub(super) fn new(surface: &BezierPatch) -> Self {
        let (m, n) = surface.degree();
        let origin = surface.control_point(0, 0);
        let mut values = Vec::with_capacity((m + 1) * (n + 1));
        let mut reach = 0.0_f64;
        for (k, p) in surface.control_points().enumerate() {
            let w = surface.weight(k / (n + 1), k % (n + 1));
            let from = p - origin;
            reach = reach.max(from.norm());
            values.push(Homogeneous::new(from.x * w, from.y * w, from.z * w, w));
        }
        // Vertices of joined seams may lie a little outside the net.
        reach *= 1.25;
        let net = Net {
            degree: [m, n],
            values,
        };
        let seconds = [net.second([0, 0]), net.second([0, 1]), net.second([1, 1])];
        let fine = surface.is_rational() || m.max(n) > 3;
        let cells = if fine { CELLS_FINE } else { CELLS };
        let width = ratio(1, cells);
        let off = [0, 1, 2].map(|k| {
            let bend =
                seconds[k].second([0, 0]).largest(reach) + seconds[k].second([1, 1]).largest(reach);
            bend * width * width / 8.0
        });
        let rows = |degree: usize| -> Vec<Vec<f64>> {
            (0..=cells)
                .map(|k| bernstein(degree, ratio(k, cells)))
                .collect()
        };
        let tables = [0, 1, 2].map(|k| seconds[k].degree.map(rows));
        let mut nodes = Vec::with_capacity((cells + 1) * (cells + 1));
        for i in 0..=cells {
            for j in 0..=cells {
                nodes.push(
                    [0, 1, 2].map(|k| seconds[k].value([&tables[k][0][i], &tables[k][1][j]])),
                );
            }
        }
        let growth = growth(surface, &origin, &nodes, cells);
        Self {
            origin,
            reach,
            cells,
            nodes,
            growth,
            off,
            weights: surface.is_rational().then_some(net),
        }
    }

    /// The weight of the piece at a place: 1 where there are none.
    pub(super) fn weight(&self, [u, v]: [f64; 2]) -> f64 {
        self.weights.as_ref().map_or(1.0, |net| {
            let [m, n] = net.degree;
            net.value([&bernstein(m, u), &bernstein(n, v)]).w
        })
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
        let (second, growth) = self.at([low[0] + l1 / 2.0, low[1] + l2 / 2.0], l1.max(l2));
        let spread = growth.spread(&normal, &s, [l1, l2]);
        let boxed = |[a, b, c]: [f64; 3]| (a * l1 * l1 + 2.0 * b * l1 * l2 + c * l2 * l2) / 8.0;
        let [rest, rest_any] =
            [0, 1].map(|part| boxed([0, 1, 2].map(|k| spread[k][part] + self.off[k])));
        let vectors: [Vector; 3] = [0, 1, 2].map(|k| second[k].xyz() - s * second[k].w);
        let mut least = 1.0;
        let mut bent = 0.0;
        if self.weights.is_some() {
            let [a, b, c] = weights;
            let rate = |k: usize| {
                let [u, v] = growth.rates[k];
                second[k].w.abs() + (u[2] * l1 + v[2] * l2) / 2.0 + self.off[k] / self.reach
            };
            bent = boxed([rate(0), rate(1), rate(2)]);
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
        let (height, peak) = Quadratic::interpolation_error(square).largest();
        let most = weights[0].max(weights[1]).max(weights[2]).max(least);
        let grow = off * most / least + slack;
        let height = (height + rest) / least + grow;
        let sideways = (sideways.sqrt() / 6.0 + rest_any + bent * longest) / least + grow;
        Some(Cell {
            height,
            sideways,
            direct: height.hypot(sideways),
            edges: edges.map(|edge| (edge + rest_any + bent * longest) / least + grow),
            peak,
        })
    }

    /// The second derivatives at a place by the grid, and how fast they change
    /// near it.
    #[allow(
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "a parameter in 0..1 times a cell count of at most a dozen"
    )]
    fn at(&self, [u, v]: [f64; 2], extent: f64) -> ([Homogeneous; 3], &Growth) {
        let cells = ratio(self.cells, 1);
        let (x, y) = (u * cells, v * cells);
        let cell = |t: f64| (t.max(0.0) as usize).min(self.cells - 1);
        let (i, j) = (cell(x), cell(y));
        let (x, y) = (x - ratio(i, 1), y - ratio(j, 1));
        let stride = self.cells + 1;
        let corner = i * stride + j;
        let [a, b] = [&self.nodes[corner], &self.nodes[corner + 1]];
        let [c, d] = [
            &self.nodes[corner + stride],
            &self.nodes[corner + stride + 1],
        ];
        let weights = [(1.0 - x) * (1.0 - y), (1.0 - x) * y, x * (1.0 - y), x * y];
        let second = [0, 1, 2]
            .map(|k| a[k] * weights[0] + b[k] * weights[1] + c[k] * weights[2] + d[k] * weights[3]);
        // The middle is in the cell, the triangle half its extent round it.
        let near = extent * cells <= 2.0;
        let growth = if near {
            &self.growth[i * self.cells + j]
        } else {
            &self.growth[self.cells * self.cells]
        };
        (second, growth)
    }
}

/// Differences of neighbouring nodes over their distance, the largest in each
/// cell and its neighbours, and over all.
fn growth(
    surface: &BezierPatch,
    origin: &Point,
    nodes: &[[Homogeneous; 3]],
    cells: usize,
) -> Vec<Growth> {
    let stride = cells + 1;
    let scale = ratio(cells, 1);
    // Differences at a node: [k][towards u, towards v].
    let rates = |growth: &Growth, [low_i, high_i]: [usize; 2], [low_j, high_j]: [usize; 2]| {
        let mut most = [[[0.0_f64; 3]; 2]; 3];
        for i in low_i..=high_i {
            for j in low_j..=high_j {
                let at = i * stride + j;
                let steps = [(i < high_i, stride), (j < high_j, 1)];
                for (axis, (inside, step)) in steps.into_iter().enumerate() {
                    if !inside {
                        continue;
                    }
                    for k in 0..3 {
                        let parts = growth.parts(&((nodes[at + step][k] - nodes[at][k]) * scale));
                        for (old, new) in most[k][axis].iter_mut().zip(parts) {
                            *old = old.max(new);
                        }
                    }
                }
            }
        }
        most
    };
    let mut all = Vec::with_capacity(cells * cells + 1);
    for i in 0..cells {
        for j in 0..cells {
            let jet = surface.jet((ratio(i, 1) + 0.5) / scale, (ratio(j, 1) + 0.5) / scale);
            let mut growth = Growth {
                normal: jet.normal().unwrap_or_else(Vector::z),
                middle: jet.point - origin,
                rates: Default::default(),
            };
            growth.rates = rates(
                &growth,
                [i.saturating_sub(1), (i + 2).min(cells)],
                [j.saturating_sub(1), (j + 2).min(cells)],
            );
            all.push(growth);
        }
    }
    // Large triangles may tilt against any normal.
    let mut whole = Growth {
        normal: Vector::z(),
        middle: Vector::zeros(),
        rates: Default::default(),
    };
    whole.rates =
        rates(&whole, [0, cells], [0, cells]).map(|axes| axes.map(|[n, t, w]| [n + t, n + t, w]));
    all.push(whole);
    all
}
