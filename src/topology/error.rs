//! Why edges could not be paired.

use thiserror::Error;

/// A set whose edges cannot be put together soundly.
#[derive(Debug, Clone, PartialEq, Error)]
pub enum TopologyError {
    /// The two ends of an edge would become one place.
    #[error(
        "patch `{patch}`, edge {edge} (piece {piece}), {length} long: both its ends are joined to one place; an edge that is not a point must be longer than what joins its neighbours, so lower the gap tolerance ({gap}) or mend the patch"
    )]
    ShortEdge {
        /// The patch's name.
        patch: String,
        /// The side of the piece, as text.
        edge: String,
        /// Position of the piece in its patch.
        piece: usize,
        /// Length of the edge.
        length: f64,
        /// The gap tolerance.
        gap: f64,
    },
    /// Corners that fall on edges did not settle.
    #[error(
        "patch `{patch}`, edge {edge} (piece {piece}): the corners that fall on it do not settle; lower the gap tolerance ({gap}) or mend the edges there"
    )]
    Unsettled {
        /// The patch's name.
        patch: String,
        /// The side of the piece, as text.
        edge: String,
        /// Position of the piece in its patch.
        piece: usize,
        /// The gap tolerance.
        gap: f64,
    },
}
