//! Second derivatives of a piece on a coarse grid, to choose steps and
//! diagonals by. Nothing here proves anything.

use super::grid::Grid;
use super::nets::Nets;
use crate::bezier::{BezierPatch, SurfaceJet};
use crate::sampling::{Limits, ratio};
use crate::scalar::{Point, Vector};

/// How much worse a slender triangle counts, times its longest edge squared over
/// twice its area. Where K < 0 lattices sheared by whole steps are equally good by
/// heights, but their long edges leave the straight line sideways, and proofs fail.
const SLENDER: f64 = 0.03;

/// How much a sideways shift of an edge counts beside a height: about the tilt
/// of neighbouring triangles, by which the proof multiplies it.
const TILT: f64 = 0.1;

/// A triangle that faces inwards counts as this part of the chord at least:
/// enough to be exchanged for good triangles, not for such as need refinement.
const INWARD: f64 = 0.5;

/// What the steps need to know of the surface at one place.
#[derive(Debug, Clone, Copy)]
pub(super) struct Bend {
    /// Unit normal along S_u x S_v (zero where there is none).
    pub(super) normal: Vector,
    /// S_u, S_v.
    pub(super) first: [Vector; 2],
    /// S_uu, S_uv, S_vv.
    pub(super) second: [Vector; 3],
    /// The second form (n.S_uu, n.S_uv, n.S_vv).
    pub(super) form: [f64; 3],
}

impl Bend {
    fn blend(corners: [&Self; 4], weights: [f64; 4]) -> Self {
        let mix = |get: &dyn Fn(&Self) -> Vector| {
            let [a, b, c, d] = corners.map(get);
            a * weights[0] + b * weights[1] + c * weights[2] + d * weights[3]
        };
        let form = |k: usize| (0..4).map(|c| corners[c].form[k] * weights[c]).sum::<f64>();
        Self {
            normal: mix(&|b| b.normal),
            first: [mix(&|b| b.first[0]), mix(&|b| b.first[1])],
            second: [
                mix(&|b| b.second[0]),
                mix(&|b| b.second[1]),
                mix(&|b| b.second[2]),
            ],
            form: [form(0), form(1), form(2)],
        }
    }
}

/// The table.
#[derive(Debug)]
pub(super) struct Field<'a> {
    surface: &'a BezierPatch,
    bends: Grid<Bend>,
}

impl<'a> Field<'a> {
    pub(super) fn new(surface: &'a BezierPatch, nets: &Nets) -> Self {
        let orders = [[0, 0], [1, 0], [0, 1], [2, 0], [1, 1], [0, 2]];
        let grids = orders.map(|[i, j]| nets.grid(nets.derived(i, j)));
        let cells = nets.cells;
        let bends = (0..grids[0].len()).map(|node| {
            let [s, u, v, uu, uv, vv] = [0, 1, 2, 3, 4, 5].map(|k| grids[k][node]);
            // Of N = w S, by the product rule.
            let w = s.w;
            let point = s.xyz() / w;
            let first = [u, v].map(|d| (d.xyz() - point * d.w) / w);
            let second = [
                (uu.xyz() - first[0] * (2.0 * u.w) - point * uu.w) / w,
                (uv.xyz() - first[1] * u.w - first[0] * v.w - point * uv.w) / w,
                (vv.xyz() - first[1] * (2.0 * v.w) - point * vv.w) / w,
            ];
            let jet = SurfaceJet {
                point: nets.origin + point,
                du: first[0],
                dv: first[1],
                duu: second[0],
                duv: second[1],
                dvv: second[2],
            };
            // Towards a pole the normal is a limit.
            let normal = jet.normal().or_else(|| {
                let [i, j] = [node / (cells + 1), node % (cells + 1)];
                surface.normal(ratio(i, cells), ratio(j, cells))
            });
            let normal = normal.unwrap_or_else(Vector::zeros);
            Bend {
                normal,
                first,
                second,
                form: jet.second_form(&normal),
            }
        });
        Self {
            surface,
            bends: Grid::new(cells, bends.collect()),
        }
    }

    /// The surface's normals on the grid.
    pub(super) fn normals(&self) -> impl Iterator<Item = &Vector> {
        self.bends.nodes().iter().map(|bend| &bend.normal)
    }

    /// The bend at (u, v), bilinear between grid places.
    pub(super) fn at(&self, [u, v]: [f64; 2]) -> Bend {
        let (corners, weights) = self.bends.around([u, v]);
        Bend::blend(corners, weights)
    }

    /// Estimated deviation of a triangle, in length: the largest height error
    /// for the Hessian at its centre, joined with a part of the sideways shift
    /// of its edges, a little more for slender ones, and with what a largest edge
    /// asks; never small for a triangle
    /// that faces inwards, so that exchanges of diagonals do away with it.
    pub(super) fn estimate(
        &self,
        places: [[f64; 2]; 3],
        points: [Point; 3],
        limits: &Limits,
    ) -> f64 {
        let third = |axis: usize| (places[0][axis] + places[1][axis] + places[2][axis]) / 3.0;
        let middle = [third(0), third(1)];
        let (corners, weights) = self.bends.around(middle);
        let mix = |get: &dyn Fn(&Bend) -> &Vector| {
            let [a, b, c, d] = corners.map(get);
            a * weights[0] + b * weights[1] + c * weights[2] + d * weights[3]
        };
        let normal = mix(&|b| &b.normal);
        let second = [
            mix(&|b| &b.second[0]),
            mix(&|b| &b.second[1]),
            mix(&|b| &b.second[2]),
        ];
        let facet = (points[1] - points[0]).cross(&(points[2] - points[0]));
        let mut inward = 0.0;
        if facet.dot(&normal) <= 0.0 && self.faces_inwards(facet, &[middle]) {
            inward = INWARD * limits.chord;
        }
        let mut square = [0.0; 3];
        let mut worst_edge = 0.0_f64;
        let mut longest = 0.0_f64;
        for k in 0..3 {
            let next = (k + 1) % 3;
            let step = [
                places[next][0] - places[k][0],
                places[next][1] - places[k][1],
            ];
            let q = second[0] * (step[0] * step[0])
                + second[1] * (2.0 * step[0] * step[1])
                + second[2] * (step[1] * step[1]);
            square[k] = q.dot(&normal);
            let along = points[next] - points[k];
            let length = along.norm();
            longest = longest.max(length);
            if length > 0.0 {
                let sideways = q.dot(&normal.cross(&along)) / length;
                let shift = TILT * sideways;
                worst_edge = worst_edge.max((square[k] * square[k] + shift * shift).sqrt() / 8.0);
            }
        }
        let height = super::quadratic::Quadratic::largest_error(square).0;
        // Of a triangle without area nothing else is worth comparing.
        let square = longest * longest;
        let slender = square / facet.norm().max(1e-9 * square).max(f64::MIN_POSITIVE);
        (height.max(worst_edge) * (1.0 + SLENDER * slender))
            .max(limits.length_error(longest))
            .max(inward)
    }

    /// Whether a facet faces against the mean of the surface's own normals at
    /// some places.
    pub(super) fn faces_inwards(&self, facet: Vector, places: &[[f64; 2]]) -> bool {
        let normals = places.iter().map(|[u, v]| self.surface.normal(*u, *v));
        let sum: Option<Vector> = normals.sum();
        sum.is_some_and(|normal| facet.dot(&normal) <= 0.0)
    }
}
