//! The resolved model: what a file means, once it has been found valid.

use std::ops::Range;

use serde::{Deserialize, Serialize};

use crate::bezier::{BezierPatch, Side};
use crate::scalar::{LengthUnit, Tolerance, id};

id! {
    /// A panel of the set, by position in [`PatchSet::panels`].
    PanelId
    /// A patch of the set, by position in [`PatchSet::patches`].
    PatchId
    /// A Bezier piece of the set, by position in [`PatchSet::pieces`].
    PieceId
}

/// A valid patch set in its own length unit.
#[derive(Debug, Clone)]
pub struct PatchSet {
    pub(crate) name: String,
    pub(crate) unit: LengthUnit,
    pub(crate) tolerances: Tolerances,
    pub(crate) panels: Vec<Panel>,
    pub(crate) patches: Vec<Patch>,
    pub(crate) pieces: Vec<Piece>,
    pub(crate) demands: Vec<SeamDemand>,
}

/// A named group of patches: the part of their names before the last `/`.
#[derive(Debug, Clone)]
pub struct Panel {
    /// The panel's name.
    pub name: String,
    /// Its patches, in file order.
    pub patches: Vec<PatchId>,
}

/// One patch as the user named it.
#[derive(Debug, Clone)]
pub struct Patch {
    /// The full name, panel included.
    pub name: String,
    /// The panel it belongs to.
    pub panel: PanelId,
    /// The kind as written in the file, for example `Bezier` or `Sphere`.
    pub kind: &'static str,
    /// Whether the outward normal is -(S_u x S_v). A mirrored copy has this
    /// turned over, so that both halves face outwards.
    pub flipped: bool,
    /// Its pieces in [`PatchSet::pieces`]: piece (i, j) of the grid stands at
    /// `start + i * (breaks_v.len() - 1) + j`.
    pub pieces: Range<usize>,
    /// Ascending parameters in u where one piece ends and the next begins, end
    /// points included.
    pub breaks_u: Vec<f64>,
    /// The same in v.
    pub breaks_v: Vec<f64>,
}

/// One Bezier piece of a patch.
#[derive(Debug, Clone)]
pub struct Piece {
    /// The patch it is part of.
    pub patch: PatchId,
    /// Its parameter range in the patch's u.
    pub u: [f64; 2],
    /// Its parameter range in the patch's v.
    pub v: [f64; 2],
    /// The surface on the unit square.
    pub surface: BezierPatch,
}

impl Piece {
    /// The patch's own (u, v) of a place on the unit square of the piece.
    #[must_use]
    pub fn patch_parameters(&self, [u, v]: [f64; 2]) -> [f64; 2] {
        let along = |range: [f64; 2], t: f64| range[0] * (1.0 - t) + range[1] * t;
        [along(self.u, u), along(self.v, v)]
    }
}

/// What a seam is asked to be.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize, Deserialize)]
pub enum Demand {
    /// Positions meet.
    G0,
    /// Tangent planes meet.
    G1,
    /// Normal curvatures meet.
    G2,
    /// Positions meet at an angle that is meant.
    #[serde(rename = "crease")]
    Crease,
    /// The edges are not to be joined.
    #[serde(rename = "open")]
    Open,
}

/// A demand the file states for the seam between two patch edges.
#[derive(Debug, Clone)]
pub struct SeamDemand {
    /// One edge.
    pub between: (PatchId, Side),
    /// The other edge.
    pub and: (PatchId, Side),
    /// What is asked of the seam.
    pub demand: Demand,
}

/// The set's tolerances, lengths in its own unit.
#[derive(Debug, Clone, Copy)]
pub struct Tolerances {
    /// Largest distance between mesh and surface. Default 0.1 mm.
    pub chord: Tolerance,
    /// Largest turn of the surface normal in a triangle, degrees, if asked for.
    pub normal_deg: Option<Tolerance>,
    /// Largest triangle edge, if asked for.
    pub max_edge: Option<Tolerance>,
    /// Edges within this distance are joined. Default 0.01 mm.
    pub gap: Tolerance,
    /// Edges within this distance are looked at together. Default 10 x gap.
    pub search: Tolerance,
    /// Largest angle of a tangent seam, degrees. Default 0.1.
    pub tangent_deg: Tolerance,
    /// Smallest angle of an undeclared crease, degrees. Default 10.
    pub crease_deg: Tolerance,
    /// Largest difference of normal curvature at a G2 seam, 1/mm, if asked for.
    pub curvature_per_mm: Option<Tolerance>,
}

impl PatchSet {
    /// The set's name.
    #[must_use]
    pub fn name(&self) -> &str {
        &self.name
    }

    /// The length unit of all coordinates.
    #[must_use]
    pub fn unit(&self) -> LengthUnit {
        self.unit
    }

    /// The tolerances, defaults filled in.
    #[must_use]
    pub fn tolerances(&self) -> &Tolerances {
        &self.tolerances
    }

    /// The tolerances, to be changed by whoever runs the job.
    pub fn tolerances_mut(&mut self) -> &mut Tolerances {
        &mut self.tolerances
    }

    /// All panels, in order of first appearance.
    #[must_use]
    pub fn panels(&self) -> &[Panel] {
        &self.panels
    }

    /// All patches, in file order.
    #[must_use]
    pub fn patches(&self) -> &[Patch] {
        &self.patches
    }

    /// All Bezier pieces, patch by patch.
    #[must_use]
    pub fn pieces(&self) -> &[Piece] {
        &self.pieces
    }

    /// The demands the file states.
    #[must_use]
    pub fn demands(&self) -> &[SeamDemand] {
        &self.demands
    }

    /// The patch a piece belongs to.
    #[must_use]
    pub fn patch_of(&self, piece: PieceId) -> &Patch {
        &self.patches[self.pieces[piece.index()].patch.index()]
    }
}
