//! Whether the mesh is open only where the set is.
//!
//! Every edge that only one triangle has must lie on the border of its piece,
//! and there on a stretch that no other piece present in the mesh is joined to.

use std::collections::BTreeMap;

use super::cell::Cell;
use super::evidence::Evidence;
use super::finding::{Fault, Finding};
use crate::bezier::Side;
use crate::patch_set::{PatchSet, PieceId};
use crate::scalar::Point;
use crate::topology::{EdgeId, Topology};

/// An edge of the mesh that one triangle has alone.
#[derive(Debug, Clone, Copy)]
struct Open {
    points: [u32; 2],
    cell: usize,
    corner: usize,
}

/// Finds the cracks, those that hang together as one each. `present` says
/// which pieces have triangles.
pub(super) fn check(
    set: &PatchSet,
    topology: &Topology,
    evidence: &Evidence,
    cells: &[Cell],
    present: &[bool],
    findings: &mut Vec<Finding>,
) {
    let mut edges: Vec<(u32, u32, usize, usize)> = Vec::with_capacity(3 * cells.len());
    for (index, cell) in cells.iter().enumerate() {
        for k in 0..3 {
            let (a, b) = (cell.points[k], cell.points[(k + 1) % 3]);
            edges.push((a.min(b), a.max(b), index, k));
        }
    }
    edges.sort_unstable();
    let cracked: Vec<Open> = edges
        .chunk_by(|a, b| (a.0, a.1) == (b.0, b.1))
        .filter(|group| group.len() == 1)
        .map(|group| Open {
            points: [group[0].0, group[0].1],
            cell: group[0].2,
            corner: group[0].3,
        })
        .filter(|open| !is_border(topology, &cells[open.cell], open.corner, present))
        .collect();
    for chain in chains(&cracked) {
        let open = cracked[chain[0]];
        let cell = &cells[open.cell];
        let face = &evidence.faces[cell.face];
        let middle = |a: f64, b: f64| (a + b) / 2.0;
        let corner = |p: u32| face.points.iter().position(|&q| q == p).unwrap_or(0);
        let [a, b] = open.points.map(|p| face.places[corner(p)]);
        let [p, q] = open.points.map(|p| evidence.points[p as usize].coords);
        findings.push(Finding {
            fault: Fault::Crack { edges: chain.len() },
            triangle: Some(cell.face),
            patch: set.patch_of(PieceId::new(cell.piece)).name.clone(),
            place: Some([middle(a[0], b[0]), middle(a[1], b[1])]),
            point: Some(Point::from((p + q) / 2.0)),
        });
    }
}

/// Whether an open edge lies where the set is open too, or joined only to what
/// the mesh leaves out.
fn is_border(topology: &Topology, cell: &Cell, corner: usize, present: &[bool]) -> bool {
    let (a, b) = (cell.places[corner], cell.places[(corner + 1) % 3]);
    let of = |side: Side| &topology.edges()[EdgeId::of(PieceId::new(cell.piece), side).index()];
    let pole = Side::ALL.map(|side| of(side).collapsed);
    // A place at a pole is at both ends of its side.
    let on = |side: Side, [u, v]: [f64; 2]| {
        let (at, end, along, poles) = match side {
            Side::U0 => (u, 0.0, v, [pole[2], pole[3]]),
            Side::U1 => (u, 1.0, v, [pole[2], pole[3]]),
            Side::V0 => (v, 0.0, u, [pole[0], pole[1]]),
            Side::V1 => (v, 1.0, u, [pole[0], pole[1]]),
        };
        let at_pole = (poles[0] && along <= 0.0) || (poles[1] && along >= 1.0);
        (at_pole || at.to_bits() == f64::to_bits(end)).then_some(along)
    };
    Side::ALL.into_iter().any(|side| {
        let (Some(s), Some(t)) = (on(side, a), on(side, b)) else {
            return false;
        };
        let middle = (s + t) / 2.0;
        let edge = of(side);
        let spans = &topology.spans()[edge.spans.clone()];
        let span = spans.iter().find(|span| middle <= span.t[1]);
        span.is_some_and(|span| {
            let joined = &topology.seams()[span.seam.index()].spans;
            let others = joined
                .iter()
                .map(|id| &topology.spans()[id.index()])
                .filter(|other| {
                    (other.edge, other.t[0].to_bits()) != (span.edge, span.t[0].to_bits())
                });
            others
                .into_iter()
                .all(|other| !present[other.edge.piece().index()])
        })
    })
}

/// Whether a place lies on a border of its piece where the set is open too, or
/// joined only to what the mesh leaves out; at an end of a stretch either one counts.
pub(super) fn is_open_at(
    topology: &Topology,
    piece: PieceId,
    [u, v]: [f64; 2],
    present: &[bool],
) -> bool {
    [
        (Side::U0, u <= 0.0, v),
        (Side::U1, u >= 1.0, v),
        (Side::V0, v <= 0.0, u),
        (Side::V1, v >= 1.0, u),
    ]
    .into_iter()
    .filter(|(_, on, _)| *on)
    .any(|(side, _, t)| {
        let edge = &topology.edges()[EdgeId::of(piece, side).index()];
        let spans = &topology.spans()[edge.spans.clone()];
        let here = spans.iter().filter(|span| span.t[0] <= t && t <= span.t[1]);
        here.into_iter().any(|span| {
            // All that meet in the nodes at its ends count where the place is one.
            let alone = |seam: crate::topology::SeamId| {
                let joined = &topology.seams()[seam.index()].spans;
                let other = |id: &&crate::topology::SpanId| {
                    let of = &topology.spans()[id.index()];
                    of.edge.piece() != piece && present[of.edge.piece().index()]
                };
                joined.len() == 1 || !joined.iter().any(|id| other(&id))
            };
            let ends = [0, 1]
                .into_iter()
                .filter(|&e| (t - span.t[e]).abs() <= 1e-12)
                .map(|e| span.nodes[e]);
            let at_node = ends.into_iter().any(|node| {
                topology
                    .spans()
                    .iter()
                    .any(|other| other.nodes.contains(&node) && alone(other.seam))
            });
            alone(span.seam) || at_node
        })
    })
}

/// Edges that share points, by number.
fn chains(edges: &[Open]) -> Vec<Vec<usize>> {
    let mut at: BTreeMap<u32, Vec<usize>> = BTreeMap::new();
    for (index, edge) in edges.iter().enumerate() {
        for point in edge.points {
            at.entry(point).or_default().push(index);
        }
    }
    let mut seen = vec![false; edges.len()];
    let mut chains = Vec::new();
    for start in 0..edges.len() {
        if std::mem::replace(&mut seen[start], true) {
            continue;
        }
        let mut chain = vec![start];
        let mut next = 0;
        while let Some(&edge) = chain.get(next) {
            next += 1;
            for other in edges[edge].points.iter().flat_map(|p| &at[p]) {
                if !std::mem::replace(&mut seen[*other], true) {
                    chain.push(*other);
                }
            }
        }
        chains.push(chain);
    }
    chains
}
