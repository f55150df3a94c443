//! What can be wrong with a set beyond its surfaces.

use thiserror::Error;

use super::Demand;
use crate::surface::SurfaceFault;

/// What can be wrong with a set as written: fault, then rule.
#[derive(Debug, Clone, PartialEq, Error)]
pub enum SetFault {
    /// The file cannot be read.
    #[error("the file cannot be read: {0}")]
    Unreadable(String),
    /// The bytes are not text.
    #[error("the file is not UTF-8 text; a patch set must be")]
    NotText,
    /// The text is not RON, or not of the schema.
    #[error("{0}")]
    Syntax(String),
    /// No patches.
    #[error("the set has no patches; it must have at least one")]
    Empty,
    /// More patches or pieces than ids.
    #[error("the set has {0} Bezier pieces; at most 4 000 000 are accepted")]
    TooMany(usize),
    /// A name is empty, or the part before or after its slash is.
    #[error("the name `{0}` has an empty part; panel and part must be named")]
    EmptyName(String),
    /// A name is given twice.
    #[error("the name `{0}` is taken; patch names must be unique")]
    DuplicateName(String),
    /// A name that is not there.
    #[error("`{name}` is no {what} of the set; {rule}")]
    UnknownName {
        /// The name.
        name: String,
        /// What was looked for.
        what: &'static str,
        /// The rule.
        rule: &'static str,
    },
    /// A number is not finite or absurd.
    #[error("{name} is {value}; numbers must be finite and within 1e9")]
    Number {
        /// What it is.
        name: &'static str,
        /// Its value.
        value: f64,
    },
    /// A tolerance is not positive.
    #[error("{name} is {value}; a tolerance must be positive and finite")]
    Tolerance {
        /// Which.
        name: &'static str,
        /// Its value.
        value: f64,
    },
    /// The search distance is below the gap.
    #[error("search {search} is below gap {gap}; it must be at least the gap")]
    SearchBelowGap {
        /// The search distance.
        search: f64,
        /// The gap tolerance.
        gap: f64,
    },
    /// An axis of zero length.
    #[error("axis has no length; a direction must not be zero")]
    ZeroAxis,
    /// A size that is none.
    #[error("size is {0}; a size must be positive and finite")]
    Size(f64),
    /// A seam between an edge and itself.
    #[error("both ends are the same edge; a seam is between two edges")]
    SelfSeam,
    /// Two demands for the same pair.
    #[error("{now} is demanded here and {before} before; a seam has one demand")]
    Contradiction {
        /// The earlier demand.
        before: Demand,
        /// The one here.
        now: Demand,
    },
    /// A fault of a surface.
    #[error(transparent)]
    Surface(#[from] SurfaceFault),
}
