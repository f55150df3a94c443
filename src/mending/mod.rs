//! Mending seams: the smallest moves of control points that close gaps and
//! make tangent what is demanded to be.

mod basis;
mod joint;
mod mended;
mod net;
mod plan;
mod smallest;
#[cfg(test)]
mod tests;

pub use mended::{MendedSeam, Mending, MendingError, PatchMove, Reason};
