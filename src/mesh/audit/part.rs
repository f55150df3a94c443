//! Hulls over flat triangles, and parts of parameter triangles.

use super::facet::{Facet, to_segment, to_triangle};
use crate::scalar::{Point, Vector};

/// The largest height of a hull over a facet's plane, or `None` where the hull
/// projects beside the facet: all of it beyond one of the facet's edges. Hulls
/// that come near an edge count, so that rounding cannot leave one out.
pub(super) fn height_over(facet: &Facet, points: &[Vector], origin: &Point) -> Option<f64> {
    let normal = facet.normal?;
    let corners = facet.from(origin);
    let beside = |k: usize| {
        facet.outward(k).is_some_and(|out| {
            let near = 1e-9 * (corners[(k + 1) % 3] - corners[k]).norm();
            points.iter().all(|p| (p - corners[k]).dot(&out) > near)
        })
    };
    if (0..3).any(beside) {
        return None;
    }
    Some(
        points
            .iter()
            .map(|p| (p - corners[0]).dot(&normal).abs())
            .fold(0.0, f64::max),
    )
}

/// A lower bound of the distance between a facet and a segment, both projected
/// on the facet's plane: the best of the separating lines along their sides.
pub(super) fn apart(facet: &Facet, normal: &Vector, from: &Point, to: &Point) -> f64 {
    let flat = |p: &Point| {
        let from_corner = p - facet.corners[0];
        from_corner - normal * from_corner.dot(normal)
    };
    let (p, q) = (flat(from), flat(to));
    let corners = facet.corners.map(|c| flat(&c));
    let mut best = f64::NEG_INFINITY;
    for (k, corner) in corners.iter().enumerate() {
        if let Some(out) = facet.outward(k) {
            best = best.max((p - corner).dot(&out).min((q - corner).dot(&out)));
        }
    }
    if let Some(out) = (q - p).cross(normal).try_normalize(0.0) {
        let sides = corners.map(|c| (c - p).dot(&out));
        let least = sides.iter().copied().fold(f64::INFINITY, f64::min);
        let most = sides.iter().copied().fold(f64::NEG_INFINITY, f64::max);
        if least > 0.0 || most < 0.0 {
            // Wholly on one side: the true distance is that of corners and segment,
            // or ends and sides.
            let exact = corners
                .iter()
                .map(|c| to_segment(c, &p, &q))
                .chain([&p, &q].map(|e| to_triangle(e, &corners)))
                .fold(f64::INFINITY, f64::min);
            best = best.max(exact);
        }
    }
    best
}

/// The middle of two places.
pub(super) fn middle(a: [f64; 2], b: [f64; 2]) -> [f64; 2] {
    [(a[0] + b[0]) / 2.0, (a[1] + b[1]) / 2.0]
}

/// The middle of a triangle.
pub(super) fn centre([a, b, c]: [[f64; 2]; 3]) -> [f64; 2] {
    [(a[0] + b[0] + c[0]) / 3.0, (a[1] + b[1] + c[1]) / 3.0]
}

/// A triangle by the middles of its sides.
pub(in crate::mesh) fn quarters([a, b, c]: [[f64; 2]; 3]) -> [[[f64; 2]; 3]; 4] {
    let (p, q, r) = (middle(a, b), middle(b, c), middle(c, a));
    [[a, p, r], [p, b, q], [r, q, c], [p, q, r]]
}

/// Parameters so close that middles fall on ends.
pub(super) fn is_tiny([a, b, c]: [[f64; 2]; 3]) -> bool {
    [(a, b), (b, c), (c, a)]
        .iter()
        .all(|(p, q)| (p[0] - q[0]).abs().max((p[1] - q[1]).abs()) < 1e-12)
}
