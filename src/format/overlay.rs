//! Lines and points beside a mesh, for other people's viewers.

use crate::scalar::Point;

/// How points are joined.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Stroke {
    /// Not at all.
    Points,
    /// Two by two.
    Segments,
    /// One after the other.
    Strip,
}

/// Lines or points of one kind and colour.
#[derive(Debug, Clone, PartialEq)]
pub struct Overlay {
    /// What they are part of, for example `seams`.
    pub group: &'static str,
    /// What they are, for example `break`.
    pub name: String,
    /// How the points of a run are joined.
    pub stroke: Stroke,
    /// The runs; empty ones are left out.
    pub runs: Vec<Vec<Point>>,
    /// Red, green and blue in linear light, 0 to 1.
    pub colour: [f32; 3],
}
