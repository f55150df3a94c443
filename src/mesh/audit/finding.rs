//! What an audit finds, each with its place.

use std::fmt;

use crate::scalar::Point;

/// Something that is not as the set and the chord tolerance ask.
#[derive(Debug, Clone, PartialEq)]
pub struct Finding {
    /// What is wrong.
    pub fault: Fault,
    /// The triangle, counted from 0 in the file's order, where it is one's.
    pub triangle: Option<usize>,
    /// The patch by its full name.
    pub patch: String,
    /// The patch's own (u, v).
    pub place: Option<[f64; 2]>,
    /// The place in space, on the mesh or the surface.
    pub point: Option<Point>,
}

/// The kinds of fault; lengths in the set's unit.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Fault {
    /// The mesh names a patch that the set does not have.
    UnknownPatch,
    /// A corner's (u, v) is outside the patch.
    OutsidePatch,
    /// A triangle spans more than one Bezier piece, so there is no one net to
    /// prove it by.
    AcrossPieces,
    /// A vertex is not where its patch is at its (u, v).
    OffSurface {
        /// How far off.
        distance: f64,
        /// How far it may be: rounding, or the gap tolerance on a border.
        allowed: f64,
        /// How many triangles say so.
        triangles: usize,
    },
    /// A triangle is turned over against its patch.
    TurnedOver,
    /// A triangle is there twice.
    Doubled {
        /// The first one.
        first: usize,
    },
    /// A part of the patch's parameters has no triangle.
    Hole {
        /// Its share of the patch's parameter rectangle.
        share: f64,
    },
    /// A part of the patch's parameters is covered more than once.
    Overlap {
        /// Its share of the patch's parameter rectangle.
        share: f64,
    },
    /// Mesh edges are open where the set is not.
    Crack {
        /// How many edges hang together.
        edges: usize,
    },
    /// The surface is farther from the mesh than the chord tolerance.
    Deviates {
        /// The distance of a real point of the surface.
        attained: f64,
    },
    /// The deviation could not be proved within the chord tolerance.
    Unproved {
        /// What could be proved.
        proved: f64,
    },
}

impl Fault {
    /// A short name for programs.
    #[must_use]
    pub fn name(&self) -> &'static str {
        match self {
            Self::UnknownPatch => "unknown_patch",
            Self::OutsidePatch => "outside_patch",
            Self::AcrossPieces => "across_pieces",
            Self::OffSurface { .. } => "off_surface",
            Self::TurnedOver => "turned_over",
            Self::Doubled { .. } => "doubled",
            Self::Hole { .. } => "hole",
            Self::Overlap { .. } => "overlap",
            Self::Crack { .. } => "crack",
            Self::Deviates { .. } => "deviates",
            Self::Unproved { .. } => "unproved",
        }
    }
}

impl fmt::Display for Fault {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::UnknownPatch => write!(
                f,
                "the set has no such patch; is this the set the mesh was made from?"
            ),
            Self::OutsidePatch => write!(
                f,
                "a corner's (u, v) is outside the patch; it must be within its parameters"
            ),
            Self::AcrossPieces => write!(
                f,
                "the triangle spans more than one Bezier piece of its patch; it must keep to one"
            ),
            Self::OffSurface {
                distance,
                allowed,
                triangles,
            } => write!(
                f,
                "a vertex is {distance:.3e} off its patch at its (u, v), by {triangles} triangles; at most {allowed:.3e} is allowed there"
            ),
            Self::TurnedOver => write!(
                f,
                "the triangle is turned over; its corners must run counterclockwise seen from outside"
            ),
            Self::Doubled { first } => write!(f, "the triangle is there twice, first as {first}"),
            Self::Hole { share } => write!(
                f,
                "no triangle covers {share:.3e} of the patch's parameters here; triangles are missing"
            ),
            Self::Overlap { share } => write!(
                f,
                "{share:.3e} of the patch's parameters here is covered more than once"
            ),
            Self::Crack { edges } => write!(
                f,
                "{edges} open mesh edges where the set is joined; joined surfaces must share their vertices"
            ),
            Self::Deviates { attained } => write!(
                f,
                "the surface is {attained:.6e} from the mesh, more than the chord tolerance"
            ),
            Self::Unproved { proved } => write!(
                f,
                "the deviation can only be proved within {proved:.6e}, more than the chord tolerance"
            ),
        }
    }
}
