//! Triangles for every piece, each proved within the chord tolerance.

mod certificate;
mod field;
mod fill;
mod lattice;
mod layout;
mod limits;
mod outline;
mod planar;
mod quadratic;
mod stitch;
mod triangulation;
mod verdict;

pub use limits::Limits;
pub use outline::{BorderVertex, Outline};
