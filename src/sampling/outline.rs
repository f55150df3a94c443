//! The border of a piece, as its seams have sampled it.

use crate::bezier::Side;
use crate::scalar::Point;

/// A vertex on the border of a piece.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct BorderVertex {
    /// Parameter along the side, 0 to 1.
    pub t: f64,
    /// The mesh vertex all uses of the seam share.
    pub vertex: u32,
    /// Its place; within the gap tolerance of the piece's own edge.
    pub point: Point,
}

/// The vertices on the four sides of a piece.
#[derive(Debug, Clone, PartialEq)]
pub struct Outline {
    /// For each side in the order of [`Side::ALL`]: its vertices by ascending
    /// parameter, both corners included. A collapsed side has its corner twice.
    pub sides: [Vec<BorderVertex>; 4],
    /// Which sides are one point.
    pub collapsed: [bool; 4],
}

impl Outline {
    /// The vertices of one side.
    #[must_use]
    pub fn side(&self, side: Side) -> &[BorderVertex] {
        &self.sides[side.index()]
    }
}
