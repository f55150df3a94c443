//! Two revisions of a set: one model, as JSON by `serde` and as text.

use std::fmt::Write;

use serde::Serialize;

use super::CAUTION;
use super::seam_line::EdgeName;
use super::seams_text::{edge, figure, length, upward};
use super::wording::{many, written};
use crate::patch_set::{Demand, PatchSet};
use crate::revision::{
    Comparison, Description, PatchChange, PatchState, SeamChange, SeamStanding, Trend,
};

/// Version of the JSON fields of [`ComparisonReport`].
const SCHEMA_VERSION: u32 = 1;

/// Everything `compare` tells; lengths in the sets' unit.
#[derive(Debug, Clone, Serialize)]
pub struct ComparisonReport {
    /// Version of these fields.
    pub schema_version: u32,
    /// The old set's name, and the new one's.
    pub names: [String; 2],
    /// The unit of all lengths.
    pub unit: &'static str,
    /// Beyond this a patch has moved.
    pub tolerance: f64,
    /// Whether that is what rounding may do, because none was given.
    pub tolerance_is_rounding: bool,
    /// Whether anything beyond the tolerance changed.
    pub changed: bool,
    /// Counts.
    pub summary: ComparisonSummary,
    /// Patches of both sets that moved, or are not proved to be the same, or
    /// are described otherwise; the farthest moved first.
    pub patches: Vec<PatchChangeLine>,
    /// Patches only the new set has.
    pub added: Vec<String>,
    /// Patches only the old set has.
    pub removed: Vec<String>,
    /// Seams that stand otherwise, the worse ones first.
    pub seams: Vec<SeamChangeLine>,
    /// What the report does not say.
    pub caution: &'static str,
}

/// Counts over the comparison.
#[derive(Debug, Clone, Copy, Serialize)]
pub struct ComparisonSummary {
    /// Patches of both sets that are the same within the tolerance.
    pub same: usize,
    /// That are not.
    pub moved: usize,
    /// Of which neither is proved.
    pub undecided: usize,
    /// Of all these, patches of another kind, degree, division or course.
    pub described_otherwise: usize,
    /// Patches only the new set has.
    pub added: usize,
    /// Patches only the old set has.
    pub removed: usize,
    /// Seams that are worse.
    pub seams_worse: usize,
    /// Seams that are better.
    pub seams_better: usize,
    /// Seams of another demand, finding or length, but no other verdict.
    pub seams_other: usize,
    /// Seams only the new set has.
    pub seams_added: usize,
    /// Seams only the old set has.
    pub seams_removed: usize,
}

/// A patch of both sets.
#[derive(Debug, Clone, Serialize)]
pub struct PatchChangeLine {
    /// Its name.
    pub name: String,
    /// `same`, `undecided` or `moved`.
    pub state: &'static str,
    /// Proved upper bound of the distance of the two surfaces.
    pub proved: f64,
    /// A distance that is attained.
    pub attained: f64,
    /// The point there.
    pub at: [f64; 3],
    /// The old patch's (u, v) there.
    pub old_place: [f64; 2],
    /// The new patch's (u, v) there.
    pub new_place: [f64; 2],
    /// How it was written down.
    pub old: DescriptionLine,
    /// How it is written down.
    pub new: DescriptionLine,
    /// Whether u and v are exchanged.
    pub exchanged: bool,
    /// Whether the new u, and the new v, run backwards.
    pub reversed: [bool; 2],
    /// Whether the outward normal points the other way.
    pub turned_over: bool,
}

/// How a patch is written down.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
pub struct DescriptionLine {
    /// The kind in the file.
    pub kind: &'static str,
    /// Degrees along u and v.
    pub degree: [usize; 2],
    /// Pieces along u and v.
    pub pieces: [usize; 2],
}

/// A seam that stands otherwise.
#[derive(Debug, Clone, Serialize)]
pub struct SeamChangeLine {
    /// The edge of lesser name.
    pub between: EdgeName,
    /// The other edge.
    pub and: EdgeName,
    /// `worse`, `removed`, `added`, `other` or `better`.
    pub trend: &'static str,
    /// How it stood.
    pub old: Option<StandingLine>,
    /// How it stands.
    pub new: Option<StandingLine>,
}

/// How a seam stood, or stands: figures attained.
#[derive(Debug, Clone, Serialize)]
pub struct StandingLine {
    /// Its number in that set's seam report.
    pub number: usize,
    /// What is demanded.
    pub demand: Demand,
    /// What it is.
    pub finding: String,
    /// Whether that is as demanded.
    pub verdict: String,
    /// The deciding figure in units of its tolerance.
    pub severity: f64,
    /// The length of the common stretch.
    pub length: f64,
    /// The gap.
    pub gap: f64,
    /// The angle in degrees.
    pub angle_deg: Option<f64>,
    /// The step of curvature, 1/mm.
    pub curvature_per_mm: Option<f64>,
}

impl ComparisonReport {
    /// The report of a comparison.
    #[must_use]
    pub fn new(old: &PatchSet, new: &PatchSet, found: &Comparison) -> Self {
        let having = |state| found.patches.iter().filter(|p| p.state == state).count();
        let going = |trend| found.seams.iter().filter(|s| s.trend == trend).count();
        let otherwise = |p: &&PatchChange| p.is_described_otherwise() || p.turned_over;
        Self {
            schema_version: SCHEMA_VERSION,
            names: [old, new].map(|set| set.name().to_owned()),
            unit: new.unit().symbol(),
            tolerance: found.tolerance.get(),
            tolerance_is_rounding: found.is_rounding,
            changed: found.has_changes(),
            summary: ComparisonSummary {
                same: having(PatchState::Same),
                moved: having(PatchState::Moved),
                undecided: having(PatchState::Undecided),
                described_otherwise: found.patches.iter().filter(otherwise).count(),
                added: found.added.len(),
                removed: found.removed.len(),
                seams_worse: going(Trend::Worse),
                seams_better: going(Trend::Better),
                seams_other: going(Trend::Other),
                seams_added: going(Trend::Added),
                seams_removed: going(Trend::Removed),
            },
            patches: found
                .patches
                .iter()
                .filter(|p| p.state != PatchState::Same || otherwise(p))
                .map(PatchChangeLine::new)
                .collect(),
            added: found.added.clone(),
            removed: found.removed.clone(),
            seams: found.seams.iter().map(SeamChangeLine::new).collect(),
            caution: CAUTION,
        }
    }

    /// The report as text.
    #[must_use]
    pub fn text(&self) -> String {
        written(|out| self.write_text(out))
    }

    fn write_text(&self, out: &mut String) -> std::fmt::Result {
        let (unit, sum) = (self.unit, &self.summary);
        writeln!(
            out,
            "patches: {} same, {} moved, {} undecided, {} added, {} removed",
            sum.same, sum.moved, sum.undecided, sum.added, sum.removed
        )?;
        writeln!(
            out,
            "seams: {} worse, {} better, {} otherwise, {} added, {} removed",
            sum.seams_worse, sum.seams_better, sum.seams_other, sum.seams_added, sum.seams_removed
        )?;
        writeln!(
            out,
            "tolerance: {} {unit}{}; distances: attained, then the proved upper bound in brackets",
            figure(self.tolerance),
            if self.tolerance_is_rounding {
                ", rounding"
            } else {
                ""
            }
        )?;
        let far: Vec<_> = self.patches.iter().filter(|p| p.state != "same").collect();
        if !far.is_empty() {
            writeln!(out, "\nmoved:")?;
        }
        for line in far {
            let [x, y, z] = line.at.map(length);
            let place = |[u, v]: [f64; 2]| format!("({u:.4}, {v:.4})");
            writeln!(
                out,
                "  {}{}: {} ({}) {unit} at ({x}, {y}, {z}), old {}, new {}",
                line.name,
                if line.state == "moved" {
                    ""
                } else {
                    " (undecided)"
                },
                figure(line.attained),
                upward(line.proved),
                place(line.old_place),
                place(line.new_place),
            )?;
        }
        let otherwise: Vec<_> = self
            .patches
            .iter()
            .filter(|p| p.old != p.new || p.exchanged || p.reversed != [false; 2] || p.turned_over)
            .collect();
        if !otherwise.is_empty() {
            writeln!(out, "\ndescribed otherwise:")?;
        }
        for line in otherwise {
            writeln!(out, "  {}: {}", line.name, line.words())?;
        }
        for (names, what) in [(&self.added, "added"), (&self.removed, "removed")] {
            if !names.is_empty() {
                writeln!(out, "\n{what}: {}", names.join(", "))?;
            }
        }
        if !self.seams.is_empty() {
            writeln!(out, "\nseams, as they were and as they are:")?;
        }
        for line in &self.seams {
            writeln!(
                out,
                "  {:<7}  {} | {}: {} -> {}",
                line.trend,
                edge(&line.between),
                edge(&line.and),
                standing(line.old.as_ref(), unit),
                standing(line.new.as_ref(), unit)
            )?;
        }
        writeln!(out, "\n{}", self.caution)
    }
}

fn standing(line: Option<&StandingLine>, unit: &str) -> String {
    let Some(line) = line else {
        return "none".to_owned();
    };
    let mut text = format!(
        "{} {} over {} {unit}, gap {} {unit}",
        line.verdict,
        line.finding,
        length(line.length),
        figure(line.gap)
    );
    if let Some(angle) = line.angle_deg {
        text += &format!(", {} deg", figure(angle));
    }
    text
}

impl PatchChangeLine {
    fn new(patch: &PatchChange) -> Self {
        let distance = &patch.distance;
        let [old, new] = patch.description.map(DescriptionLine::new);
        Self {
            name: patch.name.clone(),
            state: match patch.state {
                PatchState::Same => "same",
                PatchState::Undecided => "undecided",
                PatchState::Moved => "moved",
            },
            proved: distance.bracket.proved,
            attained: distance.bracket.attained,
            at: distance.at.coords.into(),
            old_place: distance.old,
            new_place: distance.new,
            old,
            new,
            exchanged: patch.course.exchanged,
            reversed: patch.course.reversed,
            turned_over: patch.turned_over,
        }
    }

    /// What is other about it, in words.
    fn words(&self) -> String {
        let mut words = Vec::new();
        if self.old != self.new {
            words.push(format!("{} -> {}", self.old.words(), self.new.words()));
        }
        if self.exchanged {
            words.push("u and v exchanged".to_owned());
        }
        for (reversed, letter) in self.reversed.into_iter().zip(["u", "v"]) {
            if reversed {
                words.push(format!("{letter} reversed"));
            }
        }
        if self.turned_over {
            words.push("faces the other way".to_owned());
        }
        words.join(", ")
    }
}

impl DescriptionLine {
    fn new(description: Description) -> Self {
        let (m, n) = description.degree;
        let (rows, columns) = description.pieces;
        Self {
            kind: description.kind,
            degree: [m, n],
            pieces: [rows, columns],
        }
    }

    fn words(&self) -> String {
        let [m, n] = self.degree;
        let [rows, columns] = self.pieces;
        format!(
            "{}, degrees {m} and {n}, {}",
            self.kind,
            many(rows * columns, "piece")
        )
    }
}

impl SeamChangeLine {
    fn new(seam: &SeamChange) -> Self {
        Self {
            between: seam.between.clone(),
            and: seam.and.clone(),
            trend: match seam.trend {
                Trend::Worse => "worse",
                Trend::Removed => "removed",
                Trend::Added => "added",
                Trend::Other => "other",
                Trend::Better => "better",
            },
            old: seam.old.as_ref().map(StandingLine::new),
            new: seam.new.as_ref().map(StandingLine::new),
        }
    }
}

impl StandingLine {
    fn new(standing: &SeamStanding) -> Self {
        Self {
            number: standing.number,
            demand: standing.demand,
            finding: standing.finding.to_string(),
            verdict: standing.verdict.to_string(),
            severity: standing.severity,
            length: standing.length,
            gap: standing.gap,
            angle_deg: standing.angle_deg,
            curvature_per_mm: standing.curvature_per_mm,
        }
    }
}
