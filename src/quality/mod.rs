//! The shape and size of triangles, whatever made the mesh.
//!
//! This is about shape alone. How far a mesh lies from its surface is
//! [`Deviation`](crate::mesh::Deviation), and the two are told apart: the best
//! mesh of a cylinder for a given error has long triangles, and a solver may
//! want none of them.
//!
//! Definitions and acceptable ranges of triangle measures are those of the
//! Verdict report (Stimpson, Ernst, Knupp, Pebay, Thompson: The Verdict Geometric
//! Quality Library, Sandia report SAND2007-1751). All figures are exact to
//! rounding and of every triangle; nothing is sampled.

mod distribution;
mod measure;
mod sheet;
mod triangle;

pub use distribution::{Distribution, WORST, Worst};
pub use measure::Measure;
pub use sheet::{Asked, Quality, Target};
pub use triangle::Triangle;
