//! The resolved model: what a file means, once it has been found valid.

use std::collections::BTreeMap;
use std::fmt;
use std::ops::Range;

use serde::{Deserialize, Serialize};

use super::{DemandSource, Standard};
use crate::bezier::{BezierPatch, Side};
use crate::scalar::{Cuboid, LengthUnit, Tolerance, id};

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
    /// The same demands by their two ends in ascending order.
    pub(crate) demand_of: BTreeMap<[SeamEnd; 2], Demand>,
    /// Tolerance classes, and demands by pattern.
    pub(crate) standard: Standard,
}

/// A named group of patches: the part of their names before the last `/`.
#[derive(Debug, Clone)]
pub struct Panel {
    /// The panel's name.
    pub name: String,
    /// Its patches, in file order.
    pub patches: Vec<PatchId>,
    /// Largest edge of its triangles in a sized mesh, if the file says.
    pub size: Option<f64>,
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

impl Patch {
    /// The piece that holds a place in the patch's own (u, v), in
    /// [`PatchSet::pieces`]; of two that meet there the one beyond.
    #[must_use]
    pub fn piece_at(&self, [u, v]: [f64; 2]) -> usize {
        let cell = |breaks: &[f64], t: f64| {
            let after = breaks.partition_point(|b| *b <= t);
            after.clamp(1, breaks.len() - 1) - 1
        };
        let columns = self.breaks_v.len() - 1;
        self.pieces.start + cell(&self.breaks_u, u) * columns + cell(&self.breaks_v, v)
    }
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

    /// The place on the unit square of the piece with the patch's own (u, v), or the
    /// nearest there is. Ends are ends exactly, so that borders stay borders.
    #[must_use]
    pub fn unit_parameters(&self, [u, v]: [f64; 2]) -> [f64; 2] {
        let along =
            |range: [f64; 2], t: f64| ((t - range[0]) / (range[1] - range[0])).clamp(0.0, 1.0);
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

/// As a file says it.
impl fmt::Display for Demand {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.pad(match self {
            Self::G0 => "G0",
            Self::G1 => "G1",
            Self::G2 => "G2",
            Self::Crease => "crease",
            Self::Open => "open",
        })
    }
}

/// What one end of a stated demand speaks of, the narrowest first.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum SeamEnd {
    /// One edge of one patch.
    Edge(PatchId, Side),
    /// Any edge of one patch.
    Patch(PatchId),
    /// Any edge of any patch of one panel.
    Panel(PanelId),
}

/// A demand the file states for the seams between two ends. To ask what is
/// demanded of one seam, use [`PatchSet::demand`].
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct SeamDemand {
    /// One end.
    pub between: SeamEnd,
    /// The other end.
    pub and: SeamEnd,
    /// What is asked of the seams.
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
    /// Wider gaps than `gap` that are to be closed in the mesh, if asked for.
    pub close_gaps: Option<Tolerance>,
}

/// Pairs of widths (0 edge, 1 patch, 2 panel) in the order they are tried.
const NARROW_TO_WIDE: [[usize; 2]; 9] = [
    [0, 0],
    [0, 1],
    [1, 0],
    [1, 1],
    [0, 2],
    [2, 0],
    [1, 2],
    [2, 1],
    [2, 2],
];

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

    /// Divides the sizes that the file sets for panels, for meshes of a family.
    pub(crate) fn divide_panel_sizes(&mut self, by: f64) {
        for panel in &mut self.panels {
            panel.size = panel.size.map(|size| size / by);
        }
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

    /// The box of all control points, which holds the surfaces.
    pub(crate) fn cuboid(&self) -> Cuboid {
        let pieces = self.pieces.iter();
        Cuboid::around(pieces.flat_map(|piece| piece.surface.control_points()))
    }

    /// The demands the file states.
    #[must_use]
    pub fn demands(&self) -> &[SeamDemand] {
        &self.demands
    }

    /// What the file demands of a seam between two patch edges, if anything.
    /// The narrowest statement holds: an edge before a patch before a panel,
    /// and of two statements the one whose wider end is narrower.
    #[must_use]
    pub fn demand(&self, a: (PatchId, Side), b: (PatchId, Side)) -> Option<Demand> {
        self.statement(a, b).map(|(demand, _)| demand)
    }

    /// As [`PatchSet::demand`], and whether it was stated by name or by a
    /// pattern of panel names. Names go before patterns; of patterns the first
    /// that fits holds.
    #[must_use]
    pub fn statement(
        &self,
        a: (PatchId, Side),
        b: (PatchId, Side),
    ) -> Option<(Demand, DemandSource)> {
        if let Some(demand) = self.narrowest(&self.demand_of, a, b) {
            return Some((demand, DemandSource::Stated));
        }
        let rule = self.rule(a, b)?;
        Some((rule.demand, DemandSource::Pattern))
    }

    /// The entry for the narrowest pair of ends.
    pub(super) fn narrowest<T: Copy>(
        &self,
        map: &BTreeMap<[SeamEnd; 2], T>,
        a: (PatchId, Side),
        b: (PatchId, Side),
    ) -> Option<T> {
        if map.is_empty() {
            return None;
        }
        let ends = |(patch, side): (PatchId, Side)| {
            [
                SeamEnd::Edge(patch, side),
                SeamEnd::Patch(patch),
                SeamEnd::Panel(self.patches[patch.index()].panel),
            ]
        };
        let (a, b) = (ends(a), ends(b));
        NARROW_TO_WIDE.iter().find_map(|&[i, j]| {
            let mut key = [a[i], b[j]];
            key.sort_unstable();
            map.get(&key).copied()
        })
    }

    /// The patch a piece belongs to.
    #[must_use]
    pub fn patch_of(&self, piece: PieceId) -> &Patch {
        &self.patches[self.pieces[piece.index()].patch.index()]
    }
}
