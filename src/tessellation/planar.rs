//! Flat pieces need no triangle-by-triangle proof, however their parameters
//! run.
//!
//! If every control point lies within d of a plane and, seen in the plane,
//! within x of the convex polygon of border vertices, then S is within
//! sqrt((2 d)^2 + x^2) of any triangulation of that polygon (hull lemma). If
//! the border curves lie within D of their chords, the mesh is within
//! sqrt((2 d)^2 + D^2) of S: a point of the polygon farther than D from the
//! border has winding number 1 about it, so S covers it.

use crate::bezier::{BezierPatch, Side};
use crate::sampling::Limits;
use crate::sampling::Outline;
use crate::scalar::{Point, Vector};

/// The proved deviation, both ways, of any triangulation of the border
/// polygon; `None` if the piece is not that flat.
pub(super) fn proof(surface: &BezierPatch, outline: &Outline, limits: &Limits) -> Option<f64> {
    let polygon = polygon(outline);
    let origin = polygon[0];
    let normal = newell(&polygon)?;
    let off_plane = |p: Point| (p - origin).dot(&normal).abs();
    let net = surface.control_points().map(off_plane).fold(0.0, f64::max);
    let border = polygon.iter().map(|&p| off_plane(p)).fold(0.0, f64::max);
    let thick = net + border;
    if thick > 0.1 * limits.chord {
        return None;
    }
    let mut aside = 0.0_f64;
    for (k, &a) in polygon.iter().enumerate() {
        let b = polygon[(k + 1) % polygon.len()];
        let along = b - a;
        let length = along.norm();
        if length <= 0.0 {
            continue;
        }
        let outward = along.cross(&normal) / length;
        let slack = 1e-12 * length;
        if polygon.iter().any(|&p| (p - a).dot(&outward) > slack) {
            return None;
        }
        // Inside a convex polygon's half planes by x means within x of the
        // polygon only away from its corners; at a corner of angle alpha it is
        // x / sin(alpha / 2). Square-cornered or wider: at most x sqrt 2.
        aside = surface
            .control_points()
            .map(|p| (p - a).dot(&outward))
            .fold(aside, f64::max);
    }
    let sharpest = sharpest_corner(&polygon);
    let aside = aside / (sharpest / 2.0).sin().max(1e-6);
    let edges = Side::ALL
        .iter()
        .map(|&side| border_bound(surface, outline, side))
        .fold(0.0, f64::max);
    let reach = surface
        .control_points()
        .map(|p| p.coords.amax())
        .fold(0.0, f64::max);
    // Differences and dot products of coordinates: a few roundings each.
    let slack = 64.0 * f64::EPSILON * reach;
    let bound = thick.hypot(aside.max(edges)) + slack;
    (bound <= limits.chord).then_some(bound)
}

fn polygon(outline: &Outline) -> Vec<Point> {
    let up = |side: Side| {
        outline
            .side(side)
            .iter()
            .map(|b| b.point)
            .collect::<Vec<_>>()
    };
    let mut points = up(Side::V0);
    points.extend(up(Side::U1));
    points.extend(up(Side::V1).iter().rev());
    points.extend(up(Side::U0).iter().rev());
    points.dedup();
    if points.len() > 1 && points[0] == points[points.len() - 1] {
        points.pop();
    }
    points
}

/// Unit normal of a closed polygon (Newell's sum of cross products).
fn newell(polygon: &[Point]) -> Option<Vector> {
    let origin = polygon[0];
    let sum: Vector = (0..polygon.len())
        .map(|k| (polygon[k] - origin).cross(&(polygon[(k + 1) % polygon.len()] - origin)))
        .sum();
    (sum.norm() > 0.0).then(|| sum.normalize())
}

/// Smallest inner angle of a convex polygon, radians.
fn sharpest_corner(polygon: &[Point]) -> f64 {
    let n = polygon.len();
    let angle = |k: usize| {
        let (back, on) = (
            polygon[(k + n - 1) % n] - polygon[k],
            polygon[(k + 1) % n] - polygon[k],
        );
        back.cross(&on).norm().atan2(back.dot(&on))
    };
    (0..n).map(angle).fold(std::f64::consts::PI, f64::min)
}

fn border_bound(surface: &BezierPatch, outline: &Outline, side: Side) -> f64 {
    let curve = surface.edge(side);
    let samples = outline.side(side);
    samples
        .windows(2)
        .map(|pair| {
            let part = curve.restrict(pair[0].t, pair[1].t);
            let (start, end) = (part.control_point(0), part.control_point(part.degree()));
            let moved = (start - pair[0].point)
                .norm()
                .max((end - pair[1].point).norm());
            part.chord_bound() + moved
        })
        .fold(0.0, f64::max)
}
