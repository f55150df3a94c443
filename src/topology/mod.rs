//! Edges, seams and loops: who meets whom.
//!
//! Pairing looks at coordinates once; after that every neighbour question is
//! answered by ids.

mod ids;
mod model;

pub use ids::{EdgeId, NodeId, SeamId, SpanId};
pub use model::{Contact, Edge, Node, Seam, Span, Topology};
