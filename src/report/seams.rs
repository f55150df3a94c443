//! The seam report: one model, as JSON by `serde` and as text by
//! [`SeamReport::text`].

use serde::Serialize;

use super::CAUTION;
use crate::continuity::{End, Figure, Finding, Survey, SurveyedSeam, Verdict};
use crate::patch_set::{Demand, PanelId, PatchSet};

/// A patch edge: the patch's name, and the side (`U0`, `U1`, `V0`, `V1`) or
/// the line inside the patch (`u=0.5`).
pub type EdgeName = (String, String);

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
    /// The seams, worst first.
    pub seams: Vec<SeamLine>,
    /// Seams of three edges or more, each a finding.
    pub non_manifold: Vec<CrowdLine>,
    /// Edges nearer than the search distance that are not joined and not
    /// demanded open, again for themselves.
    pub near_misses: Vec<NearMissLine>,
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
    /// Seams whose demand follows from their angle.
    pub inferred: usize,
    /// Seams across which the stated normals point to opposite sides.
    pub normals_opposed: usize,
    /// Seams of three edges or more.
    pub non_manifold: usize,
    /// Open loops.
    pub open_loops: usize,
    /// Their whole length.
    pub open_length: f64,
}

/// One seam.
#[derive(Debug, Clone, Serialize)]
pub struct SeamLine {
    /// The edge of lesser name.
    pub between: EdgeName,
    /// The other edge.
    pub and: EdgeName,
    /// Length of the common stretch (quadrature, not proved).
    pub length: f64,
    /// Whether the mesh is joined all along.
    pub joined: bool,
    /// Whether the stated normals point to one side.
    pub normals_agree: bool,
    /// Hausdorff distance of the common stretches.
    pub gap: FigureLine,
    /// Angle of the tangent planes, degrees; null for edges apart.
    pub angle_deg: Option<FigureLine>,
    /// Step of normal curvature across the seam, 1/mm. `proved` is null where
    /// the curvature grows without limit.
    pub curvature_per_mm: Option<FigureLine>,
    /// `G0`, `G1`, `G2`, `crease` or `open`.
    pub demand: Demand,
    /// `stated` in the file, or `inferred` from the angle.
    pub demand_source: &'static str,
    /// `tangent`, `curvature`, `break`, `crease`, `open`, `gap` or `apart`.
    pub finding: String,
    /// `met`, `undecided` or `fault`.
    pub verdict: String,
    /// The deciding figure in units of its tolerance.
    pub severity: f64,
}

/// A figure as stated.
#[derive(Debug, Clone, Copy, Serialize)]
pub struct FigureLine {
    /// Proved upper bound; null where nothing is proved.
    pub proved: Option<f64>,
    /// Attained value.
    pub attained: f64,
    /// Where it is attained.
    pub at: PlaceLine,
}

/// A place on a seam.
#[derive(Debug, Clone, Copy, Serialize)]
pub struct PlaceLine {
    /// In space, on the first patch.
    pub point: [f64; 3],
    /// (u, v) of the first patch.
    pub between: [f64; 2],
    /// (u, v) of the second patch.
    pub and: [f64; 2],
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
    /// Over this length.
    pub length: f64,
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
        let name = |end: &End| {
            let patch = &set.patches()[end.0.index()];
            (patch.name.clone(), end.1.label(patch))
        };
        let names = |ends: &[End]| ends.iter().map(name).collect::<Vec<_>>();
        let seams: Vec<&SurveyedSeam> = survey
            .seams
            .iter()
            .filter(|s| counts(&s.between) || counts(&s.and))
            .collect();
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
        let tolerances = set.tolerances();
        Self {
            schema_version: 1,
            name: set.name().to_owned(),
            unit: set.unit().symbol(),
            tolerances: ToleranceLines {
                gap: tolerances.gap.get(),
                search: tolerances.search.get(),
                tangent_deg: tolerances.tangent_deg.get(),
                crease_deg: tolerances.crease_deg.get(),
                curvature_per_mm: tolerances.curvature_per_mm.map(|t| t.get()),
            },
            summary: SeamSummary {
                seams: seams.len(),
                faults: having(&|s| s.verdict == Verdict::Fault),
                undecided: having(&|s| s.verdict == Verdict::Undecided),
                inferred: having(&|s| !s.stated),
                normals_opposed: having(&|s| !s.normals_agree),
                non_manifold: non_manifold.len(),
                open_loops: open_loops.len(),
                open_length: open_loops.iter().map(|l| l.length).sum(),
            },
            near_misses: seams
                .iter()
                .filter(|s| s.finding == Finding::Gap)
                .map(|s| NearMissLine {
                    between: name(&s.between),
                    and: name(&s.and),
                    gap: s.gap.bracket.attained,
                    length: s.length,
                })
                .collect(),
            seams: seams
                .iter()
                .map(|s| SeamLine {
                    between: name(&s.between),
                    and: name(&s.and),
                    length: s.length,
                    joined: s.joined,
                    normals_agree: s.normals_agree,
                    gap: FigureLine::new(&s.gap),
                    angle_deg: s.angle_deg.as_ref().map(FigureLine::new),
                    curvature_per_mm: s.curvature_per_mm.as_ref().map(FigureLine::new),
                    demand: s.demand,
                    demand_source: if s.stated { "stated" } else { "inferred" },
                    finding: s.finding.to_string(),
                    verdict: s.verdict.to_string(),
                    severity: s.severity,
                })
                .collect(),
            non_manifold,
            open_loops,
            caution: CAUTION,
        }
    }

    /// Whether anything is not as demanded.
    #[must_use]
    pub fn has_findings(&self) -> bool {
        self.summary.faults + self.summary.undecided + self.summary.non_manifold > 0
    }
}

impl FigureLine {
    fn new(figure: &Figure) -> Self {
        let proved = figure.bracket.proved;
        let point = figure.at.point;
        Self {
            proved: proved.is_finite().then_some(proved),
            attained: figure.bracket.attained,
            at: PlaceLine {
                point: [point.x, point.y, point.z],
                between: figure.at.between,
                and: figure.at.and,
            },
        }
    }
}
