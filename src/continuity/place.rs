//! Piece edges and their parameters as patch edges and places.

use super::figure::{End, PatchEdge, Place};
use crate::bezier::Side;
use crate::patch_set::PatchSet;
use crate::topology::{EdgeId, Stretch};

/// The patch edge, or the line inside the patch, a piece edge lies on.
#[must_use]
pub fn patch_edge(set: &PatchSet, edge: EdgeId) -> End {
    let id = set.pieces()[edge.piece().index()].patch;
    let patch = &set.patches()[id.index()];
    if let Some((_, side)) = crate::topology::patch_side(set, edge) {
        return (id, PatchEdge::Side(side));
    }
    let columns = patch.breaks_v.len() - 1;
    let at = edge.piece().index() - patch.pieces.start;
    let (i, j) = (at / columns, at % columns);
    let line = match edge.side() {
        Side::U0 => PatchEdge::U(i),
        Side::U1 => PatchEdge::U(i + 1),
        Side::V0 => PatchEdge::V(j),
        Side::V1 => PatchEdge::V(j + 1),
    };
    (id, line)
}

/// The place of a pair of edge parameters.
pub(super) fn place(set: &PatchSet, edges: [EdgeId; 2], at: [f64; 2]) -> Place {
    let uv = [0, 1].map(|k| edges[k].side().at(at[k]));
    let pieces = edges.map(|e| &set.pieces()[e.piece().index()]);
    Place {
        point: pieces[0].surface.eval(uv[0][0], uv[0][1]),
        between: pieces[0].patch_parameters(uv[0]),
        and: pieces[1].patch_parameters(uv[1]),
    }
}

/// The length of a stretch of a piece edge, by quadrature.
pub(super) fn length(set: &PatchSet, edge: EdgeId, t: [f64; 2]) -> f64 {
    let curve = set.pieces()[edge.piece().index()].surface.edge(edge.side());
    Stretch {
        curve: &curve,
        range: t,
    }
    .cut()
    .length()
}
