//! The patch set: the RON file, its validation, and the resolved model that
//! everything downstream sees.
//!
//! [`PatchSet::read`] and [`PatchSet::from_ron`] read text, [`PatchSet::build`]
//! takes the same structures from code. All three pass through the same
//! checks, and there is no other way to a [`PatchSet`].

mod build;
mod collector;
mod demand;
mod diagnostic;
mod fault;
mod file;
mod locate;
mod model;
mod motion;
mod name;
mod reading;
mod resolve;
mod standard;
mod syntax;
mod tolerance;
mod warning;

pub use diagnostic::{Diagnostic, Faults, Finding, Position, Reading, render};
pub use fault::SetFault;
pub use file::{
    Axis, ClassEntry, CopyEntry, PatchEntry, PlaceEntry, SeamEndEntry, SeamEntry, SetFile,
    SizeEntry, ToleranceEntry, Units,
};
pub(crate) use locate::Locator;
pub use model::{
    Demand, Panel, PanelId, Patch, PatchId, PatchSet, Piece, PieceId, SeamDemand, SeamEnd,
    Tolerances,
};
pub(crate) use motion::Motion;
pub(crate) use name::panel_of;
pub(crate) use standard::Standard;
pub use standard::{Class, DemandSource, Limit, SeamLimits, Source};
pub use tolerance::{
    DEFAULT_CHORD_MM, DEFAULT_CREASE_DEG, DEFAULT_GAP_MM, DEFAULT_SEARCH_GAPS, DEFAULT_TANGENT_DEG,
};
pub use warning::Warning;
