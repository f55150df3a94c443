//! Every seam between two patch edges: figures, demand, finding, verdict.

use std::cmp::Ordering;

use rayon::prelude::*;

use super::angle::Meeting;
use super::apart::apart;
use super::figure::{End, Figure, Finding, PatchEdge, Place, Verdict};
use super::matched::Matched;
use super::standing::{Standing, judge};
use crate::bezier::Side;
use crate::patch_set::{Demand, PatchSet, PieceId, SeamEnd};
use crate::scalar::Bracket;
use crate::topology::{Contact, EdgeId, Stretch, Topology};

/// A step of curvature below this over the set's size is as good as none.
const CURVATURE_FLOOR: f64 = 1e-6;

/// One seam: all that two patch edges have in common.
#[derive(Debug, Clone)]
pub struct SurveyedSeam {
    /// The edge of lesser patch name and side.
    pub between: End,
    /// The other edge.
    pub and: End,
    /// Length of the common stretch along the first edge (quadrature).
    pub length: f64,
    /// Whether the mesh is joined all along.
    pub joined: bool,
    /// Whether the stated normals point to one side of the joined surface.
    pub normals_agree: bool,
    /// The gap: Hausdorff distance of the common stretches.
    pub gap: Figure,
    /// The angle of the tangent planes in degrees; `None` for edges apart.
    pub angle_deg: Option<Figure>,
    /// The step of normal curvature in 1/mm; its bracket's upper end is infinite
    /// where the curvature grows without limit.
    pub curvature_per_mm: Option<Figure>,
    /// What is demanded.
    pub demand: Demand,
    /// Whether the file states the demand; otherwise it follows from the angle.
    pub stated: bool,
    /// What the seam is.
    pub finding: Finding,
    /// Whether that is as demanded.
    pub verdict: Verdict,
    /// The figure that decides in units of its tolerance.
    pub severity: f64,
}

/// A seam in which three or more edges take part.
#[derive(Debug, Clone, PartialEq)]
pub struct Crowd {
    /// The patch edges, by patch name and side.
    pub edges: Vec<End>,
    /// Length along the master edges.
    pub length: f64,
}

/// A chain of the open boundary.
#[derive(Debug, Clone, PartialEq)]
pub struct OpenLoop {
    /// The patch edges along it, in order.
    pub edges: Vec<End>,
    /// Its length.
    pub length: f64,
}

/// All seams of a set, worst first, and its open boundary.
#[derive(Debug, Clone)]
pub struct Survey {
    /// The seams.
    pub seams: Vec<SurveyedSeam>,
    /// Where three or more meet: each is a fault.
    pub crowds: Vec<Crowd>,
    /// The open boundary.
    pub loops: Vec<OpenLoop>,
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
        let mut seams: Vec<SurveyedSeam> = groups
            .par_iter()
            .map(|group| survey(set, group, floor))
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
        }
    }

    /// Seams that are not as demanded or not proved to be, and crowds.
    #[must_use]
    pub fn findings(&self) -> usize {
        let seams = self.seams.iter().filter(|s| s.verdict != Verdict::Met);
        seams.count() + self.crowds.len()
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
/// each other's business.
fn counts(set: &PatchSet, topology: &Topology, contact: &Contact) -> bool {
    if crate::topology::demand_between(set, contact.edges[0], contact.edges[1])
        == Some(Demand::Open)
    {
        return true;
    }
    let free = |edge: EdgeId, range: [f64; 2]| {
        let (low, high) = (range[0].min(range[1]), range[0].max(range[1]));
        topology.spans()[topology.edges()[edge.index()].spans.clone()]
            .iter()
            .filter(|span| span.t[0].midpoint(span.t[1]) > low)
            .filter(|span| span.t[0].midpoint(span.t[1]) < high)
            .any(|span| topology.seams()[span.seam.index()].spans.len() == 1)
    };
    free(contact.edges[0], contact.first) || free(contact.edges[1], contact.second)
}

/// The patch edge, or the line inside the patch, a piece edge lies on.
#[must_use]
pub fn patch_edge(set: &PatchSet, edge: EdgeId) -> End {
    let id = set.pieces()[edge.piece().index()].patch;
    let patch = &set.patches()[id.index()];
    if let Some((_, side)) = crate::topology::patch_side(set, edge) {
        return (id, PatchEdge::Side(side));
    }
    let columns = patch.breaks_v.len() - 1;
    let at = edge.piece().index() - patch.pieces.start;
    let (i, j) = (at / columns, at % columns);
    let line = match edge.side() {
        Side::U0 => PatchEdge::U(i),
        Side::U1 => PatchEdge::U(i + 1),
        Side::V0 => PatchEdge::V(j),
        Side::V1 => PatchEdge::V(j + 1),
    };
    (id, line)
}

/// The place of a pair of edge parameters.
pub(super) fn place(set: &PatchSet, edges: [EdgeId; 2], at: [f64; 2]) -> Place {
    let uv = [0, 1].map(|k| edges[k].side().at(at[k]));
    let pieces = edges.map(|e| &set.pieces()[e.piece().index()]);
    Place {
        point: pieces[0].surface.eval(uv[0][0], uv[0][1]),
        between: pieces[0].patch_parameters(uv[0]),
        and: pieces[1].patch_parameters(uv[1]),
    }
}

fn survey(set: &PatchSet, group: &[(End, End, &Contact)], floor: f64) -> SurveyedSeam {
    let (between, and, _) = group[0];
    let mut length = 0.0;
    let (mut gap, mut angle, mut curvature) = (None, None, None);
    let mut normals_agree = true;
    for (_, _, contact) in group {
        let meeting = Meeting {
            edges: contact.edges,
            first: contact.first,
            second: contact.second,
        };
        let curve = |k: usize| {
            let edge = contact.edges[k];
            set.pieces()[edge.piece().index()].surface.edge(edge.side())
        };
        let (first, second) = (curve(0), curve(1));
        let stretch = Stretch {
            curve: &first,
            range: contact.first,
        };
        length += stretch.cut().length();
        let range = contact.second;
        let low_high = [range[0].min(range[1]), range[0].max(range[1])];
        let here = first.eval(contact.gap_at);
        let x = (contact.gap_at - contact.first[0]) / (contact.first[1] - contact.first[0]);
        let foot = crate::topology::nearest_from(&second, &here, meeting.at(x)[1], low_high);
        raise(&mut gap, contact.gap, || {
            place(set, contact.edges, [contact.gap_at, foot.t])
        });
        let matched = Matched::new(&meeting, set);
        let found = meeting.angle_of(set, &matched);
        raise(&mut angle, found.bracket, || {
            place(set, contact.edges, found.at)
        });
        if let Some(step) = meeting.curvature_of(set, &matched, floor) {
            raise(&mut curvature, step.bracket, || {
                place(set, contact.edges, step.at)
            });
        }
        normals_agree &= meeting.normals_agree(set);
    }
    let gap = gap.expect("a group has a contact");
    let joined = group.iter().all(|(_, _, c)| c.joined);
    let stated = match (between.1, and.1) {
        (PatchEdge::Side(p), PatchEdge::Side(q)) => set.demand((between.0, p), (and.0, q)),
        _ => None,
    };
    let Standing {
        demand,
        finding,
        verdict,
        severity,
    } = judge(
        set.tolerances(),
        stated,
        joined,
        gap.bracket,
        angle.map_or(Bracket::ZERO, |a: Figure| a.bracket),
        curvature.map(|c: Figure| c.bracket.attained),
    );
    SurveyedSeam {
        between,
        and,
        length,
        joined,
        normals_agree,
        gap,
        angle_deg: angle,
        curvature_per_mm: curvature,
        demand,
        stated: stated.is_some(),
        finding,
        verdict,
        severity,
    }
}

fn raise(held: &mut Option<Figure>, found: Bracket, at: impl Fn() -> Place) {
    *held = Some(match *held {
        Some(figure) if figure.bracket.attained >= found.attained => Figure {
            bracket: figure.bracket.max(found),
            at: figure.at,
        },
        Some(figure) => Figure {
            bracket: figure.bracket.max(found),
            at: at(),
        },
        None => Figure {
            bracket: found,
            at: at(),
        },
    });
}

/// Stated seams between two edges that have no contact at all.
fn stated_apart(set: &PatchSet, seams: &[SurveyedSeam]) -> Vec<SurveyedSeam> {
    let mut met: Vec<[End; 2]> = seams.iter().map(|s| sorted([s.between, s.and])).collect();
    met.sort_unstable();
    let mut found: Vec<SurveyedSeam> = Vec::new();
    for stated in set.demands() {
        let (SeamEnd::Edge(p, a), SeamEnd::Edge(q, b)) = (stated.between, stated.and) else {
            continue;
        };
        let mut ends = [(p, PatchEdge::Side(a)), (q, PatchEdge::Side(b))];
        let name = |end: &End| (&set.patches()[end.0.index()].name, end.1);
        ends.sort_by(|x, y| name(x).cmp(&name(y)));
        if met.binary_search(&sorted(ends)).is_ok()
            || found.iter().any(|s| [s.between, s.and] == ends)
        {
            continue;
        }
        let gap = apart(
            set,
            ends.map(|(patch, edge)| outline(set, patch.index(), edge)),
        );
        let tolerance = set.tolerances().gap.get();
        let open = stated.demand == Demand::Open;
        found.extend(gap.map(|gap| SurveyedSeam {
            between: ends[0],
            and: ends[1],
            length: 0.0,
            joined: false,
            normals_agree: true,
            gap,
            angle_deg: None,
            curvature_per_mm: None,
            demand: stated.demand,
            stated: true,
            finding: if open { Finding::Open } else { Finding::Apart },
            verdict: if open { Verdict::Met } else { Verdict::Fault },
            severity: if open {
                0.0
            } else {
                gap.bracket.attained / tolerance
            },
        }));
    }
    found
}

fn sorted(mut ends: [End; 2]) -> [End; 2] {
    ends.sort_unstable();
    ends
}

/// The piece edges along one side of a patch.
fn outline(set: &PatchSet, patch: usize, edge: PatchEdge) -> Vec<EdgeId> {
    let PatchEdge::Side(side) = edge else {
        return Vec::new();
    };
    set.patches()[patch]
        .pieces
        .clone()
        .map(|piece| EdgeId::of(PieceId::new(piece), side))
        .filter(|&e| crate::topology::patch_side(set, e).is_some())
        .collect()
}

fn crowds(set: &PatchSet, topology: &Topology) -> Vec<Crowd> {
    let mut found: Vec<Crowd> = Vec::new();
    for seam in topology.seams().iter().filter(|s| s.spans.len() > 2) {
        let spans = seam.spans.iter().map(|s| &topology.spans()[s.index()]);
        let mut edges: Vec<End> = spans.map(|s| patch_edge(set, s.edge)).collect();
        edges.sort_by_key(|e| (&set.patches()[e.0.index()].name, e.1));
        let master = &topology.spans()[seam.spans[0].index()];
        found.push(Crowd {
            edges,
            length: span_length(set, master.edge, master.t),
        });
    }
    let names = |c: &Crowd| -> Vec<(String, PatchEdge)> {
        let name = |e: &End| (set.patches()[e.0.index()].name.clone(), e.1);
        c.edges.iter().map(name).collect()
    };
    found.sort_by_cached_key(names);
    let mut merged: Vec<Crowd> = Vec::new();
    for crowd in found {
        match merged.last_mut() {
            Some(last) if last.edges == crowd.edges => last.length += crowd.length,
            _ => merged.push(crowd),
        }
    }
    merged
}

fn loops(set: &PatchSet, topology: &Topology) -> Vec<OpenLoop> {
    let chains = topology.open_loops().iter();
    chains
        .map(|chain| {
            let mut edges: Vec<End> = Vec::new();
            let mut length = 0.0;
            for span in chain {
                let span = &topology.spans()[span.index()];
                let end = patch_edge(set, span.edge);
                if edges.last() != Some(&end) {
                    edges.push(end);
                }
                length += span_length(set, span.edge, span.t);
            }
            if edges.len() > 1 && edges.first() == edges.last() {
                edges.pop();
            }
            OpenLoop { edges, length }
        })
        .collect()
}

fn span_length(set: &PatchSet, edge: EdgeId, t: [f64; 2]) -> f64 {
    let curve = set.pieces()[edge.piece().index()].surface.edge(edge.side());
    Stretch {
        curve: &curve,
        range: t,
    }
    .cut()
    .length()
}
