//! What a triangle's cell, and those around it, add up to.
//!
//! Alone, a triangle T with cell t gives
//!
//! ```text
//! surface to mesh   <= direct                   (S(t) against T itself)
//! mesh to surface   <= max(height, edges)
//! ```
//!
//! The second: project S(t) onto T's plane. Its border is homotopic to T's
//! border by straight lines, each from a curve point to its nearest chord
//! point, no longer than the edge figures. A point m of T that the homotopy
//! sweeps is that near to the curve; any other keeps the winding number 1, so
//! the projection of S(t) covers it, at most `height` away.
//!
//! Parameter lines that wander sideways *in* the surface spoil both figures
//! without harm to the mesh. With the ring of triangles that share a corner
//! with T (normals within theta of T's; sideways excesses x and edge figures
//! less than half the smallest altitude):
//!
//! ```text
//! surface to mesh   <= height + x tan(theta)
//! mesh to surface   <= max over the ring of  height'                                    (T itself)
//!                                            height' + max(x', height' tan) tan         (beyond an edge of T)
//!                                            height' + (2 x' + height' tan) tan         (at a corner of T)
//! ```
//!
//! S over T leaves T by at most x, so it stands over the ring, which there is
//! at most x tan(theta) off T's plane. For the reverse, the homotopy goes round
//! the outer border of the ring, farther from T than it can sweep. What covers
//! m may belong to a neighbour T': its foot y in the plane of T' is then beyond
//! T' by at most x'. Planes that share an edge of T part there, so y is at most
//! x' tan off T's; planes that share a corner only part within twice x' of it
//! (fans of 30 degrees or wider between them).
//!
//! Where the ring meets the border of the piece, S may stand beyond it. The
//! lines of the ring's border edges bound a convex region with T inside; the
//! foot of S moves into it by at most b / sin(alpha / 2), b its excess beyond
//! the lines and alpha the least angle between border edges at one vertex,
//! without getting farther from T (where the border turns inwards at a vertex,
//! one of the two lines there is enough):
//!
//! ```text
//! surface to mesh   <= sqrt(height^2 + (b / sin(alpha / 2))^2) + x tan(theta)
//! ```
//!
//! and the edge figures of border edges join the reverse.

use super::border::{SHARPEST, half_angle};
use super::certificate::Prover;
use super::fill::Proved;
use super::triangulation::BORDER;
use super::work::Work;
use crate::scalar::{Point, Vector};

/// Rings that tilt more than this (45 degrees) prove nothing.
pub(super) const LARGEST_TAN: f64 = 1.0;

/// The figures of one triangle, from its cell and if need be from its ring.
pub(super) fn judge(work: &Work, prover: &mut Prover, t: u32, ring: &mut Vec<u32>) -> Proved {
    let alone = alone(work, t);
    let cell = &work.cells[t as usize];
    if alone.largest() <= work.limits.chord {
        return alone;
    }
    if cell.height > work.limits.chord && work.layout.triangulation.ring(t, ring) {
        // It fails with any ring, and at the border that would cost a net.
        return alone;
    }
    closest(work, prover, t, ring)
}

/// The best figures to be had.
pub(super) fn closest(work: &Work, prover: &mut Prover, t: u32, ring: &mut Vec<u32>) -> Proved {
    let alone = alone(work, t);
    let border = work.layout.triangulation.ring(t, ring);
    with_ring(work, prover, t, ring, border).map_or(alone, |ringed| Proved {
        to_mesh: alone.to_mesh.min(ringed.to_mesh),
        to_surface: alone.to_surface.min(ringed.to_surface),
    })
}

pub(super) fn alone(work: &Work, t: u32) -> Proved {
    let cell = &work.cells[t as usize];
    let edges = cell.edges.iter().copied().fold(0.0, f64::max);
    Proved {
        to_mesh: cell.direct,
        to_surface: cell.height.max(edges),
    }
}

fn with_ring(
    work: &Work,
    prover: &mut Prover,
    t: u32,
    ring: &[u32],
    border: bool,
) -> Option<Proved> {
    let mesh = &work.layout.triangulation;
    let cell = &work.cells[t as usize];
    let flat = &work.flats[t as usize];
    let normal = flat.normal?;
    let (mut altitude, mut tan) = (flat.altitude(), 0.0_f64);
    let (mut sideways, mut edges, mut border_edges) = (0.0_f64, 0.0_f64, 0.0_f64);
    for &member in ring.iter().chain(std::iter::once(&t)) {
        let flat = &work.flats[member as usize];
        let other = flat.normal?;
        let cosine = normal.dot(&other);
        if cosine <= 0.0 {
            return None;
        }
        tan = tan.max(normal.cross(&other).norm() / cosine);
        altitude = altitude.min(flat.altitude());
        let cell = &work.cells[member as usize];
        sideways = sideways.max(cell.sideways);
        for (edge, figure) in cell.edges.iter().enumerate() {
            edges = edges.max(*figure);
            if mesh.neighbours[member as usize][edge] == BORDER {
                border_edges = border_edges.max(*figure);
            }
        }
    }
    if tan > LARGEST_TAN || sideways.max(edges) > altitude / 2.0 {
        return None;
    }
    let mut to_surface = cell.height.max(border_edges);
    for &member in ring {
        let other = &work.cells[member as usize];
        let tilt = other.height * tan;
        let beside = mesh.neighbours[t as usize].contains(&member);
        let lean = if beside {
            other.sideways.max(tilt)
        } else {
            2.0 * other.sideways + tilt
        };
        to_surface = to_surface.max(other.height + lean * tan);
    }
    let height = if border {
        at_border(work, prover, t, ring, &normal)?
    } else {
        cell.height
    };
    Some(Proved {
        to_mesh: height + cell.sideways * tan,
        to_surface,
    })
}

/// The height of a cell whose ring is cut by the border, joined with what it
/// reaches beyond the border's lines.
fn at_border(
    work: &Work,
    prover: &mut Prover,
    t: u32,
    ring: &[u32],
    normal: &Vector,
) -> Option<f64> {
    let mesh = &work.layout.triangulation;
    let flat = &work.flats[t as usize];
    let point = |v: u32| work.layout.points[v as usize];
    let mut lines: Vec<(Point, Vector)> = Vec::new();
    let mut sharpest = 1.0_f64;
    for corner in mesh.triangles[t as usize] {
        // The border edges that end and start at the corner.
        let (mut before, mut after) = (None, None);
        for &member in ring.iter().chain(std::iter::once(&t)) {
            let corners = mesh.triangles[member as usize];
            for edge in 0..3 {
                if mesh.neighbours[member as usize][edge] == BORDER {
                    let ends = [corners[edge], corners[(edge + 1) % 3]];
                    if ends[1] == corner {
                        before = Some((ends, member == t));
                    }
                    if ends[0] == corner {
                        after = Some((ends, member == t));
                    }
                }
            }
        }
        let (Some(before), Some(after)) = (before, after) else {
            continue;
        };
        let along = |([a, b], _): ([u32; 2], bool)| point(b) - point(a);
        let line = |edge: ([u32; 2], bool)| {
            let away = along(edge).cross(normal).try_normalize(0.0)?;
            let start = point(edge.0[0]);
            let slack = 1e-9 * along(edge).norm();
            let holds = flat.corners.iter().all(|c| (c - start).dot(&away) <= slack);
            holds.then_some((start, away))
        };
        let (incoming, outgoing) = (along(before), along(after));
        if let Some(half) = half_angle(&incoming, &outgoing, normal) {
            lines.extend([line(before)?, line(after)?]);
            sharpest = sharpest.min(half);
        } else {
            // Inside one of the two lines is inside the piece.
            let first = if after.1 {
                [after, before]
            } else {
                [before, after]
            };
            lines.push(first.into_iter().find_map(line)?);
        }
    }
    if sharpest < SHARPEST {
        return None;
    }
    let mut most = 0.0_f64;
    for places in mesh.cell(mesh.triangles[t as usize]) {
        most = most.max(prover.beyond(places, flat, &lines, 1.0 / sharpest)?);
    }
    Some(most)
}
