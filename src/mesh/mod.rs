//! The indexed triangle mesh, its strips and its storage.

mod assemble;
mod audit;
mod budget;
mod deviation;
mod edges;
mod job;
mod least;
mod measure;
mod model;
mod nodes;
mod prediction;
mod rough;
mod storage;
mod streamed;
mod strips;
mod wide;

pub use audit::{Audit, AuditError, Evidence, Face, Fault, Finding, Worst};
pub use budget::{Budget, MOST_BYTES, MOST_TRIANGLES};
pub use deviation::Deviation;
pub(crate) use edges::EdgeTable;
pub(crate) use job::bridgeable;
pub use job::{MeshError, Meshed, Stages};
pub(crate) use least::whole_floor;
pub use measure::Measures;
pub use model::{Mesh, Part, Vertex};
pub use nodes::Nodes;
pub use prediction::Prediction;
pub use storage::Storage;
pub use streamed::Streamed;
pub use strips::{RESTART, Strips};
pub use wide::Spot;
pub(crate) use wide::{Peak, Wide};
