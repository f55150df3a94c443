//! The patch set: the RON file, its validation, and the resolved model that
//! everything downstream sees.

mod model;

pub use model::{
    Demand, Panel, PanelId, Patch, PatchId, PatchSet, Piece, PieceId, SeamDemand, SeamEnd,
    Tolerances,
};
