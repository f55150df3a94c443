//! The seam report: one model, as JSON by `serde` and as text by
//! [`SeamReport::text`].

use serde::Serialize;

use super::CAUTION;
use super::panel_pairs::{PanelPairLine, pairs};
use super::seam_line::{EdgeName, PlaceLine, SeamLine};
use crate::continuity::{End, Finding, RATIO_FLOOR_PER_MM, Survey, SurveyedSeam, Verdict};
use crate::patch_set::{DemandSource, PanelId, PatchId, PatchSet};

/// Everything `seams` tells.
#[derive(Debug, Clone, Serialize)]
pub struct SeamReport {
    /// Rises when a field changes its meaning.
    pub schema_version: u32,
    /// The set's name.
    pub name: String,
    /// The unit of all lengths and coordinates: `m`, `cm`, `mm` or `in`.
    pub unit: &'static str,
    /// What the figures are held against.
    pub tolerances: ToleranceLines,
    /// Counts.
    pub summary: SeamSummary,
    /// Seams by the two panels they join, worst first.
    pub panel_pairs: Vec<PanelPairLine>,
    /// The seams, worst first.
    pub seams: Vec<SeamLine>,
    /// Seams of three edges or more, each a finding.
    pub non_manifold: Vec<CrowdLine>,
    /// Edges nearer than the search distance that are not joined and not
    /// demanded open.
    pub near_misses: Vec<NearMissLine>,
    /// Seams whose gap is beyond the tolerance and closed in the mesh even so,
    /// because that was asked for.
    pub bridged: Vec<NearMissLine>,
    /// Patches that lie on one another.
    pub overlaps: Vec<OverlapLine>,
    /// Patches nowhere wider than the search distance.
    pub slivers: Vec<SliverLine>,
    /// How the patches face.
    pub orientation: OrientationLine,
    /// The open boundary.
    pub open_loops: Vec<LoopLine>,
    /// What the report does not say.
    pub caution: &'static str,
}

/// The tolerances, lengths in the set's unit.
#[derive(Debug, Clone, Copy, Serialize)]
pub struct ToleranceLines {
    /// Edges within it are joined.
    pub gap: f64,
    /// Edges within it are looked at together.
    pub search: f64,
    /// Largest angle of a tangent seam, degrees.
    pub tangent_deg: f64,
    /// Smallest angle of an undeclared crease, degrees.
    pub crease_deg: f64,
    /// Largest step of normal curvature, if a verdict on it is asked for.
    pub curvature_per_mm: Option<f64>,
    /// Wider gaps than the tolerance that are closed in the mesh, if asked for.
    pub close_gaps: Option<f64>,
    /// Curvatures below this have no ratio.
    pub ratio_floor_per_mm: f64,
}

/// Counts over the report.
#[derive(Debug, Clone, Copy, Serialize)]
pub struct SeamSummary {
    /// Seams listed.
    pub seams: usize,
    /// Of these not as demanded.
    pub faults: usize,
    /// Of these not proved to be as demanded, though no place says otherwise.
    pub undecided: usize,
    /// Seams whose gap is closed in the mesh though it is beyond the tolerance.
    pub bridged: usize,
    /// Seams whose demand follows from their angle.
    pub inferred: usize,
    /// Seams across which the stated normals point to opposite sides.
    pub normals_opposed: usize,
    /// Seams of three edges or more.
    pub non_manifold: usize,
    /// Near misses, slits among them.
    pub near_misses: usize,
    /// Near misses that widen beyond the search distance.
    pub slits: usize,
    /// Pairs of patches that lie on one another.
    pub overlaps: usize,
    /// Open loops.
    pub open_loops: usize,
    /// Their whole length.
    pub open_length: f64,
}

/// A seam of three edges or more.
#[derive(Debug, Clone, Serialize)]
pub struct CrowdLine {
    /// Its edges.
    pub edges: Vec<EdgeName>,
    /// Its length.
    pub length: f64,
}

/// Edges near one another, but not joined.
#[derive(Debug, Clone, Serialize)]
pub struct NearMissLine {
    /// The edge of lesser name.
    pub between: EdgeName,
    /// The other edge.
    pub and: EdgeName,
    /// The gap attained.
    pub gap: f64,
    /// What it is held against.
    pub gap_limit: f64,
    /// Over this length.
    pub length: f64,
    /// Whether the edges part further than the search distance beyond it.
    pub widens: bool,
    /// Where the gap is attained.
    pub at: PlaceLine,
}

/// Two patches that lie on one another.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct OverlapLine {
    /// The patches.
    pub patches: [String; 2],
    /// Whether one is the other again: all places looked at lie on both.
    pub duplicate: bool,
    /// A place on both.
    pub at: [f64; 3],
}

/// A patch nowhere wider than the search distance.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct SliverLine {
    /// The patch.
    pub patch: String,
    /// A proved bound of its width.
    pub width: f64,
}

/// How the patches face.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct OrientationLine {
    /// Parts that hang together by joined seams.
    pub components: usize,
    /// Of these closed.
    pub closed: usize,
    /// Parts that cannot face one way, by their first patch.
    pub not_orientable: Vec<String>,
    /// Patches that face against the rest of their part; inwards, where it is
    /// closed.
    pub flipped: Vec<String>,
    /// Patches that were turned over because that was asked for.
    pub turned_over: Vec<String>,
}

/// An open loop.
#[derive(Debug, Clone, Serialize)]
pub struct LoopLine {
    /// The patch edges along it, in order.
    pub edges: Vec<EdgeName>,
    /// Its length.
    pub length: f64,
}

impl SeamReport {
    /// The report of a survey; with `panels` given, of those seams, loops and
    /// crowds only in which one of these panels takes part.
    #[must_use]
    pub fn new(set: &PatchSet, survey: &Survey, panels: Option<&[PanelId]>) -> Self {
        let counts = |end: &End| {
            panels.is_none_or(|list| list.contains(&set.patches()[end.0.index()].panel))
        };
        let name = |end: &End| super::seam_line::name(set, end);
        let names = |ends: &[End]| ends.iter().map(name).collect::<Vec<_>>();
        let numbered: Vec<(usize, &SurveyedSeam)> = (1..)
            .zip(&survey.seams)
            .filter(|(_, s)| counts(&s.between) || counts(&s.and))
            .collect();
        let seams: Vec<&SurveyedSeam> = numbered.iter().map(|(_, seam)| *seam).collect();
        let non_manifold: Vec<CrowdLine> = survey
            .crowds
            .iter()
            .filter(|c| c.edges.iter().any(counts))
            .map(|c| CrowdLine {
                edges: names(&c.edges),
                length: c.length,
            })
            .collect();
        let open_loops: Vec<LoopLine> = survey
            .loops
            .iter()
            .filter(|l| l.edges.iter().any(counts))
            .map(|l| LoopLine {
                edges: names(&l.edges),
                length: l.length,
            })
            .collect();
        let having =
            |what: &dyn Fn(&SurveyedSeam) -> bool| seams.iter().filter(|s| what(s)).count();
        let slits: Vec<NearMissLine> = survey
            .slits
            .iter()
            .filter(|s| counts(&s.between) || counts(&s.and))
            .map(|s| NearMissLine {
                between: name(&s.between),
                and: name(&s.and),
                gap: s.gap.bracket.attained,
                gap_limit: set
                    .seam_limits((s.between.0, s.between.1.side()), (s.and.0, s.and.1.side()))
                    .gap
                    .value,
                length: s.length,
                widens: true,
                at: PlaceLine::new(&s.gap.at),
            })
            .collect();
        let patch = |id: PatchId| set.patches()[id.index()].name.clone();
        let within =
            |id: PatchId| panels.is_none_or(|list| list.contains(&set.patches()[id.index()].panel));
        let overlaps: Vec<OverlapLine> = survey
            .overlaps
            .iter()
            .filter(|o| o.patches.iter().any(|p| within(*p)))
            .map(|o| OverlapLine {
                patches: o.patches.map(patch),
                duplicate: o.duplicate,
                at: [o.at.x, o.at.y, o.at.z],
            })
            .collect();
        let slivers: Vec<SliverLine> = survey
            .slivers
            .iter()
            .filter(|s| within(s.patch))
            .map(|s| SliverLine {
                patch: patch(s.patch),
                width: s.width,
            })
            .collect();
        let near_misses: Vec<NearMissLine> = seams
            .iter()
            .filter(|s| s.finding == Finding::Gap && !s.joined)
            .map(|s| NearMissLine::of(set, s))
            .chain(slits)
            .collect();
        let components = || survey.orientation.components.iter();
        let tolerances = set.tolerances();
        Self {
            schema_version: 2,
            name: set.name().to_owned(),
            unit: set.unit().symbol(),
            tolerances: ToleranceLines {
                gap: tolerances.gap.get(),
                search: tolerances.search.get(),
                tangent_deg: tolerances.tangent_deg.get(),
                crease_deg: tolerances.crease_deg.get(),
                curvature_per_mm: tolerances.curvature_per_mm.map(|t| t.get()),
                close_gaps: tolerances.close_gaps.map(|t| t.get()),
                ratio_floor_per_mm: RATIO_FLOOR_PER_MM,
            },
            summary: SeamSummary {
                bridged: having(&|s| s.bridged),
                seams: seams.len(),
                faults: having(&|s| s.verdict == Verdict::Fault),
                undecided: having(&|s| s.verdict == Verdict::Undecided),
                inferred: having(&|s| s.demand_source == DemandSource::Inferred),
                normals_opposed: having(&|s| !s.normals_agree),
                non_manifold: non_manifold.len(),
                near_misses: near_misses.len(),
                slits: near_misses.iter().filter(|n| n.widens).count(),
                overlaps: overlaps.len(),
                open_loops: open_loops.len(),
                open_length: open_loops.iter().map(|l| l.length).sum(),
            },
            near_misses,
            bridged: seams
                .iter()
                .filter(|s| s.bridged)
                .map(|s| NearMissLine::of(set, s))
                .collect(),
            overlaps,
            slivers,
            orientation: OrientationLine {
                components: survey.orientation.components.len(),
                closed: components().filter(|c| c.closed).count(),
                not_orientable: components()
                    .filter(|c| !c.orientable)
                    .map(|c| patch(c.patches[0]))
                    .collect(),
                flipped: survey.orientation.turned().into_iter().map(patch).collect(),
                turned_over: survey.turned_over.iter().copied().map(patch).collect(),
            },
            panel_pairs: pairs(set, &seams),
            seams: numbered
                .iter()
                .map(|(number, seam)| SeamLine::new(set, *number, seam))
                .collect(),
            non_manifold,
            open_loops,
            caution: CAUTION,
        }
    }

    /// Whether anything is not as demanded.
    #[must_use]
    pub fn has_findings(&self) -> bool {
        let sum = &self.summary;
        sum.faults + sum.undecided + sum.non_manifold + sum.slits + sum.overlaps > 0
    }
}

impl NearMissLine {
    fn of(set: &PatchSet, seam: &SurveyedSeam) -> Self {
        Self {
            between: super::seam_line::name(set, &seam.between),
            and: super::seam_line::name(set, &seam.and),
            gap: seam.gap.bracket.attained,
            gap_limit: seam.limits.gap.value,
            length: seam.length,
            widens: false,
            at: PlaceLine::new(&seam.gap.at),
        }
    }
}
