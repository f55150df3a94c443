//! Piece edges in the user's words: patch, side, parameter.

use super::EdgeId;
use crate::bezier::Side;
use crate::patch_set::{Demand, PatchId, PatchSet};

/// The patch edge a piece edge is part of; `None` for an edge inside the
/// patch's grid of pieces.
#[must_use]
pub fn patch_side(set: &PatchSet, edge: EdgeId) -> Option<(PatchId, Side)> {
    let id = set.pieces()[edge.piece().index()].patch;
    let patch = &set.patches()[id.index()];
    let (rows, columns) = (patch.breaks_u.len() - 1, patch.breaks_v.len() - 1);
    let at = edge.piece().index() - patch.pieces.start;
    let (i, j) = (at / columns, at % columns);
    let outer = match edge.side() {
        Side::U0 => i == 0,
        Side::U1 => i + 1 == rows,
        Side::V0 => j == 0,
        Side::V1 => j + 1 == columns,
    };
    outer.then_some((id, edge.side()))
}

/// The gap two piece edges are held to, in the set's unit.
pub(super) fn gap_between(set: &PatchSet, a: EdgeId, b: EdgeId) -> f64 {
    if !set.has_classes() {
        return set.tolerances().gap.get();
    }
    let end = |edge: EdgeId| {
        let patch = set.pieces()[edge.piece().index()].patch;
        (patch, patch_side(set, edge).map(|(_, side)| side))
    };
    set.seam_limits(end(a), end(b)).gap.value
}

/// Patch name, side and position of the piece in its patch, for messages.
pub(super) fn place(set: &PatchSet, edge: EdgeId) -> (String, String, usize) {
    let patch = set.patch_of(edge.piece());
    (
        patch.name.clone(),
        edge.side().to_string(),
        edge.piece().index() - patch.pieces.start,
    )
}

/// What the file demands between two piece edges; nothing where one of them
/// is inside its patch.
#[must_use]
pub fn demand_between(set: &PatchSet, a: EdgeId, b: EdgeId) -> Option<Demand> {
    set.demand(patch_side(set, a)?, patch_side(set, b)?)
}
