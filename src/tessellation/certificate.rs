//! The proof for one triangle.
//!
//! A cell is a parameter triangle t; its target is the flat triangle T the
//! mesh has for it. S(t) becomes a triangular net b_i of degree d, and three
//! figures follow:
//!
//! ```text
//! height    max |n_T . (S - T_0)|        <= max |q| + max |r_I|
//! sideways  max dist(P_T S, T) in T's plane <= max dist(P_T b_i, T)
//! edge k    max dist(S(edge k), chord k)  <= max |q| + max |r|   (vectors across the chord)
//! ```
//!
//! The second line is the hull lemma: distance to a convex set is convex, S is
//! a convex combination of the b_i. The first and third split off the quadratic
//! q through the corner and mid-edge values (its maximum has a closed form) and
//! bound the rest by its own control values. For rational nets the remainder
//! N - q w and w are both raised to degree d + 2, and
//!
//! ```text
//! r_I = sum_J a_J w_(I-J) (H_(I-J) - q_J) / sum_J a_J w_(I-J),   |J| = 2,
//! ```
//!
//! a weighted mean of differences, so the bound stays sound for any positive
//! weights. All three carry `slack` for rounding: 4 ulp of the largest
//! coordinate for taking the origin off, 64 ulp of the piece's size for the
//! convex combinations after it (fewer than 2 d + 2 roundings each, d <= 30),
//! times the weights' ratio.

use super::quadratic::Quadratic;
use super::remainder::Shape;
use crate::bezier::{BezierPatch, TriangleNet, TriangleRestriction, chord_bound, from_segment};
use crate::scalar::{Cuboid, Point, Vector};

/// A flat triangle of the mesh.
#[derive(Debug, Clone, Copy)]
pub(super) struct Flat {
    pub(super) corners: [Point; 3],
    /// Unit normal; `None` for a triangle without area.
    pub(super) normal: Option<Vector>,
}

/// A triangle whose height is below this part of its longest edge has no
/// trustworthy normal.
pub(super) const THIN: f64 = 1e-9;

impl Flat {
    pub(super) fn new(corners: [Point; 3]) -> Self {
        let [a, b, c] = corners;
        let cross = (b - a).cross(&(c - a));
        let longest = (b - a)
            .norm_squared()
            .max((c - b).norm_squared())
            .max((a - c).norm_squared());
        let norm = cross.norm();
        let normal = (norm > THIN * longest && longest > 0.0).then(|| cross / norm);
        Self { corners, normal }
    }

    /// Smallest altitude.
    pub(super) fn altitude(&self) -> f64 {
        let [a, b, c] = self.corners;
        let longest = (b - a).norm().max((c - b).norm()).max((a - c).norm());
        (b - a).cross(&(c - a)).norm() / longest
    }
}

/// What is proved of one cell against its target.
#[derive(Debug, Clone, Copy, Default)]
pub(super) struct Cell {
    /// Largest distance from the target's plane.
    pub(super) height: f64,
    /// Largest distance by which the cell's projection leaves the target.
    pub(super) sideways: f64,
    /// Largest distance from the target itself.
    pub(super) direct: f64,
    /// Largest distance of the three edge curves from their chords, both ways.
    pub(super) edges: [f64; 3],
    /// About what the height is: a bound without the remainder. Not proved.
    pub(super) likely: f64,
    /// Barycentric place where the height is about largest.
    pub(super) peak: [f64; 3],
}

/// Proves cells of one piece; holds the scratch space.
#[derive(Debug)]
pub(super) struct Prover<'a> {
    surface: &'a BezierPatch,
    slack: f64,
    restriction: TriangleRestriction,
    net: TriangleNet,
    heights: Vec<f64>,
    edge_points: Vec<Vector>,
    edge_weights: Vec<f64>,
    shape: Shape,
}

impl<'a> Prover<'a> {
    pub(super) fn new(surface: &'a BezierPatch) -> Self {
        let largest = surface.control_points();
        let largest = largest.fold(0.0_f64, |most, p| most.max(p.coords.amax()));
        let diagonal = Cuboid::around(surface.control_points()).diagonal();
        let (m, n) = surface.degree();
        let weights = || {
            (0..=m)
                .flat_map(|i| (0..=n).map(move |j| (i, j)))
                .map(|(i, j)| surface.weight(i, j))
        };
        let ratio = weights().fold(0.0, f64::max) / weights().fold(f64::MAX, f64::min);
        Self {
            surface,
            slack: f64::EPSILON * (4.0 * largest + 64.0 * diagonal) * ratio,
            restriction: TriangleRestriction::default(),
            net: TriangleNet::default(),
            heights: Vec::new(),
            edge_points: Vec::new(),
            edge_weights: Vec::new(),
            shape: Shape::default(),
        }
    }

    /// What rounding adds to every figure.
    pub(super) fn slack(&self) -> f64 {
        self.slack
    }

    /// Bounds the cell over `places` against `target`. `own` says that the
    /// cell's corners are the target's: only then do the edge figures mean
    /// anything.
    pub(super) fn cell(&mut self, places: [[f64; 2]; 3], target: &Flat, own: bool) -> Cell {
        let origin = target.corners[0];
        self.surface
            .restrict_triangle(places, &origin, &mut self.restriction, &mut self.net);
        self.shape.prepare(self.net.degree);
        let corners = target.corners.map(|c| c - origin);
        let edges = if own {
            [0, 1, 2].map(|k| self.edge(k, corners[k], corners[(k + 1) % 3]) + self.slack)
        } else {
            [0.0; 3]
        };
        let Some(normal) = target.normal else {
            return self.against_segment(corners, edges);
        };
        self.heights.clear();
        self.heights
            .extend(self.net.points.iter().map(|b| b.dot(&normal)));
        let mut hull = 0.0_f64;
        let mut sideways = 0.0_f64;
        let outward = [0, 1, 2].map(|k| {
            let along = corners[(k + 1) % 3] - corners[k];
            along.cross(&normal) / along.norm()
        });
        for (b, height) in self.net.points.iter().zip(&self.heights) {
            let beyond = [0, 1, 2].map(|k| (b - corners[k]).dot(&outward[k]));
            let aside = if beyond.iter().all(|&x| x <= 0.0) {
                0.0
            } else {
                let flat = b - normal * *height;
                distance_to_border(&flat, &corners)
            };
            sideways = sideways.max(aside);
            hull = hull.max(height.hypot(aside));
        }
        let (split, peak) = self.split(&self.heights);
        let height = split.min(largest(&self.heights));
        Cell {
            height: height + self.slack,
            sideways: sideways + self.slack,
            direct: hull.min(height.hypot(sideways)) + self.slack,
            edges,
            likely: height,
            peak,
        }
    }

    /// A target without area is one of its edges.
    fn against_segment(&self, corners: [Vector; 3], edges: [f64; 3]) -> Cell {
        let far = |b: &Vector| distance_to_border(b, &corners);
        let direct = self.net.points.iter().map(far).fold(0.0, f64::max) + self.slack;
        Cell {
            height: direct,
            sideways: 0.0,
            direct,
            edges,
            likely: direct,
            peak: [1.0 / 3.0; 3],
        }
    }

    /// How far the cell over `places` reaches beyond lines in the target's
    /// plane, joined with its height: the largest sqrt(height^2 + beyond^2).
    /// A line is a point and the unit vector away from the allowed side.
    pub(super) fn beyond(
        &mut self,
        places: [[f64; 2]; 3],
        target: &Flat,
        lines: &[(Point, Vector)],
        stretch: f64,
    ) -> Option<f64> {
        let normal = target.normal?;
        let origin = target.corners[0];
        self.surface
            .restrict_triangle(places, &origin, &mut self.restriction, &mut self.net);
        self.shape.prepare(self.net.degree);
        let heights: Vec<f64> = self.net.points.iter().map(|b| b.dot(&normal)).collect();
        let height = self.split(&heights).0.min(largest(&heights));
        let mut out = vec![0.0_f64; heights.len()];
        let mut beyond = 0.0_f64;
        for (start, away) in lines {
            let values: Vec<f64> = self
                .net
                .points
                .iter()
                .map(|b| (origin + b - start).dot(away))
                .collect();
            let hull = values.iter().copied().fold(0.0, f64::max);
            if hull > 0.0 {
                beyond = beyond.max(hull.min(self.split(&values).0));
            }
            for (most, value) in out.iter_mut().zip(values) {
                *most = most.max(value);
            }
        }
        let pointwise = heights.iter().zip(out).map(|(h, b)| h.hypot(b * stretch));
        let pointwise = pointwise.fold(0.0, f64::max);
        Some(pointwise.min(height.hypot(beyond * stretch)) + self.slack * stretch)
    }

    fn weight(&self, i: usize) -> f64 {
        self.net.weights.get(i).copied().unwrap_or(1.0)
    }

    /// Value of a function at the middle of edge k, from its control values.
    fn middle(&self, k: usize, value: impl Fn(usize) -> f64) -> f64 {
        let (mut sum, mut total) = (0.0, 0.0);
        for (&at, &binomial) in self.shape.edges[k].iter().zip(&self.shape.binomials) {
            let w = binomial * self.weight(at);
            sum += w * value(at);
            total += w;
        }
        sum / total
    }

    /// The bound on |f| by splitting off its quadratic part, from control
    /// values, and where that part is largest.
    fn split(&self, h: &[f64]) -> (f64, [f64; 3]) {
        let at = [0, 1, 2].map(|c| h[self.net.corner(c)]);
        let between =
            [0, 1, 2].map(|k| 2.0 * self.middle(k, |i| h[i]) - (at[k] + at[(k + 1) % 3]) / 2.0);
        let q = Quadratic {
            corner: at,
            between,
        };
        let (largest, peak) = q.largest();
        let rest = if self.net.weights.is_empty() {
            self.shape.rest_polynomial(h, &q)
        } else {
            self.shape.rest_rational(h, &self.net.weights, &q)
        };
        (largest + rest, peak)
    }

    /// Distance of edge curve k from the segment a b.
    fn edge(&mut self, k: usize, a: Vector, b: Vector) -> f64 {
        let edge = &self.shape.edges[k];
        self.edge_points.clear();
        self.edge_points
            .extend(edge.iter().map(|&i| self.net.points[i]));
        self.edge_weights.clear();
        if !self.net.weights.is_empty() {
            self.edge_weights
                .extend(edge.iter().map(|&i| self.net.weights[i]));
        }
        chord_bound(&self.edge_points, &self.edge_weights, &a, &b)
    }
}

fn largest(values: &[f64]) -> f64 {
    values
        .iter()
        .fold(0.0, |most: f64, value| most.max(value.abs()))
}

/// Distance of a point in the plane of a triangle from the triangle's border.
fn distance_to_border(p: &Vector, corners: &[Vector; 3]) -> f64 {
    let [a, b, c] = corners;
    let along = |a: &Vector, b: &Vector| from_segment(p, a, b);
    along(a, b).min(along(b, c)).min(along(c, a))
}

#[cfg(test)]
mod tests {
    use super::super::random::random;
    use super::*;

    fn target(surface: &BezierPatch, places: [[f64; 2]; 3]) -> Flat {
        Flat::new(places.map(|[u, v]| surface.eval(u, v)))
    }

    /// Heights (0, 1, 0) with weights (0.02, 1, 1.98) reach 0.834 (computed by
    /// maximising the quotient on a fine grid): the polynomial form of the
    /// split would say 0.5.
    #[test]
    fn uneven_weights_are_bounded() {
        let points = [0.0, 0.5, 1.0].into_iter().flat_map(|x| {
            let z = if x > 0.4 && x < 0.6 { 1.0 } else { 0.0 };
            [Point::new(x, 0.0, z), Point::new(x, 1.0, z)]
        });
        let weights = [0.02, 0.02, 1.0, 1.0, 1.98, 1.98].to_vec();
        let surface = BezierPatch::new((2, 1), points.collect(), Some(weights)).unwrap();
        let places = [[0.0, 0.0], [1.0, 0.0], [1.0, 1.0]];
        let cell = Prover::new(&surface).cell(places, &target(&surface, places), true);
        let true_height = (0..=10_000)
            .map(|k| surface.eval(f64::from(k) / 10_000.0, 0.0).z)
            .fold(0.0, f64::max);
        assert!((true_height - 0.834).abs() < 5e-4);
        assert!(
            cell.height >= true_height && cell.edges[0] >= true_height,
            "{cell:?}"
        );
    }

    /// No sample of the surface may lie outside what was proved, over bent,
    /// weighted and near-degenerate nets.
    #[test]
    fn samples_never_exceed_the_bounds() {
        let mut seed = 1_u64;
        let mut next = || random(&mut seed);
        for round in 0..400 {
            let (m, n) = (1 + round % 5, 1 + round / 5 % 4);
            let spread = [1.0, 1e-3, 1e3][round % 3];
            let points = (0..(m + 1) * (n + 1)).map(|k| {
                let (i, j) = (k / (n + 1), k % (n + 1));
                let (x, y) = (crate::sampling::ratio(i, m), crate::sampling::ratio(j, n));
                Point::new(x + 0.2 * next(), y + 0.2 * next(), spread * next())
            });
            let points = points.collect();
            let weights = (round % 2 == 0).then(|| {
                (0..(m + 1) * (n + 1))
                    .map(|_| 0.05 + 2.0 * next())
                    .collect()
            });
            let surface = BezierPatch::new((m, n), points, weights).unwrap();
            let places = [
                [next() * 0.3, next() * 0.3],
                [0.7 + 0.3 * next(), next()],
                [next(), 0.8],
            ];
            let flat = target(&surface, places);
            let cell = Prover::new(&surface).cell(places, &flat, true);
            let Some(normal) = flat.normal else { continue };
            for _ in 0..200 {
                let (mut a, mut b) = (next(), next());
                if a + b > 1.0 {
                    (a, b) = (1.0 - a, 1.0 - b);
                }
                let l = [1.0 - a - b, a, b];
                let at = |axis: usize| (0..3).map(|c| l[c] * places[c][axis]).sum::<f64>();
                let from = surface.eval(at(0), at(1)) - flat.corners[0];
                assert!(from.dot(&normal).abs() <= cell.height);
                let t = a;
                let edge = [
                    places[0][0] * (1.0 - t) + places[1][0] * t,
                    places[0][1] * (1.0 - t) + places[1][1] * t,
                ];
                let on_edge = surface.eval(edge[0], edge[1]) - flat.corners[0];
                let chord = flat.corners[1] - flat.corners[0];
                let along = (on_edge.dot(&chord) / chord.norm_squared()).clamp(0.0, 1.0);
                assert!((on_edge - chord * along).norm() <= cell.edges[0]);
            }
        }
    }
}
