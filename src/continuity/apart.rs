//! The distance of two patch edges that do not meet.

use super::figure::Figure;
use super::survey::place;
use crate::bezier::BezierCurve;
use crate::patch_set::PatchSet;
use crate::scalar::Bracket;
use crate::topology::{EdgeId, Stretch, gap, nearest};

/// The Hausdorff distance of two runs of piece edges, bracketed: at most the
/// largest, over the edges of either run, of the distance from its nearest
/// partner; at least the largest distance of nine places an edge from the
/// other run. `None` for an empty run.
pub(super) fn apart(set: &PatchSet, runs: [Vec<EdgeId>; 2]) -> Option<Figure> {
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
