//! Sized meshes: near-equilateral triangles whose edges follow a size field.
//!
//! Seams between panels, creases and open edges stay mesh edges (`kept`); their
//! curves are sampled by arc length under the size field (`field`, `border`), once
//! for all that meet there. Pieces joined by tangent seams inside a panel are one
//! region: each gets a start of its own (`start`), the starts are joined (`parts`,
//! `region`) and remeshed (`remesh`, `mend`) with every vertex carried on the
//! patches (`atlas`), from piece to piece.

mod assemble;
mod atlas;
mod border;
mod field;
mod figures;
mod job;
mod kept;
mod made;
mod mend;
mod parts;
mod region;
mod remesh;
mod request;
mod start;

pub use figures::{Cause, Figures, Forced, LISTED_DEG};
pub use made::SizedMesh;
pub use request::{DEFAULT_GROWTH, LEAST_GROWTH, Sizing, SizingError};
