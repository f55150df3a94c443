//! Typed handles.

use crate::bezier::Side;
use crate::patch_set::PieceId;
use crate::scalar::id;

id! {
    /// An edge of a Bezier piece: piece index times four plus side.
    EdgeId
    /// A place where spans begin and end: corners of pieces that are one.
    NodeId
    /// A stretch of one edge between two neighbouring nodes.
    SpanId
    /// All spans that share one run of vertices.
    SeamId
}

impl EdgeId {
    /// The edge of a piece on one side.
    #[must_use]
    pub fn of(piece: PieceId, side: Side) -> Self {
        Self::new(piece.index() * 4 + side.index())
    }

    /// The piece it bounds.
    #[must_use]
    pub fn piece(self) -> PieceId {
        PieceId::new(self.index() / 4)
    }

    /// The side of that piece.
    #[must_use]
    pub fn side(self) -> Side {
        Side::ALL[self.index() % 4]
    }
}
