//! Mesh to surface: flat triangles against triangles of parameters.

use rayon::prelude::*;

use super::super::audit::{quarters, to_segment, to_triangle};
use super::{Spot, Task};
use crate::bezier::{Side, TriangleNet, TriangleRestriction};
use crate::patch_set::PieceId;
use crate::scalar::Point;
use crate::topology::EdgeId;

/// Parts of one flat triangle looked at, at most; and where the goal is out of reach
/// by so much that they would not do, as on flat pieces with uneven parameters, which
/// shift sideways and do not deviate.
const BUDGET: usize = 600;
const FEW: usize = 24;
const OUT_OF_REACH: f64 = 100.0;

/// A part of a flat triangle: its corners and a place for each.
#[derive(Debug, Clone, Copy)]
struct Part {
    points: [Point; 3],
    spots: [Spot; 3],
}

#[derive(Default)]
struct Scratch {
    restriction: TriangleRestriction,
    net: TriangleNet,
    /// Each with its bound, and the piece that gave it.
    parts: Vec<(f64, PieceId, Part)>,
}

impl Task<'_> {
    /// For every facet its bound, and where it is worst.
    pub(super) fn facets(&self, attained: f64) -> Vec<(f64, Spot)> {
        (0..self.triangles.len())
            .into_par_iter()
            .map_init(Scratch::default, |scratch, t| {
                self.facet(t, attained, scratch)
            })
            .collect()
    }

    fn facet(&self, t: usize, attained: f64, scratch: &mut Scratch) -> (f64, Spot) {
        let points = self.triangles[t].map(|p| self.points[p as usize]);
        let whole = Part {
            points,
            spots: self.spots[t],
        };
        let goal = self.goal(attained);
        scratch.parts.clear();
        self.look(whole, goal, scratch);
        let mut looked = 1;
        let first = scratch.parts.first().map_or(0.0, |part| part.0);
        let few = if first > OUT_OF_REACH * goal {
            FEW
        } else {
            BUDGET
        };
        // The worst part first; what is left when the budget is spent counts.
        loop {
            let worst = (0..scratch.parts.len())
                .max_by(|&a, &b| scratch.parts[a].0.total_cmp(&scratch.parts[b].0));
            let Some(worst) = worst else {
                return (0.0, self.spots[t][0]);
            };
            let (bound, piece, part) = scratch.parts[worst];
            let most = if bound > self.chord { BUDGET } else { few };
            if bound <= goal || looked >= most {
                return (bound, part.spots[0]);
            }
            scratch.parts.swap_remove(worst);
            looked += self.cut(&part, piece, goal, scratch);
        }
    }

    /// Bounds a part and puts it with the others.
    fn look(&self, part: Part, goal: f64, scratch: &mut Scratch) {
        let (bound, piece) = self.held(&part, goal, scratch);
        scratch.parts.push((bound, piece, part));
    }

    /// The best bound of a part over the pieces its corners lie on.
    fn held(&self, part: &Part, goal: f64, scratch: &mut Scratch) -> (f64, PieceId) {
        let mut best = (f64::INFINITY, part.spots[0].piece);
        for k in 0..3 {
            let piece = part.spots[k].piece;
            if part.spots[..k].iter().any(|s| s.piece == piece) {
                continue;
            }
            let uv = [0, 1, 2].map(|c| {
                let spot = part.spots[c];
                if spot.piece == piece {
                    spot.uv
                } else {
                    self.foot(
                        piece,
                        self.guess(spot, piece, part.spots[k].uv),
                        &part.points[c],
                    )
                }
            });
            let bound = self.bound(piece, uv, &part.points, scratch);
            if bound < best.0 {
                best = (bound, piece);
            }
            if bound <= goal {
                break;
            }
        }
        best
    }

    fn bound(
        &self,
        piece: PieceId,
        uv: [[f64; 2]; 3],
        points: &[Point; 3],
        scratch: &mut Scratch,
    ) -> f64 {
        let origin = points[0];
        self.surface(piece).restrict_triangle(
            uv,
            &origin,
            &mut scratch.restriction,
            &mut scratch.net,
        );
        let net = &scratch.net;
        let flat = points.map(|p| p - origin);
        let d = net.degree;
        let mut most = 0.0_f64;
        let mut at = 0;
        for i in (0..=d).rev() {
            for j in (0..=d - i).rev() {
                let k = d - i - j;
                let b = &net.points[at];
                at += 1;
                let away = match (i, j, k) {
                    (_, 0, 0) => (b - flat[0]).norm(),
                    (0, _, 0) => (b - flat[1]).norm(),
                    (0, 0, _) => (b - flat[2]).norm(),
                    (_, _, 0) => to_segment(b, &flat[0], &flat[1]),
                    (0, _, _) => to_segment(b, &flat[1], &flat[2]),
                    (_, 0, _) => to_segment(b, &flat[2], &flat[0]),
                    _ => to_triangle(b, &flat),
                };
                most = most.max(away);
            }
        }
        most + self.slack[piece.index()]
    }

    /// Cuts a part: into quarters if it lies on one piece, else where it leaves
    /// one. Returns how many parts that makes.
    fn cut(&self, part: &Part, piece: PieceId, goal: f64, scratch: &mut Scratch) -> usize {
        let spots = part.spots;
        let whole = spots.iter().all(|s| s.piece == spots[0].piece);
        if whole {
            let uv = quarters(spots.map(|s| s.uv));
            let [a, b, c] = part.points;
            let half = |p: Point, q: Point| Point::from((p.coords + q.coords) / 2.0);
            let (p, q, r) = (half(a, b), half(b, c), half(c, a));
            let points = [[a, p, r], [p, b, q], [r, q, c], [p, q, r]];
            // The middles' own places, once each.
            let middle = |k: usize, point: &Point| {
                let from = [uv[3][0], uv[3][1], uv[3][2]][k];
                self.settled(Spot { piece, uv: from }, point).0
            };
            let (x, y, z) = (middle(0, &p), middle(1, &q), middle(2, &r));
            let [s, t, w] = spots;
            let cornered = [[s, x, z], [x, t, y], [z, y, w], [x, y, z]];
            for (points, spots) in points.into_iter().zip(cornered) {
                self.look(Part { points, spots }, goal, scratch);
            }
            return 4;
        }
        // The longest edge that passes from one piece to the next, else the longest.
        let length = |k: usize| (part.points[(k + 1) % 3] - part.points[k]).norm_squared();
        let end = |k: usize| (part.points[k % 3], spots[k % 3]);
        let passing = (0..3)
            .filter(|&k| spots[k].piece != spots[(k + 1) % 3].piece)
            .filter_map(|k| Some((k, self.crossing(end(k), end(k + 1))?)))
            .max_by(|a, b| length(a.0).total_cmp(&length(b.0)).then(b.0.cmp(&a.0)));
        let (k, (point, near, far)) = passing.unwrap_or_else(|| {
            let longest = (0..3)
                .max_by(|&a, &b| length(a).total_cmp(&length(b)).then(b.cmp(&a)))
                .unwrap_or(0);
            (longest, self.halved(end(longest), end(longest + 1)))
        });
        let (a, b, c) = (k, (k + 1) % 3, (k + 2) % 3);
        let first = Part {
            points: [part.points[a], point, part.points[c]],
            spots: [spots[a], near, spots[c]],
        };
        let second = Part {
            points: [point, part.points[b], part.points[c]],
            spots: [far, spots[b], spots[c]],
        };
        self.look(first, goal, scratch);
        self.look(second, goal, scratch);
        2
    }

    /// The middle of an edge, with its nearer foot on the pieces of the ends.
    fn halved(&self, a: (Point, Spot), b: (Point, Spot)) -> (Point, Spot, Spot) {
        let point = Point::from((a.0.coords + b.0.coords) / 2.0);
        let (p, q) = (self.settled(a.1, &point), self.settled(b.1, &point));
        let near = if q.1 < p.1 { q.0 } else { p.0 };
        (point, near, near)
    }

    /// Where a straight edge passes from one piece to the next, with the place of
    /// that point on the piece it leaves, and on the one it enters; `None` where it
    /// does so at its ends only.
    fn crossing(&self, a: (Point, Spot), b: (Point, Spot)) -> Option<(Point, Spot, Spot)> {
        let along = b.0 - a.0;
        let at = |s: f64| a.0 + along * s;
        let uv = self.foot(a.1.piece, a.1.uv, &b.0);
        let border = [
            (Side::U0, uv[0] <= 0.0, uv[1]),
            (Side::U1, uv[0] >= 1.0, uv[1]),
            (Side::V0, uv[1] <= 0.0, uv[0]),
            (Side::V1, uv[1] >= 1.0, uv[0]),
        ];
        let &(side, _, mut t) = border.iter().find(|(_, on, _)| *on)?;
        let curve = self.surface(a.1.piece).edge(side);
        // Newton's steps to the plane through the edge and the normal there.
        let [u, v] = a.1.uv;
        let (_, du, dv) = self.surface(a.1.piece).frame(u, v);
        let across = along.cross(&du.cross(&dv)).try_normalize(0.0)?;
        for _ in 0..8 {
            let jet = curve.jet(t);
            let slope = jet.dt.dot(&across);
            if slope.abs() <= 1e-9 * jet.dt.norm() {
                return None;
            }
            let next = (t - (jet.point - a.0).dot(&across) / slope).clamp(0.0, 1.0);
            let moved = (next - t).abs();
            t = next;
            if moved < 1e-13 {
                break;
            }
        }
        let on = curve.eval(t) - a.0;
        let s = on.dot(&along) / along.norm_squared();
        // The side may end before it comes to the plane.
        let beside = on.dot(&across).abs();
        if beside > 1e-6 * along.norm() || (on - along * s).norm() > 0.25 * along.norm() {
            return None;
        }
        if !(0.01..=0.99).contains(&s) {
            return None;
        }
        let near = Spot {
            piece: a.1.piece,
            uv: side.at(t),
        };
        let edge = &self.topology.edges()[EdgeId::of(a.1.piece, side).index()];
        let spans = &self.topology.spans()[edge.spans.clone()];
        let over = spans.iter().find(|span| t <= span.t[1]).and_then(|span| {
            let seam = &self.topology.seams()[span.seam.index()];
            let mut others = seam
                .spans
                .iter()
                .map(|id| self.topology.spans()[id.index()].edge.piece())
                .filter(|&p| p != a.1.piece);
            others.next()
        });
        let piece = over.unwrap_or(b.1.piece);
        let uv = self.foot(piece, self.guess(near, piece, [0.5; 2]), &at(s));
        Some((at(s), near, Spot { piece, uv }))
    }
}
