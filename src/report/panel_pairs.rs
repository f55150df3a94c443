//! Seams by the two panels they join.

use std::collections::BTreeMap;

use serde::Serialize;

use crate::continuity::{SurveyedSeam, Verdict};
use crate::patch_set::PatchSet;

/// The seams between two panels, or inside one.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct PanelPairLine {
    /// The panel of lesser name.
    pub between: String,
    /// The other panel; the same for seams inside one.
    pub and: String,
    /// Seams.
    pub seams: usize,
    /// Of these not as demanded.
    pub faults: usize,
    /// Of these not proved to be as demanded.
    pub undecided: usize,
    /// Their length.
    pub length: f64,
    /// Length of the stretches that fail.
    pub failing_length: f64,
    /// The worst of their figures in units of its tolerance.
    pub severity: f64,
}

/// All pairs, the worst first; faults before what is met.
pub(super) fn pairs(set: &PatchSet, seams: &[&SurveyedSeam]) -> Vec<PanelPairLine> {
    let panel = |patch: crate::patch_set::PatchId| {
        let id = set.patches()[patch.index()].panel;
        set.panels()[id.index()].name.as_str()
    };
    let mut found: BTreeMap<[&str; 2], PanelPairLine> = BTreeMap::new();
    for seam in seams {
        let mut key = [panel(seam.between.0), panel(seam.and.0)];
        key.sort_unstable();
        let line = found.entry(key).or_insert_with(|| PanelPairLine {
            between: key[0].to_owned(),
            and: key[1].to_owned(),
            seams: 0,
            faults: 0,
            undecided: 0,
            length: 0.0,
            failing_length: 0.0,
            severity: 0.0,
        });
        line.seams += 1;
        line.faults += usize::from(seam.verdict == Verdict::Fault);
        line.undecided += usize::from(seam.verdict == Verdict::Undecided);
        line.length += seam.length;
        line.failing_length += seam.failing.iter().map(|f| f.length).sum::<f64>();
        if seam.verdict != Verdict::Met {
            line.severity = line.severity.max(seam.severity);
        }
    }
    let mut lines: Vec<PanelPairLine> = found.into_values().collect();
    lines.sort_by(|p, q| q.severity.total_cmp(&p.severity));
    lines
}
