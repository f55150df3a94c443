//! Open edges that run near one another for a while: near misses.
//!
//! A contact is a whole common stretch within the search distance. Where two
//! open edges part further than that, the stretch along which they keep within
//! it is still worth a line: a slit. Sampled at 33 places of the shorter edge,
//! its ends found by halving; the distance along it is bracketed as all gaps
//! are.

use rayon::prelude::*;

use super::EdgeId;
use super::box_tree::BoxTree;
use super::edge_curve::EdgeCurve;
use super::gap::{Stretch, gap};
use super::model::{Contact, Seam, Span};
use super::nearest::nearest;
use crate::bezier::Side;
use crate::patch_set::PatchSet;
use crate::scalar::{Bracket, Vector};

/// Steps along the shorter edge.
const STEPS: u8 = 32;

/// The shortest stretch worth a line, in search distances.
const LEAST: f64 = 10.0;

/// Two open edges that keep within the search distance along a stretch, but
/// not along the whole of what faces each other.
#[derive(Debug, Clone, PartialEq)]
pub struct NearMiss {
    /// The two edges, the shorter first.
    pub edges: [EdgeId; 2],
    /// The stretch on the first edge, ascending.
    pub first: [f64; 2],
    /// The matching stretch on the second edge.
    pub second: [f64; 2],
    /// Hausdorff distance of the two stretches.
    pub gap: Bracket,
    /// Where the attained one is, on the first edge.
    pub gap_at: f64,
    /// Length along the first edge (quadrature).
    pub length: f64,
}

/// All near misses, by edge. `related` tells of pairs that are none: demanded
/// open, or neighbours in another way.
pub(super) fn near_misses(
    set: &PatchSet,
    curves: &[EdgeCurve],
    spans: &[Span],
    seams: &[Seam],
    contacts: &[Contact],
    (search, floor): (f64, f64),
    related: impl Fn(&EdgeCurve, &EdgeCurve) -> bool + Sync,
) -> Vec<NearMiss> {
    let mut open: Vec<(usize, [f64; 2])> = spans
        .iter()
        .filter(|span| seams[span.seam.index()].spans.len() == 1)
        .map(|span| (span.edge.index(), span.t))
        .collect();
    open.sort_by(|p, q| p.0.cmp(&q.0).then(p.1[0].total_cmp(&q.1[0])));
    let mut entries: Vec<usize> = open.iter().map(|&(edge, _)| edge).collect();
    entries.dedup();
    let is_open = |edge: usize, t: f64| {
        let from = open.partition_point(|o| o.0 < edge);
        let own = open[from..].iter().take_while(|o| o.0 == edge);
        own.into_iter().any(|o| o.1[0] <= t && t <= o.1[1])
    };
    let mut known: Vec<[EdgeId; 2]> = contacts.iter().map(|c| c.edges).collect();
    known.sort_unstable();
    let tree = BoxTree::new(curves.iter().map(|e| e.cuboid).collect(), entries.clone());
    entries
        .par_iter()
        .flat_map_iter(|&i| {
            let mut found = Vec::new();
            let a = &curves[i];
            tree.meeting(&a.cuboid.grown(search), |j| {
                let b = &curves[j];
                let shorter = (a.length, b.rank) < (b.length, a.rank);
                let met = [[a.id, b.id], [b.id, a.id]];
                if shorter
                    && a.id.piece() != b.id.piece()
                    && !met.iter().any(|pair| known.binary_search(pair).is_ok())
                    && !related(a, b)
                {
                    stretches(set, a, b, search, floor, &is_open, &mut found);
                }
            });
            found
        })
        .collect()
}

fn stretches(
    set: &PatchSet,
    a: &EdgeCurve,
    b: &EdgeCurve,
    search: f64,
    floor: f64,
    is_open: &impl Fn(usize, f64) -> bool,
    found: &mut Vec<NearMiss>,
) {
    // Edges that touch in a corner only share a small box.
    let low = a.cuboid.low.sup(&b.cuboid.low);
    let high = a.cuboid.high.inf(&b.cuboid.high);
    let least = (LEAST * search).min(a.length / 4.0);
    if (high - low).amax() + 2.0 * search < least / 2.0 {
        return;
    }
    let foot = |s: f64| nearest(&b.curve, &a.curve.eval(s), [0.0, 1.0]);
    let near = |s: f64| {
        let foot = foot(s);
        foot.distance <= search && is_open(a.id.index(), s) && is_open(b.id.index(), foot.t)
    };
    let at = |k: u8| f64::from(k) / f64::from(STEPS);
    let within: Vec<bool> = (0..=STEPS).map(|k| near(at(k))).collect();
    let mut k = 0;
    while k <= STEPS {
        if !within[usize::from(k)] {
            k += 1;
            continue;
        }
        let start = k;
        while k <= STEPS && within[usize::from(k)] {
            k += 1;
        }
        let halve = |mut out: f64, mut inside: f64| {
            for _ in 0..30 {
                let middle = out.midpoint(inside);
                if near(middle) {
                    inside = middle;
                } else {
                    out = middle;
                }
            }
            inside
        };
        let from = if start == 0 {
            0.0
        } else {
            halve(at(start - 1), at(start))
        };
        let to = if k > STEPS {
            1.0
        } else {
            halve(at(k), at(k - 1))
        };
        let first = [from, to];
        let second = first.map(|s| foot(s).t);
        if from >= to || (second[0] - second[1]).abs() <= 0.0 {
            continue;
        }
        let stretch = Stretch {
            curve: &a.curve,
            range: first,
        };
        let length = stretch.cut().length();
        if length < least || faces_itself(set, [a, b], from.midpoint(to), foot(from.midpoint(to)).t)
        {
            continue;
        }
        let other = Stretch {
            curve: &b.curve,
            range: second,
        };
        let gap = gap(stretch, other, floor, f64::INFINITY);
        found.push(NearMiss {
            edges: [a.id, b.id],
            first,
            second,
            gap: gap.bracket,
            gap_at: gap.at,
            length,
        });
    }
}

/// Whether each edge lies on the side of the other where that one's own patch
/// is, and the patches end between them: the outline of a pointed part, not a
/// slit. Patches that go on beyond the other edge overlap.
fn faces_itself(set: &PatchSet, edges: [&EdgeCurve; 2], s: f64, t: f64) -> bool {
    let at = [s, t];
    let points = [0, 1].map(|k| edges[k].curve.eval(at[k]));
    let away = points[1] - points[0];
    let inside = |k: usize, towards: Vector| {
        let side = edges[k].id.side();
        let [u, v] = side.at(at[k]);
        let surface = &set.pieces()[edges[k].id.piece().index()].surface;
        let jet = surface.jet(u, v);
        let inward = match side {
            Side::U0 => jet.du,
            Side::U1 => -jet.du,
            Side::V0 => jet.dv,
            Side::V1 => -jet.dv,
        };
        let along = edges[k].curve.jet(at[k]).dt;
        // What lies along the edge is none of its inside.
        let across = inward - along * (inward.dot(&along) / along.norm_squared());
        towards.dot(&across) > 0.0
    };
    let is_thin = |k: usize| {
        let side = edges[k].id.side();
        let opposite = Side::ALL[side.index() ^ 1].at(at[k]);
        let surface = &set.pieces()[edges[k].id.piece().index()].surface;
        let wide = (surface.eval(opposite[0], opposite[1]) - points[k]).norm();
        wide <= 2.0 * away.norm()
    };
    inside(0, away) && inside(1, -away) && is_thin(0) && is_thin(1)
}
