//! The geometry of one piece edge, prepared for pairing.

use super::EdgeId;
use crate::bezier::{BezierCurve, Side};
use crate::patch_set::{PatchSet, PieceId};
use crate::scalar::{Cuboid, Point};

/// One edge of a piece with what pairing asks of it again and again.
#[derive(Debug, Clone)]
pub(super) struct EdgeCurve {
    pub(super) id: EdgeId,
    pub(super) curve: BezierCurve,
    pub(super) ends: [Point; 2],
    pub(super) cuboid: Cuboid,
    /// Length by quadrature, zero if collapsed.
    pub(super) length: f64,
    /// Whether all control points are one to 1e-9 of the set's size.
    pub(super) collapsed: bool,
    /// Half the shorter of the two edges beside it on its piece that are not
    /// collapsed; infinite if both are.
    pub(super) half_width: f64,
    /// Decides between edges: patch name, side, piece.
    pub(super) rank: u64,
}

impl EdgeCurve {
    fn new(id: EdgeId, curve: BezierCurve, size: f64, rank: u64) -> Self {
        let ends = [curve.control_point(0), curve.control_point(curve.degree())];
        let cuboid = Cuboid::around(curve.control_points());
        let collapsed = cuboid.diagonal() <= COLLAPSED * size;
        let length = if collapsed { 0.0 } else { curve.length() };
        Self {
            id,
            ends,
            cuboid,
            length,
            collapsed,
            half_width: f64::INFINITY,
            rank,
            curve,
        }
    }
}

/// An edge whose control points keep within this fraction of the set's size is
/// one point.
const COLLAPSED: f64 = 1e-9;

/// The four edges of a piece; `patch_rank` is the patch's place by name.
pub(super) fn edges_of(
    set: &PatchSet,
    piece: PieceId,
    patch_rank: u32,
    size: f64,
) -> [EdgeCurve; 4] {
    let surface = &set.pieces()[piece.index()].surface;
    let mut edges = Side::ALL.map(|side| {
        let rank = (u64::from(patch_rank) << 34)
            | ((side.index() as u64) << 32)
            | (piece.index() as u64 & 0xffff_ffff);
        EdgeCurve::new(EdgeId::of(piece, side), surface.edge(side), size, rank)
    });
    for side in 0..4 {
        let beside = if side < 2 { [2, 3] } else { [0, 1] };
        edges[side].half_width = beside
            .iter()
            .filter(|&&k| !edges[k].collapsed)
            .map(|&k| edges[k].length / 2.0)
            .fold(f64::INFINITY, f64::min);
    }
    edges
}
