//! The indexed triangle mesh, its strips and its storage.

mod assemble;
mod deviation;
mod edges;
mod measure;
mod model;
mod storage;
mod strips;

pub use deviation::Deviation;
pub use measure::Measures;
pub use model::{Mesh, Part, Vertex};
pub use storage::Storage;
pub use strips::{RESTART, Strips};
