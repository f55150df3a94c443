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
//! with T (normals within theta of T's, sideways excess x at most and edge
//! figures less than half the smallest altitude a):
//!
//! ```text
//! surface to mesh   <= height + x tan(theta)
//! mesh to surface   <= height_ring + (2 x + height_ring tan(theta)) tan(theta)
//! ```
//!
//! S over T leaves T by at most x, so it stands over the ring, which there is
//! at most x tan(theta) off T's plane. For the reverse, the homotopy goes round
//! the outer border of the ring, farther from T than it can sweep; what covers
//! m may then belong to a neighbour, which adds its own excess and tilt. Where
//! the ring meets the border of the piece the edge figures there are counted,
//! and surface to mesh stays with `direct`.

use super::fill::{Proved, Work};
use super::triangulation::BORDER;

/// Rings that tilt more than this (45 degrees) prove nothing.
const LARGEST_TAN: f64 = 1.0;

/// Below this part of the chord the triangle's own figures are good enough.
const GOOD: f64 = 0.9;

pub(super) fn judge(work: &Work, t: u32, chord: f64, ring: &mut Vec<u32>) -> Proved {
    let cell = &work.cells[t as usize];
    let edges = cell.edges.iter().copied().fold(0.0, f64::max);
    let alone = Proved {
        to_mesh: cell.direct,
        to_surface: cell.height.max(edges),
    };
    if alone.to_mesh.max(alone.to_surface) <= GOOD * chord {
        return alone;
    }
    let border = work.layout.triangulation.ring(t, ring);
    ring_figures(work, t, ring, border).map_or(alone, |with_ring| Proved {
        to_mesh: alone.to_mesh.min(with_ring.to_mesh),
        to_surface: alone.to_surface.min(with_ring.to_surface),
    })
}

fn ring_figures(work: &Work, t: u32, ring: &[u32], border: bool) -> Option<Proved> {
    let normal = work.flats[t as usize].normal?;
    let (mut altitude, mut tan) = (f64::MAX, 0.0_f64);
    let (mut height, mut sideways, mut edges, mut border_edges) =
        (0.0_f64, 0.0_f64, 0.0_f64, 0.0_f64);
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
        height = height.max(cell.height);
        sideways = sideways.max(cell.sideways);
        for (edge, figure) in cell.edges.iter().enumerate() {
            edges = edges.max(*figure);
            if work.layout.triangulation.neighbours[member as usize][edge] == BORDER {
                border_edges = border_edges.max(*figure);
            }
        }
    }
    if tan > LARGEST_TAN || sideways.max(edges) > altitude / 2.0 {
        return None;
    }
    let cell = &work.cells[t as usize];
    Some(Proved {
        to_mesh: if border {
            cell.direct
        } else {
            cell.height + cell.sideways * tan
        },
        to_surface: (height + (2.0 * sideways + height * tan) * tan).max(border_edges),
    })
}
