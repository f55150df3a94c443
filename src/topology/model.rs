//! The result of pairing.

use std::ops::Range;

use super::near::NearMiss;
use super::overlap::{Overlap, Sliver, overlaps, slivers};
use super::{EdgeId, NodeId, SeamId, SpanId};
use crate::patch_set::PatchSet;
use crate::scalar::{Bracket, Point};

/// One edge of a Bezier piece.
#[derive(Debug, Clone)]
pub struct Edge {
    /// Whether the whole edge is one point (a pole). A collapsed edge has no
    /// span; both its ends are `nodes[0]`.
    pub collapsed: bool,
    /// The nodes at parameter 0 and 1.
    pub nodes: [NodeId; 2],
    /// Its spans in [`Topology::spans`], ascending in the edge's parameter,
    /// covering 0 to 1 without a hole.
    pub spans: Range<usize>,
}

/// A stretch of an edge from `t[0]` to `t[1]`, `t[0] < t[1]`.
#[derive(Debug, Clone)]
pub struct Span {
    /// The edge it lies on.
    pub edge: EdgeId,
    /// Parameters of its ends on that edge.
    pub t: [f64; 2],
    /// Nodes at `t[0]` and `t[1]`.
    pub nodes: [NodeId; 2],
    /// The seam it takes part in.
    pub seam: SeamId,
    /// Whether it runs against the seam's master span.
    pub reversed: bool,
    /// Distance from the master span (two-sided): zero for the master.
    pub gap: Bracket,
}

/// All spans joined along one stretch, at least one. One span: an open edge.
/// Two: an ordinary seam. Three or more: a non-manifold one.
#[derive(Debug, Clone)]
pub struct Seam {
    /// The spans; the first is the master, the others follow by edge.
    pub spans: Vec<SpanId>,
}

/// A place where spans end.
#[derive(Debug, Clone)]
pub struct Node {
    /// Where the mesh vertex stands: on the least edge (patch name, side,
    /// piece) that has a corner or a split here.
    pub point: Point,
}

/// Two edges that keep within the search distance over a common stretch,
/// joined or not. This is what the seam report speaks of.
#[derive(Debug, Clone)]
pub struct Contact {
    /// The two edges, the lesser one (patch name, side, piece) first.
    pub edges: [EdgeId; 2],
    /// The stretch on the first edge, ascending.
    pub first: [f64; 2],
    /// The matching stretch on the second edge: `second[0]` lies at `first[0]`,
    /// so it descends where the edges run against each other.
    pub second: [f64; 2],
    /// Hausdorff distance of the two stretches.
    pub gap: Bracket,
    /// Where the attained gap is: the parameter on the first edge.
    pub gap_at: f64,
    /// Whether the mesh is joined here: the gap is proved to be within the gap
    /// tolerance (and half the shorter edge), the seam is not demanded open,
    /// and joining does not close up an edge shorter than the tolerance.
    pub joined: bool,
    /// Whether it is joined only because wider gaps were to be closed.
    pub bridged: bool,
}

/// Who meets whom in a patch set.
#[derive(Debug, Clone)]
pub struct Topology {
    pub(crate) edges: Vec<Edge>,
    pub(crate) spans: Vec<Span>,
    pub(crate) seams: Vec<Seam>,
    pub(crate) nodes: Vec<Node>,
    pub(crate) contacts: Vec<Contact>,
    pub(crate) loops: Vec<Vec<SpanId>>,
    pub(crate) size: f64,
    pub(crate) near_misses: Vec<NearMiss>,
}

impl Topology {
    /// Open edges that keep near one another for a stretch, but part further
    /// than the search distance; by edge.
    #[must_use]
    pub fn near_misses(&self) -> &[NearMiss] {
        &self.near_misses
    }

    /// Patches of the set that lie on one another, by patch: judged at nine
    /// places a piece.
    #[must_use]
    pub fn overlaps(set: &PatchSet) -> Vec<Overlap> {
        overlaps(set)
    }

    /// Patches of the set nowhere wider than the search distance, by patch.
    #[must_use]
    pub fn slivers(set: &PatchSet) -> Vec<Sliver> {
        slivers(set)
    }

    /// The diagonal of the box of all control points.
    #[must_use]
    pub fn size(&self) -> f64 {
        self.size
    }

    /// All edges; an [`EdgeId`] is its index.
    #[must_use]
    pub fn edges(&self) -> &[Edge] {
        &self.edges
    }

    /// All spans.
    #[must_use]
    pub fn spans(&self) -> &[Span] {
        &self.spans
    }

    /// All seams.
    #[must_use]
    pub fn seams(&self) -> &[Seam] {
        &self.seams
    }

    /// All nodes.
    #[must_use]
    pub fn nodes(&self) -> &[Node] {
        &self.nodes
    }

    /// Every pair of edges within the search distance, by edge.
    #[must_use]
    pub fn contacts(&self) -> &[Contact] {
        &self.contacts
    }

    /// The open boundary: chains of spans that have no partner, in order. A
    /// chain is closed, unless it ends where three or more pieces meet along
    /// one seam. Parts that touch at a point keep loops of their own.
    #[must_use]
    pub fn open_loops(&self) -> &[Vec<SpanId>] {
        &self.loops
    }
}
