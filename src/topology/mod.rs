//! Edges, seams and loops: who meets whom.
//!
//! Pairing looks at coordinates once; after that every neighbour question is
//! answered by ids.

mod assembly;
mod box_tree;
mod build;
mod check;
mod edge_curve;
mod error;
mod gap;
#[cfg(test)]
mod gap_tests;
mod ids;
mod loops;
mod model;
mod near;
mod nearest;
mod nodes;
mod orientation;
mod overlap;
mod pairing;
mod place;
#[cfg(test)]
mod property_tests;
#[cfg(test)]
pub(crate) mod test_sets;
#[cfg(test)]
mod tests;

pub use check::Flaw;
pub use error::TopologyError;
pub use gap::{Gap, Stretch, difference_bound, gap};
pub use ids::{EdgeId, NodeId, SeamId, SpanId};
pub use model::{Contact, Edge, Node, Seam, Span, Topology};
pub use near::NearMiss;
pub use nearest::{Foot, distance_at_least, nearest, nearest_from};
pub use orientation::{Component, Orientation, normals_agree};
pub use overlap::{Overlap, Sliver};
pub use place::{demand_between, patch_side};
