//! Seams that stand otherwise in a new revision.

use std::collections::BTreeMap;

use super::comparison::{PatchChange, RevisionError};
use super::course::Course;
use crate::continuity::{End, Finding, PatchEdge, Survey, SurveyedSeam, Verdict};
use crate::patch_set::{Demand, PatchSet};
use crate::topology::Topology;

/// A figure that changed by less than this fraction has not changed: brackets
/// are as wide.
const WIDTH: f64 = 0.02;

/// Nor has one that changed by less than this, in units of its tolerance.
const LEAST: f64 = 1e-3;

/// A patch edge by name and words.
type Named = (String, String);

/// How a seam stood, or stands.
#[derive(Debug, Clone, PartialEq)]
pub struct SeamStanding {
    /// Its number in that set's seam report.
    pub number: usize,
    /// What is demanded.
    pub demand: Demand,
    /// What it is.
    pub finding: Finding,
    /// Whether that is as demanded.
    pub verdict: Verdict,
    /// The deciding figure in units of its tolerance.
    pub severity: f64,
    /// The length of the common stretch, in the set's unit (quadrature).
    pub length: f64,
    /// The gap attained, in the set's unit.
    pub gap: f64,
    /// The angle attained, degrees; `None` for edges apart.
    pub angle_deg: Option<f64>,
    /// The step of curvature attained, 1/mm.
    pub curvature_per_mm: Option<f64>,
}

/// Which way a seam went.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Trend {
    /// Its verdict is worse, or its deciding figure larger.
    Worse,
    /// It is there no more.
    Removed,
    /// It is new.
    Added,
    /// Its demand, finding or length is another, its verdict no worse.
    Other,
    /// Its verdict is better, or its deciding figure smaller.
    Better,
}

/// A seam that stands otherwise.
#[derive(Debug, Clone, PartialEq)]
pub struct SeamChange {
    /// The edge of lesser name, named as in the new set if it is there.
    pub between: Named,
    /// The other edge.
    pub and: Named,
    /// Which way it went.
    pub trend: Trend,
    /// How it stood.
    pub old: Option<SeamStanding>,
    /// How it stands.
    pub new: Option<SeamStanding>,
}

impl SeamChange {
    /// Whether the verdict is another; a seam that is not there is met.
    #[must_use]
    pub fn changes_verdict(&self) -> bool {
        let verdict =
            |s: &Option<SeamStanding>| s.as_ref().map_or(Verdict::Met, |standing| standing.verdict);
        verdict(&self.old) != verdict(&self.new)
    }
}

fn standing(number: usize, seam: &SurveyedSeam) -> SeamStanding {
    SeamStanding {
        number,
        demand: seam.demand,
        finding: seam.finding,
        verdict: seam.verdict,
        severity: seam.severity,
        length: seam.length,
        gap: seam.gap.bracket.attained,
        angle_deg: seam.angle_deg.map(|f| f.bracket.attained),
        curvature_per_mm: seam.curvature_per_mm.map(|f| f.bracket.attained),
    }
}

/// All seams of a set by their edges, which `named` puts into words.
fn standings(
    set: &PatchSet,
    which: &'static str,
    named: impl Fn(End) -> Named,
) -> Result<BTreeMap<[Named; 2], SeamStanding>, RevisionError> {
    let topology =
        Topology::build(set).map_err(|error| RevisionError::Topology { which, error })?;
    let survey = Survey::of(set, &topology);
    let seams = (1..).zip(&survey.seams);
    Ok(seams
        .map(|(number, seam)| {
            let mut ends = [named(seam.between), named(seam.and)];
            ends.sort();
            (ends, standing(number, seam))
        })
        .collect())
}

/// Seams that stand otherwise, the worse ones first.
pub(super) fn seam_changes(
    [old, new]: [&PatchSet; 2],
    patches: &[PatchChange],
) -> Result<Vec<SeamChange>, RevisionError> {
    let courses: BTreeMap<&str, Course> = patches
        .iter()
        .map(|p| (p.name.as_str(), p.course))
        .collect();
    // An old edge by the words of the new set.
    let followed = |end: End| {
        let patch = &old.patches()[end.0.index()];
        let label = match (end.1, courses.get(patch.name.as_str())) {
            (PatchEdge::Side(side), Some(course)) => course.side(side).to_string(),
            _ => end.1.label(patch),
        };
        (patch.name.clone(), label)
    };
    let plain = |end: End| {
        let patch = &new.patches()[end.0.index()];
        (patch.name.clone(), end.1.label(patch))
    };
    let before = standings(old, "old", followed)?;
    let mut after = standings(new, "new", plain)?;
    let mut found: Vec<SeamChange> = Vec::new();
    let mut tell = |[between, and]: [Named; 2], old: Option<SeamStanding>, new| {
        if let Some(trend) = trend(old.as_ref(), Option::as_ref(&new)) {
            found.push(SeamChange {
                between,
                and,
                trend,
                old,
                new,
            });
        }
    };
    for (ends, standing) in before {
        let now = after.remove(&ends);
        tell(ends, Some(standing), now);
    }
    for (ends, standing) in after {
        tell(ends, None, Some(standing));
    }
    found.sort_by(|a, b| {
        let severity = |c: &SeamChange| {
            c.new
                .as_ref()
                .or(c.old.as_ref())
                .map_or(0.0, |s| s.severity)
        };
        a.trend
            .cmp(&b.trend)
            .then(severity(b).total_cmp(&severity(a)))
            .then_with(|| (&a.between, &a.and).cmp(&(&b.between, &b.and)))
    });
    Ok(found)
}

fn trend(old: Option<&SeamStanding>, new: Option<&SeamStanding>) -> Option<Trend> {
    let (old, new) = match (old, new) {
        (Some(old), Some(new)) => (old, new),
        (Some(_), None) => return Some(Trend::Removed),
        (None, Some(_)) => return Some(Trend::Added),
        (None, None) => return None,
    };
    let larger = |a: f64, b: f64| a > b * (1.0 + WIDTH) && a - b > LEAST;
    if new.verdict > old.verdict {
        Some(Trend::Worse)
    } else if new.verdict < old.verdict {
        Some(Trend::Better)
    } else if (new.demand, new.finding) != (old.demand, old.finding) {
        Some(Trend::Other)
    } else if larger(new.severity, old.severity) {
        Some(Trend::Worse)
    } else if larger(old.severity, new.severity) {
        Some(Trend::Better)
    } else if (new.length - old.length).abs() > WIDTH * new.length.max(old.length) {
        Some(Trend::Other)
    } else {
        None
    }
}
