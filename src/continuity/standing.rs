//! From figures to demand, finding and verdict.

use super::figure::{Finding, Verdict};
use crate::patch_set::{Demand, SeamLimits, Tolerances};
use crate::scalar::Bracket;

/// How a seam stands.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Standing {
    pub(super) demand: Demand,
    pub(super) finding: Finding,
    pub(super) verdict: Verdict,
    /// The deciding figure in units of its tolerance.
    pub(super) severity: f64,
}

/// Judges one seam. Without a stated demand a seam is meant to be tangent, or
/// a crease from the crease angle on.
pub(super) fn judge(
    tolerances: &Tolerances,
    limits: &SeamLimits,
    stated: Option<Demand>,
    joined: bool,
    gap: Bracket,
    angle_deg: Bracket,
    curvature_per_mm: Option<Bracket>,
) -> Standing {
    let tangent = limits.tangent_deg.value;
    let creased = angle_deg.attained >= tolerances.crease_deg.get();
    let demand = stated.unwrap_or(if creased { Demand::Crease } else { Demand::G1 });
    let gap_units = gap.attained / limits.gap.value;
    if demand == Demand::Open {
        return Standing {
            demand,
            finding: Finding::Open,
            verdict: Verdict::Met,
            severity: 0.0,
        };
    }
    if !joined {
        return Standing {
            demand,
            finding: Finding::Gap,
            verdict: if gap_units > 1.0 {
                Verdict::Fault
            } else {
                Verdict::Undecided
            },
            severity: gap_units,
        };
    }
    let units = angle_deg.attained / tangent;
    let mut finding = match units {
        _ if creased => Finding::Crease,
        x if x > 1.0 => Finding::Break,
        _ => Finding::Tangent,
    };
    if !matches!(demand, Demand::G1 | Demand::G2) {
        return Standing {
            demand,
            finding,
            verdict: Verdict::Met,
            severity: gap_units,
        };
    }
    let mut severity = units.max(gap_units);
    let mut verdict = if finding != Finding::Tangent {
        Verdict::Fault
    } else if angle_deg.proved > tangent {
        Verdict::Undecided
    } else {
        Verdict::Met
    };
    // No verdict on curvature unless its tolerance is set.
    if let (Demand::G2, Some(limit), Some(step)) =
        (demand, tolerances.curvature_per_mm, curvature_per_mm)
    {
        let steps = step.attained / limit.get();
        severity = severity.max(steps);
        if step.proved > limit.get() && verdict == Verdict::Met {
            verdict = Verdict::Undecided;
        }
        if steps > 1.0 && finding == Finding::Tangent {
            finding = Finding::Curvature;
            verdict = Verdict::Fault;
        }
    }
    Standing {
        demand,
        finding,
        verdict,
        severity,
    }
}
