//! The flat triangles of a mesh as ground under a surface.
//!
//! Take some facets that hang together, all facing a direction n. Where a point
//! projects along n into all half-planes of their outline, it stands over one of
//! them, and is no farther from it than its height over that one's plane:
//!
//! ```text
//! distance(b) <= max_j |height_j(b)| + overhang(b)
//! ```
//!
//! heights being measured along n, and the overhang how far b lies beyond edges at
//! which the mesh ends. That is convex in b, so its largest value at the control
//! points bounds the surface in their hull. (The half-planes of a simple polygon
//! meet in its kernel, which is part of it.)

use super::super::audit::to_triangle;
use super::super::edges::{EdgeTable, NO_SIDE};
use crate::scalar::{Point, Vector};

/// Facets and who is beside whom.
pub(super) struct Ground<'a> {
    points: &'a [Point],
    triangles: &'a [[u32; 3]],
    twins: Vec<u32>,
    /// Unit normals; zero without area.
    normals: Vec<Vector>,
}

/// Facets round a vertex are at most so many.
const MOST: usize = 24;

impl<'a> Ground<'a> {
    pub(super) fn new(points: &'a [Point], triangles: &'a [[u32; 3]]) -> Self {
        let twins = EdgeTable::new(triangles, points.len()).twins(triangles);
        let normals = triangles
            .iter()
            .map(|t| {
                let [a, b, c] = t.map(|p| points[p as usize]);
                let cross = (b - a).cross(&(c - a));
                cross.try_normalize(0.0).unwrap_or_else(Vector::zeros)
            })
            .collect();
        Self {
            points,
            triangles,
            twins,
            normals,
        }
    }

    pub(super) fn corners(&self, facet: u32) -> [Point; 3] {
        self.triangles[facet as usize].map(|p| self.points[p as usize])
    }

    fn beyond(&self, facet: u32, k: u32) -> Option<u32> {
        let twin = self.twins[(3 * facet + k) as usize];
        (twin != NO_SIDE).then_some(twin / 3)
    }

    /// The distance of a point from one facet.
    pub(super) fn distance(&self, facet: u32, point: &Point) -> f64 {
        to_triangle(&Vector::zeros(), &self.corners(facet).map(|c| c - point))
    }

    /// Walks over edges and corners to nearer and nearer facets.
    pub(super) fn walk(&self, from: u32, point: &Point) -> (u32, f64) {
        let mut best = (from, self.distance(from, point));
        loop {
            let mut next = best;
            for facet in (0..3).filter_map(|k| self.beyond(best.0, k)) {
                let distance = self.distance(facet, point);
                if distance < next.1 {
                    next = (facet, distance);
                }
            }
            if next.0 == best.0 {
                // Over an edge it may be as far, and nearer round the corner.
                for corner in 0..3 {
                    self.star(best.0, corner, |facet| {
                        let distance = self.distance(facet, point);
                        if distance < next.1 {
                            next = (facet, distance);
                        }
                    });
                }
            }
            if next.0 == best.0 {
                return best;
            }
            best = next;
        }
    }

    /// Calls for every facet round a corner of one, itself first.
    fn star(&self, facet: u32, corner: u32, mut take: impl FnMut(u32)) {
        let start = 3 * facet + corner;
        let mut side = start;
        take(side / 3);
        // Counterclockwise, then, if that ends at an open edge, clockwise.
        for _ in 0..MOST {
            let twin = self.twins[previous(side) as usize];
            if twin == NO_SIDE {
                break;
            }
            side = twin;
            if side == start {
                return;
            }
            take(side / 3);
        }
        side = start;
        for _ in 0..MOST {
            let twin = self.twins[side as usize];
            if twin == NO_SIDE {
                return;
            }
            side = next(twin);
            if side == start {
                return;
            }
            take(side / 3);
        }
    }

    /// A bound on the distance from the mesh of everything in the hull of some
    /// points, given relative to `origin`; `near` is the facet nearest to their
    /// middle.
    pub(super) fn bound(&self, near: u32, points: &[Vector], origin: &Point, goal: f64) -> f64 {
        let corners = self.corners(near).map(|c| c - origin);
        let alone = points
            .iter()
            .map(|p| to_triangle(p, &corners))
            .fold(0.0, f64::max);
        if alone <= goal {
            return alone;
        }
        let normal = self.normals[near as usize];
        // How far the points reach beyond each edge of the facet.
        let reach = [0, 1, 2].map(|k| {
            let out = (corners[(k + 1) % 3] - corners[k]).cross(&normal);
            points
                .iter()
                .map(|p| (p - corners[k]).dot(&out))
                .fold(0.0, f64::max)
                / out.norm()
        });
        let mut best = alone;
        let mut set = vec![near];
        for k in 0..3_u32 {
            if reach[k as usize] > 0.0
                && let Some(other) = self.beyond(near, k)
            {
                set.push(other);
            }
        }
        if set.len() == 2 || reach.iter().all(|r| *r <= 0.0) {
            best = best.min(self.over(&set, &normal, points, origin).unwrap_or(best));
        }
        if best <= goal || set.len() == 1 {
            return best;
        }
        // The corner between the edges that are passed, else every one.
        for corner in 0..3_u32 {
            let (a, b) = (corner as usize, (corner as usize + 2) % 3);
            if reach[a] <= 0.0 && reach[b] <= 0.0 {
                continue;
            }
            set.clear();
            self.star(near, corner, |facet| set.push(facet));
            best = best.min(self.over(&set, &normal, points, origin).unwrap_or(best));
            if best <= goal {
                break;
            }
        }
        best
    }

    /// The bound over some facets; `None` where it does not hold.
    fn over(&self, set: &[u32], n: &Vector, points: &[Vector], origin: &Point) -> Option<f64> {
        // Planes as heights along n: (p - at) . slope.
        let mut planes: Vec<(Vector, Vector)> = Vec::with_capacity(set.len());
        let mut walls: Vec<(Vector, Vector, bool)> = Vec::with_capacity(set.len() + 2);
        for &facet in set {
            let normal = self.normals[facet as usize];
            let along = normal.dot(n);
            if along <= 0.2 {
                return None;
            }
            let corners = self.corners(facet).map(|c| c - origin);
            planes.push((corners[0], normal / along));
            for k in 0..3_u32 {
                let beyond = self.beyond(facet, k);
                if beyond.is_some_and(|other| set.contains(&other)) {
                    continue;
                }
                let (p, q) = (corners[k as usize], corners[(k as usize + 1) % 3]);
                let out = (q - p).cross(n).try_normalize(0.0)?;
                walls.push((p, out, beyond.is_none()));
            }
        }
        if !self.once_round(set, n) {
            return None;
        }
        // Moving back from one edge that is passed must not lead past another.
        let beyond =
            |(at, out, _): &&(Vector, Vector, bool)| points.iter().any(|p| (p - at).dot(out) > 0.0);
        let passed: Vec<&Vector> = walls
            .iter()
            .filter(|wall| wall.2)
            .filter(beyond)
            .map(|wall| &wall.1)
            .collect();
        for (k, out) in passed.iter().enumerate() {
            if passed[..k].iter().any(|other| other.dot(out) < 0.0) {
                return None;
            }
        }
        let mut most = 0.0_f64;
        for p in points {
            let mut overhang = 0.0;
            for (at, out, open) in &walls {
                if *open {
                    overhang += (p - at).dot(out).max(0.0);
                }
            }
            let inside = walls
                .iter()
                .all(|(at, out, open)| *open || (p - at).dot(out) + overhang <= 0.0);
            if !inside {
                return None;
            }
            // Moved back by the overhang, a point rises over the steepest plane by
            // so much at most.
            for (at, slope) in &planes {
                let height = (p - at).dot(slope).abs();
                let steep = (slope.norm_squared() - 1.0).max(0.0).sqrt();
                most = most.max(height + overhang * (1.0 + steep));
            }
        }
        Some(most)
    }

    /// Whether facets that hang together lie side by side seen along n, and do not
    /// wind round a vertex more than once: their outline is then a simple polygon.
    fn once_round(&self, set: &[u32], n: &Vector) -> bool {
        if set.len() <= 2 {
            return true;
        }
        let turn: f64 = {
            // Each has the common corner; angles there, seen along n.
            let first = self.triangles[set[0] as usize];
            let common = first
                .iter()
                .find(|&&p| set.iter().all(|&f| self.triangles[f as usize].contains(&p)));
            let Some(&common) = common else { return false };
            set.iter()
                .map(|&f| {
                    let t = self.triangles[f as usize];
                    let k = t.iter().position(|&p| p == common).unwrap_or(0);
                    let at = |i: usize| self.points[t[i % 3] as usize];
                    let (p, q) = (at(k + 1) - at(k), at(k + 2) - at(k));
                    let flat = |v: Vector| v - n * v.dot(n);
                    let (p, q) = (flat(p), flat(q));
                    p.cross(&q).dot(n).atan2(p.dot(&q))
                })
                .sum()
        };
        turn < std::f64::consts::TAU + 0.1
    }
}

fn next(side: u32) -> u32 {
    if side % 3 == 2 { side - 2 } else { side + 1 }
}

fn previous(side: u32) -> u32 {
    if side.is_multiple_of(3) {
        side + 2
    } else {
        side - 1
    }
}
