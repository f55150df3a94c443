//! Every seam between two patch edges: figures, demand, finding, verdict.

use std::cmp::Ordering;

use rayon::prelude::*;

use super::apart::stated_apart;
use super::boundary::{Crowd, OpenLoop, crowds, loops};
use super::figure::{End, Finding, Verdict};
use super::place::patch_edge;
use super::seam::{CURVATURE_FLOOR, SurveyedSeam, survey};
use super::slit::{Slit, slits};
use crate::pace;
use crate::patch_set::{Demand, PatchId, PatchSet};
use crate::topology::{Contact, EdgeId, Orientation, Overlap, Sliver, Topology, demand_between};

/// Spans that share less than this of an edge's parameter only touch.
const MEETING: f64 = 1e-6;

/// All seams of a set, worst first, and its open boundary.
#[derive(Debug, Clone)]
pub struct Survey {
    /// The seams.
    pub seams: Vec<SurveyedSeam>,
    /// Where three or more meet: each is a fault.
    pub crowds: Vec<Crowd>,
    /// The open boundary.
    pub loops: Vec<OpenLoop>,
    /// Open edges that run near one another for a while and then part further
    /// than the search distance: each is a finding.
    pub slits: Vec<Slit>,
    /// Patches that lie on one another: each is a finding.
    pub overlaps: Vec<Overlap>,
    /// Patches nowhere wider than the search distance.
    pub slivers: Vec<Sliver>,
    /// Components, and patches that face the wrong way.
    pub orientation: Orientation,
    /// Patches that were turned over beforehand, for the report.
    pub turned_over: Vec<PatchId>,
}

impl Survey {
    /// Examines every seam of a set.
    #[must_use]
    pub fn of(set: &PatchSet, topology: &Topology) -> Self {
        let mut contacts: Vec<(End, End, &Contact)> = topology
            .contacts()
            .iter()
            .filter(|c| c.joined || counts(set, topology, c))
            .map(|c| {
                let [a, b] = c.edges.map(|e| patch_edge(set, e));
                (a, b, c)
            })
            .collect();
        contacts.sort_by_key(|(a, b, c)| (*a, *b, c.edges));
        let groups: Vec<&[(End, End, &Contact)]> =
            contacts.chunk_by(|p, q| (p.0, p.1) == (q.0, q.1)).collect();
        let floor = CURVATURE_FLOOR / topology.size();
        pace::expect(groups.len() as u64, "seams");
        let mut seams: Vec<SurveyedSeam> = groups
            .par_iter()
            .map(|group| {
                let seam = survey(set, group, floor);
                pace::step(1);
                seam
            })
            .filter(|seam| {
                // Pieces of one patch need no mention where they go on smoothly.
                !(seam.between.0 == seam.and.0
                    && (seam.between.1.is_inner() || seam.and.1.is_inner())
                    && seam.finding == Finding::Tangent
                    && seam.verdict == Verdict::Met)
            })
            .collect();
        seams.extend(stated_apart(set, &seams));
        seams.sort_by(|a, b| worst_first(set, a, b));
        Self {
            seams,
            crowds: crowds(set, topology),
            loops: loops(set, topology),
            slits: slits(set, topology),
            overlaps: Topology::overlaps(set),
            slivers: Topology::slivers(set),
            orientation: Orientation::of(set, topology),
            turned_over: Vec::new(),
        }
    }

    /// Seams that are not as demanded or not proved to be, crowds, slits and
    /// overlaps.
    #[must_use]
    pub fn findings(&self) -> usize {
        let seams = self.seams.iter().filter(|s| s.verdict != Verdict::Met);
        seams.count() + self.crowds.len() + self.slits.len() + self.overlaps.len()
    }
}

fn worst_first(set: &PatchSet, a: &SurveyedSeam, b: &SurveyedSeam) -> Ordering {
    let name = |end: End| (&set.patches()[end.0.index()].name, end.1);
    b.verdict
        .cmp(&a.verdict)
        .then(b.severity.total_cmp(&a.severity))
        .then_with(|| name(a.between).cmp(&name(b.between)))
        .then_with(|| name(a.and).cmp(&name(b.and)))
}

/// Whether edges that are not joined deserve a line: unless demanded open, one
/// of them must be open there. Two sides of a narrow patch between are none of
/// each other's business, nor are a sliver's far side and the sliver's
/// neighbour.
fn counts(set: &PatchSet, topology: &Topology, contact: &Contact) -> bool {
    if demand_between(set, contact.edges[0], contact.edges[1]) == Some(Demand::Open) {
        return true;
    }
    let seams = |edge: EdgeId, range: [f64; 2]| {
        let (low, high) = (range[0].min(range[1]), range[0].max(range[1]));
        topology.spans()[topology.edges()[edge.index()].spans.clone()]
            .iter()
            .filter(move |span| span.t[1].min(high) - span.t[0].max(low) > MEETING)
            .map(|span| &topology.seams()[span.seam.index()].spans)
    };
    let [a, b] = contact.edges;
    let free = |edge, range| seams(edge, range).any(|spans| spans.len() == 1);
    let beside = |edge, range, other: EdgeId| {
        let mut spans = seams(edge, range).flatten();
        spans.any(|s| topology.spans()[s.index()].edge.piece() == other.piece())
    };
    (free(a, contact.first) && !beside(b, contact.second, a))
        || (free(b, contact.second) && !beside(a, contact.first, b))
}
