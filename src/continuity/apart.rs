//! The distance of two patch edges that do not meet.

use super::figure::{End, Figure, Finding, PatchEdge, Verdict};
use super::place::place;
use super::seam::SurveyedSeam;
use crate::bezier::BezierCurve;
use crate::patch_set::{Demand, DemandSource, PatchSet, PieceId, SeamEnd};
use crate::scalar::Bracket;
use crate::topology::{EdgeId, Stretch, gap, nearest};

/// Stated seams between two edges that have no contact at all.
pub(super) fn stated_apart(set: &PatchSet, seams: &[SurveyedSeam]) -> Vec<SurveyedSeam> {
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
        let limits = set.seam_limits((p, Some(a)), (q, Some(b)));
        let open = stated.demand == Demand::Open;
        found.extend(gap.map(|gap| SurveyedSeam {
            between: ends[0],
            and: ends[1],
            length: 0.0,
            joined: false,
            bridged: false,
            normals_agree: true,
            gap,
            angle_deg: None,
            curvature_per_mm: None,
            curvatures_per_mm: None,
            by_determinant: false,
            demand: stated.demand,
            demand_source: DemandSource::Stated,
            limits,
            finding: if open { Finding::Open } else { Finding::Apart },
            verdict: if open { Verdict::Met } else { Verdict::Fault },
            severity: if open {
                0.0
            } else {
                gap.bracket.attained / limits.gap.value
            },
            failing: Vec::new(),
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

/// The Hausdorff distance of two runs of piece edges, bracketed: at most the
/// largest, over the edges of either run, of the distance from its nearest
/// partner; at least the largest distance of nine places an edge from the
/// other run. `None` for an empty run.
fn apart(set: &PatchSet, runs: [Vec<EdgeId>; 2]) -> Option<Figure> {
    let curves = [&runs[0], &runs[1]].map(|run| {
        let edge = |e: &EdgeId| set.pieces()[e.piece().index()].surface.edge(e.side());
        run.iter().map(edge).collect::<Vec<BezierCurve>>()
    });
    let mut proved = 0.0_f64;
    let mut attained = (-1.0, None);
    for k in 0..2 {
        for (i, curve) in curves[k].iter().enumerate() {
            let partner = curves[1 - k]
                .iter()
                .map(|other| between(curve, other))
                .fold(f64::INFINITY, f64::min);
            proved = proved.max(partner);
            for x in 0..=8 {
                let s = f64::from(x) / 8.0;
                let point = curve.eval(s);
                let feet = curves[1 - k].iter().enumerate();
                let foot = feet
                    .map(|(j, other)| (nearest(other, &point, [0.0, 1.0]), j))
                    .min_by(|p, q| p.0.distance.total_cmp(&q.0.distance))?;
                if foot.0.distance > attained.0 {
                    let (here, there) = ((runs[k][i], s), (runs[1 - k][foot.1], foot.0.t));
                    let pair = if k == 0 { [here, there] } else { [there, here] };
                    attained = (foot.0.distance, Some(pair));
                }
            }
        }
    }
    let pair = attained.1?;
    Some(Figure {
        bracket: Bracket {
            proved,
            attained: attained.0.min(proved),
        },
        at: place(set, pair.map(|p| p.0), pair.map(|p| p.1)),
    })
}

/// Proved bound on the distance of two edges, whichever way they run.
fn between(a: &BezierCurve, b: &BezierCurve) -> f64 {
    let whole = |range: [f64; 2]| {
        let first = Stretch {
            curve: a,
            range: [0.0, 1.0],
        };
        let second = Stretch { curve: b, range };
        // The first bound is enough: nothing is decided by it.
        gap(first, second, f64::INFINITY, 0.0).bracket.proved
    };
    whole([0.0, 1.0]).min(whole([1.0, 0.0]))
}
