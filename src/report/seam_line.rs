//! One seam as the report tells it.

use serde::Serialize;

use crate::continuity::{End, Figure, Place, SurveyedSeam};
use crate::patch_set::{Demand, DemandSource, Limit, PatchSet, Source};

/// A patch edge: the patch's name, and the side (`U0`, `U1`, `V0`, `V1`) or
/// the line inside the patch (`u=0.5`).
pub type EdgeName = (String, String);

/// One seam.
#[derive(Debug, Clone, Serialize)]
pub struct SeamLine {
    /// Its place in the list of the whole set, worst first, from 1: what marks
    /// it in pictures.
    pub number: usize,
    /// The edge of lesser name.
    pub between: EdgeName,
    /// The other edge.
    pub and: EdgeName,
    /// Length of the common stretch (quadrature, not proved).
    pub length: f64,
    /// Whether the mesh is joined all along.
    pub joined: bool,
    /// Whether that is so only because wider gaps were to be closed.
    pub bridged: bool,
    /// Whether the stated normals point to one side.
    pub normals_agree: bool,
    /// Hausdorff distance of the common stretches.
    pub gap: FigureLine,
    /// Angle of the tangent planes, degrees; null for edges apart.
    pub angle_deg: Option<FigureLine>,
    /// Step of normal curvature across the seam, 1/mm. `proved` is null where
    /// the curvature grows without limit.
    pub curvature_per_mm: Option<FigureLine>,
    /// Both normal curvatures there, 1/mm, positive towards the outward normal
    /// of `between`.
    pub curvatures_per_mm: Option<[f64; 2]>,
    /// The second over the first; null where one is below the stated floor.
    pub curvature_ratio: Option<f64>,
    /// Whether the determinant's coefficients prove tangency all along.
    pub by_determinant: bool,
    /// What the gap is held against.
    pub gap_limit: LimitLine,
    /// What the angle is held against, if the demand is G1 or G2.
    pub angle_limit: LimitLine,
    /// What the step of curvature is held against, 1/mm, if the demand is G2;
    /// null where no limit is set.
    pub curvature_limit: Option<LimitLine>,
    /// `G0`, `G1`, `G2`, `crease` or `open`.
    pub demand: Demand,
    /// `stated` in the file by name, by `pattern`, or `inferred` from the angle.
    pub demand_source: &'static str,
    /// `tangent`, `curvature`, `break`, `crease`, `open`, `gap` or `apart`.
    pub finding: String,
    /// `met`, `undecided` or `fault`.
    pub verdict: String,
    /// The deciding figure in units of its tolerance.
    pub severity: f64,
    /// The stretches that fail, along the edge `between`.
    pub failing: Vec<FailingLine>,
}

/// A tolerance and where it comes from.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct LimitLine {
    /// Length in the set's unit, degrees, or 1/mm.
    pub value: f64,
    /// `default`, `set`, or a class and what it was stated of.
    pub source: String,
}

/// A stretch that fails.
#[derive(Debug, Clone, Copy, Serialize)]
pub struct FailingLine {
    /// Where it begins.
    pub from: PlaceLine,
    /// Where it ends.
    pub to: PlaceLine,
    /// Its length.
    pub length: f64,
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

/// Patch and edge in words.
pub(super) fn name(set: &PatchSet, end: &End) -> EdgeName {
    let patch = &set.patches()[end.0.index()];
    (patch.name.clone(), end.1.label(patch))
}

impl SeamLine {
    pub(super) fn new(set: &PatchSet, number: usize, seam: &SurveyedSeam) -> Self {
        let limit = |limit: &Limit| LimitLine {
            value: limit.value,
            source: limit.source.label(set),
        };
        let failing = seam.failing.iter().map(|stretch| FailingLine {
            from: PlaceLine::new(&stretch.from),
            to: PlaceLine::new(&stretch.to),
            length: stretch.length,
        });
        let curvature = set.tolerances().curvature_per_mm;
        Self {
            number,
            between: name(set, &seam.between),
            and: name(set, &seam.and),
            length: seam.length,
            joined: seam.joined,
            bridged: seam.bridged,
            normals_agree: seam.normals_agree,
            gap: FigureLine::new(&seam.gap),
            angle_deg: seam.angle_deg.as_ref().map(FigureLine::new),
            curvature_per_mm: seam.curvature_per_mm.as_ref().map(FigureLine::new),
            curvatures_per_mm: seam.curvatures_per_mm,
            curvature_ratio: seam.curvature_ratio(),
            by_determinant: seam.by_determinant,
            gap_limit: limit(&seam.limits.gap),
            angle_limit: limit(&seam.limits.tangent_deg),
            curvature_limit: curvature.map(|value| LimitLine {
                value: value.get(),
                source: Source::Set.label(set),
            }),
            demand: seam.demand,
            demand_source: match seam.demand_source {
                DemandSource::Stated => "stated",
                DemandSource::Pattern => "pattern",
                DemandSource::Inferred => "inferred",
            },
            finding: seam.finding.to_string(),
            verdict: seam.verdict.to_string(),
            severity: seam.severity,
            failing: failing.collect(),
        }
    }

    /// The figure that decides.
    pub(super) fn deciding(&self) -> &FigureLine {
        match (
            self.finding.as_str(),
            &self.angle_deg,
            &self.curvature_per_mm,
        ) {
            ("curvature", _, Some(step)) => step,
            ("gap" | "apart" | "open", _, _) | (_, None, _) => &self.gap,
            (_, Some(angle), _) => angle,
        }
    }
}

impl PlaceLine {
    pub(super) fn new(place: &Place) -> Self {
        Self {
            point: [place.point.x, place.point.y, place.point.z],
            between: place.between,
            and: place.and,
        }
    }
}

impl FigureLine {
    fn new(figure: &Figure) -> Self {
        let proved = figure.bracket.proved;
        Self {
            proved: proved.is_finite().then_some(proved),
            attained: figure.bracket.attained,
            at: PlaceLine::new(&figure.at),
        }
    }
}
