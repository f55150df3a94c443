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
//! rest let L be the linear interpolant of S and l its distances from s; then
//!
//! ```text
//! w (S - L) = (g - I g) + (I g - I w l) - (w - I w) l,   g = N - w s,
//! ```
//!
//! I the linear interpolant; the middle part is the sum over pairs of corners
//! of l_i l_j (w_i - w_j) (S_i - S_j), at most a third of the largest. Everything is divided by the least weight in the triangle.
//!
//! H is read from a grid, bilinear between its nodes: off by at most
//! (g_u^2 max |f_uu| + g_v^2 max |f_vv|) / 8 of the second derivative's own
//! second derivatives (from their nets), and it changes within a triangle by no
//! more than the differences of neighbouring nodes say.
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
    /// How fast each of the three changes along u and along v: the largest in
    /// a cell and its neighbours; the last entry is for the whole piece.
    growth: Vec<[[f64; 2]; 3]>,
    /// How far each may be from bilinear.
    off: [f64; 3],
    /// The net of weights, where there are any.
    weights: Option<Net>,
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
        let growth = growth(&nodes, cells, reach);
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
        let spread = [0, 1, 2].map(|k| (growth[k][0] * l1 + growth[k][1] * l2) / 2.0 + self.off[k]);
        let boxed = |[a, b, c]: [f64; 3]| (a * l1 * l1 + 2.0 * b * l1 * l2 + c * l2 * l2) / 8.0;
        let rest = boxed(spread);
        let vectors: [Vector; 3] = [0, 1, 2].map(|k| second[k].xyz() - s * second[k].w);
        let mut least = 1.0;
        let mut skew = 0.0;
        let mut bent = 0.0;
        if self.weights.is_some() {
            let [a, b, c] = weights;
            bent = boxed([0, 1, 2].map(|k| second[k].w.abs() + spread[k] / self.reach));
            least = a.min(b).min(c) - bent;
            skew = (a - b).abs().max((b - c).abs()).max((c - a).abs()) / 3.0;
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
            let even = onward.abs() + 8.0 * rest <= 2.0 * length;
            edges[k] = if self.weights.is_none() && even {
                (bend - along * (onward / length)).norm() / 8.0
            } else {
                bend.norm() / 8.0 + (weights[next] - weights[k]).abs() * length / 4.0
            };
        }
        let (height, peak) = Quadratic::interpolation_error(square).largest();
        let most = weights[0].max(weights[1]).max(weights[2]).max(least);
        let grow = off * most / least + slack;
        let height = (height + rest) / least + grow;
        let sideways = (sideways.sqrt() / 6.0 + rest + (skew + bent) * longest) / least + grow;
        Some(Cell {
            height,
            sideways,
            direct: height.hypot(sideways),
            edges: edges.map(|edge| (edge + rest + bent * longest) / least + grow),
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
    fn at(&self, [u, v]: [f64; 2], extent: f64) -> ([Homogeneous; 3], &[[f64; 2]; 3]) {
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
fn growth(nodes: &[[Homogeneous; 3]], cells: usize, reach: f64) -> Vec<[[f64; 2]; 3]> {
    let stride = cells + 1;
    let scale = ratio(cells, 1);
    let steep = |a: usize, b: usize, k: usize| size(&(nodes[b][k] - nodes[a][k]), reach) * scale;
    let mut own = Vec::with_capacity(cells * cells);
    for i in 0..cells {
        for j in 0..cells {
            let at = i * stride + j;
            own.push([0, 1, 2].map(|k| {
                [
                    steep(at, at + stride, k).max(steep(at + 1, at + stride + 1, k)),
                    steep(at, at + 1, k).max(steep(at + stride, at + stride + 1, k)),
                ]
            }));
        }
    }
    let join = |a: [[f64; 2]; 3], b: &[[f64; 2]; 3]| {
        [0, 1, 2].map(|k| [a[k][0].max(b[k][0]), a[k][1].max(b[k][1])])
    };
    let mut wide = Vec::with_capacity(cells * cells + 1);
    for i in 0..cells {
        for j in 0..cells {
            let mut most = [[0.0; 2]; 3];
            for x in i.saturating_sub(1)..(i + 2).min(cells) {
                for y in j.saturating_sub(1)..(j + 2).min(cells) {
                    most = join(most, &own[x * cells + y]);
                }
            }
            wide.push(most);
        }
    }
    wide.push(own.iter().fold([[0.0; 2]; 3], join));
    wide
}
