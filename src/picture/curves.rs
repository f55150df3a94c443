//! Curves that are drawn on the surfaces: borders of patches, and seams with
//! what was found of them.

use crate::bezier::BezierCurve;
use crate::continuity::{
    End, Figure, Finding, PatchEdge, Survey, SurveyedSeam, Verdict, patch_edge,
};
use crate::patch_set::{PatchSet, PieceId};
use crate::scalar::{Point, Vector};
use crate::topology::{EdgeId, Topology, patch_side};

use super::colour::{Colour, srgb};

/// Halvings of a curve at most; a curve that is drawn well needs no more.
const DEPTH: u32 = 9;

/// A seam as it is drawn.
#[derive(Debug, Clone)]
pub struct SeamCurve {
    /// Its number in the seam report, worst first, from 1.
    pub number: usize,
    /// Its stretches.
    pub stretches: Vec<Vec<Point>>,
    /// What it is.
    pub finding: Finding,
    /// Whether that is as demanded.
    pub verdict: Verdict,
    /// Where the deciding figure is attained.
    pub worst: Point,
    /// The outward normal there, if the first patch has one.
    pub normal: Option<Vector>,
    /// The seam's length.
    pub length: f64,
    /// The attained gap.
    pub gap: f64,
}

impl SeamCurve {
    /// Whether its edges are not joined, so that the gap is what is to be seen.
    #[must_use]
    pub fn is_parted(&self) -> bool {
        matches!(self.finding, Finding::Gap | Finding::Apart | Finding::Open)
    }
}

/// The colour of a finding, after Okabe and Ito.
#[must_use]
pub fn finding_colour(finding: Finding) -> Colour {
    srgb(finding_bytes(finding))
}

/// The same as sRGB bytes.
#[must_use]
pub fn finding_bytes(finding: Finding) -> [u8; 3] {
    match finding {
        Finding::Tangent => [0, 132, 96],
        Finding::Curvature => [204, 136, 0],
        Finding::Break => [213, 70, 0],
        Finding::Crease => [52, 58, 66],
        Finding::Open => [0, 104, 170],
        Finding::Gap => [180, 60, 130],
        Finding::Apart => [96, 0, 64],
    }
}

/// The figure that decides how a seam stands.
#[must_use]
pub fn deciding(seam: &SurveyedSeam) -> &Figure {
    let figure = match seam.finding {
        Finding::Gap | Finding::Apart | Finding::Open => None,
        Finding::Curvature => seam.curvature_per_mm.as_ref(),
        Finding::Tangent | Finding::Break | Finding::Crease => seam.angle_deg.as_ref(),
    };
    figure.unwrap_or(&seam.gap)
}

/// All seams of a survey as curves, within `tolerance` of the true ones.
#[must_use]
pub fn seam_curves(
    set: &PatchSet,
    topology: &Topology,
    survey: &Survey,
    tolerance: f64,
) -> Vec<SeamCurve> {
    let mut stretches: Vec<((End, End), Vec<Point>)> = topology
        .contacts()
        .iter()
        .map(|contact| {
            let [a, b] = contact.edges.map(|e| patch_edge(set, e));
            let curve = edge_curve(set, contact.edges[0]);
            ((a, b), polyline(&curve, contact.first, tolerance))
        })
        .collect();
    stretches.sort_by_key(|s| s.0);
    let seams = survey.seams.iter().enumerate();
    seams
        .map(|(index, seam)| {
            let ends = (seam.between, seam.and);
            let from = stretches.partition_point(|s| s.0 < ends);
            let own = stretches[from..].iter().take_while(|s| s.0 == ends);
            let mut found: Vec<Vec<Point>> = own.map(|s| s.1.clone()).collect();
            if found.is_empty() {
                found = side(set, seam.between, tolerance);
                found.extend(side(set, seam.and, tolerance));
            }
            let place = &deciding(seam).at;
            SeamCurve {
                number: index + 1,
                stretches: found,
                finding: seam.finding,
                verdict: seam.verdict,
                worst: place.point,
                normal: normal(set, seam.between, place.between),
                length: seam.length,
                gap: seam.gap.bracket.attained,
            }
        })
        .collect()
}

/// The outward normal of a patch at its own (u, v).
fn normal(set: &PatchSet, end: End, [u, v]: [f64; 2]) -> Option<Vector> {
    let patch = &set.patches()[end.0.index()];
    let piece = set.pieces()[patch.pieces.clone()].iter().find(|piece| {
        let within = |range: [f64; 2], t: f64| range[0] <= t && t <= range[1];
        within(piece.u, u) && within(piece.v, v)
    })?;
    let own = |range: [f64; 2], t: f64| (t - range[0]) / (range[1] - range[0]);
    let normal = piece.surface.normal(own(piece.u, u), own(piece.v, v))?;
    Some(if patch.flipped { -normal } else { normal })
}

/// The borders of all patches that `wanted` holds for, each seam once.
#[must_use]
pub fn borders(
    set: &PatchSet,
    topology: &Topology,
    wanted: impl Fn(PieceId) -> bool,
    tolerance: f64,
) -> Vec<Vec<Point>> {
    topology
        .seams()
        .iter()
        .filter_map(|seam| {
            let mut spans = seam.spans.iter().map(|s| &topology.spans()[s.index()]);
            let span = spans
                .find(|span| wanted(span.edge.piece()) && patch_side(set, span.edge).is_some())?;
            Some(polyline(&edge_curve(set, span.edge), span.t, tolerance))
        })
        .collect()
}

/// One side of a patch.
fn side(set: &PatchSet, end: End, tolerance: f64) -> Vec<Vec<Point>> {
    let PatchEdge::Side(side) = end.1 else {
        return Vec::new();
    };
    set.patches()[end.0.index()]
        .pieces
        .clone()
        .map(|piece| EdgeId::of(PieceId::new(piece), side))
        .filter(|edge| patch_side(set, *edge).is_some())
        .map(|edge| polyline(&edge_curve(set, edge), [0.0, 1.0], tolerance))
        .collect()
}

fn edge_curve(set: &PatchSet, edge: EdgeId) -> BezierCurve {
    set.pieces()[edge.piece().index()].surface.edge(edge.side())
}

/// Points of a curve whose chords have their middles within `tolerance` of it.
pub(super) fn polyline(curve: &BezierCurve, range: [f64; 2], tolerance: f64) -> Vec<Point> {
    let mut points = vec![curve.eval(range[0])];
    for k in 0..4 {
        let at = |k: f64| range[0] + (range[1] - range[0]) * k / 4.0;
        halve(
            curve,
            [at(f64::from(k)), at(f64::from(k + 1))],
            tolerance,
            DEPTH,
            &mut points,
        );
    }
    points
}

/// Appends what follows the first point of a stretch.
fn halve(
    curve: &BezierCurve,
    [a, b]: [f64; 2],
    tolerance: f64,
    depth: u32,
    points: &mut Vec<Point>,
) {
    let middle = a.midpoint(b);
    let (p, q, r) = (curve.eval(a), curve.eval(middle), curve.eval(b));
    if depth == 0 || (q - between(&p, &r)).norm() <= tolerance {
        points.push(r);
    } else {
        halve(curve, [a, middle], tolerance, depth - 1, points);
        halve(curve, [middle, b], tolerance, depth - 1, points);
    }
}

fn between(p: &Point, q: &Point) -> Point {
    p + (q - p) / 2.0
}
