//! A figure of a seam and the place where it is attained.

use std::fmt;

use crate::bezier::Side;
use crate::patch_set::{Patch, PatchId};
use crate::scalar::{Bracket, Point};

/// An edge of a patch, or a line inside it where two of its pieces meet.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum PatchEdge {
    /// One of the four sides.
    Side(Side),
    /// The line u = `breaks_u[index]`.
    U(usize),
    /// The line v = `breaks_v[index]`.
    V(usize),
}

impl PatchEdge {
    /// Whether it lies inside the patch.
    #[must_use]
    pub fn is_inner(self) -> bool {
        !matches!(self, Self::Side(_))
    }

    /// The side, if it is one.
    #[must_use]
    pub fn side(self) -> Option<Side> {
        match self {
            Self::Side(side) => Some(side),
            Self::U(_) | Self::V(_) => None,
        }
    }

    /// The edge in words: `U0`, or `u=0.5` for a line inside `patch`.
    #[must_use]
    pub fn label(self, patch: &Patch) -> String {
        match self {
            Self::Side(side) => side.to_string(),
            Self::U(index) => format!("u={}", patch.breaks_u[index]),
            Self::V(index) => format!("v={}", patch.breaks_v[index]),
        }
    }
}

/// A patch edge of the set.
pub type End = (PatchId, PatchEdge);

/// A place on a seam, with the parameters of both patches.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Place {
    /// Where, on the first patch.
    pub point: Point,
    /// The first patch's own (u, v).
    pub between: [f64; 2],
    /// The second patch's own (u, v) at the nearest point.
    pub and: [f64; 2],
}

/// A figure and where its attained value is.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Figure {
    /// Proved upper bound and attained value.
    pub bracket: Bracket,
    /// Where the attained value is.
    pub at: Place,
}

/// What a seam is.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Finding {
    /// Joined, the angle within the tangent tolerance.
    Tangent,
    /// As tangent, but the curvatures differ by more than their tolerance.
    Curvature,
    /// Joined, the angle between the tangent tolerance and the crease angle.
    Break,
    /// Joined at the crease angle or more.
    Crease,
    /// Not joined because demanded open.
    Open,
    /// Nearer than the search distance, but not within the gap tolerance.
    Gap,
    /// A stated seam whose edges lie apart by more than the search distance.
    Apart,
}

impl fmt::Display for Finding {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.pad(match self {
            Self::Tangent => "tangent",
            Self::Curvature => "curvature",
            Self::Break => "break",
            Self::Crease => "crease",
            Self::Open => "open",
            Self::Gap => "gap",
            Self::Apart => "apart",
        })
    }
}

/// Whether the finding is what is demanded.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Verdict {
    /// As demanded, and proved where the figure is a bracket.
    Met,
    /// The attained figure keeps the tolerance, the proved bound does not.
    Undecided,
    /// Not as demanded.
    Fault,
}

impl fmt::Display for Verdict {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.pad(match self {
            Self::Met => "met",
            Self::Undecided => "undecided",
            Self::Fault => "fault",
        })
    }
}
