//! The indexed triangle mesh, its strips and its storage.

mod model;

pub use model::{Mesh, Part, Vertex};
