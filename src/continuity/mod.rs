//! Continuity across seams: gap (G0), tangent angle (G1), and the verdict.

mod angle;
mod bernstein;
mod smooth;
mod strip;
#[cfg(test)]
mod tests;

pub use angle::{Angle, Meeting};
pub use smooth::smooth_seams;
