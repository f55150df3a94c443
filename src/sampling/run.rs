//! The samples of one seam.

use rayon::prelude::*;
use thiserror::Error;

use super::Limits;
use super::cumulative::{Cumulative, ratio};
use super::density::{Use, density};
use crate::bezier::BezierCurve;
use crate::pace;
use crate::patch_set::PatchSet;
use crate::scalar::{Point, angle_rad};
use crate::topology::{EdgeId, Seam, Span, Topology};

/// Stations at which the density is taken along a span.
const STATIONS: usize = 32;

/// The part of the chord every segment of a run must be proved to keep: what
/// is left is for the triangles beside it.
const SEGMENT: f64 = 0.97;

/// More samples than this on one span are refused; it would take a metre of
/// edge sampled every nanometre.
const MOST_SAMPLES: usize = 100_000_000;

/// A seam that cannot be sampled.
#[derive(Debug, Clone, PartialEq, Error)]
pub enum SamplingError {
    /// No number of samples holds the edge within the chord.
    #[error(
        "patch `{patch}`, edge {side}: {count} samples do not bring the edge within the chord tolerance {chord:.3e}, the normal angle and the largest edge asked for; they are below what the edge and its coordinates can resolve - use larger ones"
    )]
    Unreachable {
        /// The patch of the master edge.
        patch: String,
        /// The side of its piece.
        side: crate::bezier::Side,
        /// How many were tried.
        count: usize,
        /// The tolerance.
        chord: f64,
    },
}

/// The inner samples of one seam, on its master edge.
#[derive(Debug, Clone, PartialEq)]
pub struct Run {
    /// Parameters on the master edge, ascending, end points left out.
    pub t: Vec<f64>,
    /// The places.
    pub points: Vec<Point>,
}

/// Samples every seam.
pub(super) fn runs(
    set: &PatchSet,
    topology: &Topology,
    limits: &Limits,
) -> Result<Vec<Run>, SamplingError> {
    pace::expect(topology.seams().len() as u64, "seams");
    topology
        .seams()
        .par_iter()
        .map(|seam| run(set, topology, seam, limits).inspect(|_| pace::step(1)))
        .collect()
}

fn run(
    set: &PatchSet,
    topology: &Topology,
    seam: &Seam,
    limits: &Limits,
) -> Result<Run, SamplingError> {
    let spans: Vec<&Span> = seam
        .spans
        .iter()
        .map(|s| &topology.spans()[s.index()])
        .collect();
    let master = spans[0];
    let curve = edge_curve(set, master.edge);
    let ends = [curve.eval(master.t[0]), curve.eval(master.t[1])];
    // The direction is the seam's own, so that rounding does not depend on
    // which way the master happens to run.
    let backwards = lexicographic(&ends[1]).partial_cmp(&lexicographic(&ends[0]))
        == Some(std::cmp::Ordering::Less);
    let t = if backwards {
        [master.t[1], master.t[0]]
    } else {
        master.t
    };
    let uses: Vec<Use> = spans
        .iter()
        .map(|span| {
            let reversed = span.reversed != backwards;
            Use {
                surface: &set.pieces()[span.edge.piece().index()].surface,
                side: span.edge.side(),
                t: if reversed {
                    [span.t[1], span.t[0]]
                } else {
                    span.t
                },
            }
        })
        .collect();
    let at = |s: f64| t[0] * (1.0 - s) + t[1] * s;
    let sums = Cumulative::new((0..=STATIONS).map(|k| {
        let s = ratio(k, STATIONS);
        let jet = curve.jet(at(s));
        density(&jet, &uses, s, limits) * jet.dt.norm() * (t[1] - t[0]).abs()
    }));
    let total = sums.total();
    let mut count = count(total - 1e-9);
    loop {
        let mut ts: Vec<f64> = (1..count)
            .map(|k| at(sums.reach(total * ratio(k, count))))
            .collect();
        if backwards {
            ts.reverse();
        }
        if within(&curve, master.t, &ts, limits)
            && turns_within(&uses, master.t, backwards, &ts, limits)
        {
            let points = ts.iter().map(|&t| curve.eval(t)).collect();
            return Ok(Run { t: ts, points });
        }
        if count > MOST_SAMPLES || count > 64 * (1 + self::count(total)) + 4096 {
            return Err(SamplingError::Unreachable {
                patch: set.patch_of(master.edge.piece()).name.clone(),
                side: master.edge.side(),
                count,
                chord: limits.chord,
            });
        }
        count += 1 + count / 12;
    }
}

/// The curve of an edge.
pub(super) fn edge_curve(set: &PatchSet, edge: EdgeId) -> BezierCurve {
    set.pieces()[edge.piece().index()].surface.edge(edge.side())
}

/// Whether every segment is proved within its part of the chord, and no longer
/// than asked.
fn within(curve: &BezierCurve, ends: [f64; 2], inner: &[f64], limits: &Limits) -> bool {
    let longest = limits.max_edge.unwrap_or(f64::INFINITY);
    let mut from = ends[0];
    inner.iter().chain(std::iter::once(&ends[1])).all(|&to| {
        let part = curve.restrict(from, to);
        let length = (curve.eval(to) - curve.eval(from)).norm();
        from = to;
        part.chord_bound() <= limits.chord * SEGMENT && length <= longest
    })
}

/// Whether the normal of no use turns more than asked between neighbouring
/// samples: triangles have these for edges, and could not mend it.
fn turns_within(
    uses: &[Use],
    ends: [f64; 2],
    backwards: bool,
    inner: &[f64],
    limits: &Limits,
) -> bool {
    let Some(limit) = limits.normal_rad else {
        return true;
    };
    uses.iter().all(|usage| {
        let normal = |t: f64| {
            let along = (t - ends[0]) / (ends[1] - ends[0]);
            let s = if backwards { 1.0 - along } else { along };
            let [u, v] = usage.side.at(usage.t[0] * (1.0 - s) + usage.t[1] * s);
            usage.surface.normal(u, v)
        };
        let mut before = normal(ends[0]);
        inner.iter().chain(std::iter::once(&ends[1])).all(|&t| {
            let here = normal(t);
            let turn = match (before, here) {
                (Some(a), Some(b)) => angle_rad(&a, &b),
                _ => 0.0,
            };
            before = here;
            turn <= limit
        })
    })
}

fn lexicographic(p: &Point) -> [f64; 3] {
    [p.x, p.y, p.z]
}

#[allow(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "clamped to 1..=MOST_SAMPLES + 1"
)]
fn count(total: f64) -> usize {
    total.ceil().clamp(1.0, ratio(MOST_SAMPLES + 1, 1)) as usize
}
