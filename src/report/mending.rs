//! What mending came to: one model, as JSON by `serde` and as text.

use std::fmt::Write;

use serde::Serialize;

use super::CAUTION;
use super::seam_line::{EdgeName, name};
use super::seams_text::{edge, figure, upward};
use super::wording::{many, written};
use crate::continuity::SurveyedSeam;
use crate::mending::Mending;
use crate::scalar::Tolerance;

/// Version of the JSON fields of [`MendingReport`].
const SCHEMA_VERSION: u32 = 1;

/// Everything `mend` tells; lengths in the set's unit.
#[derive(Debug, Clone, Serialize)]
pub struct MendingReport {
    /// Version of these fields.
    pub schema_version: u32,
    /// The set's name.
    pub name: String,
    /// The unit of all lengths.
    pub unit: &'static str,
    /// No point moves further.
    pub limit: f64,
    /// The largest move of a control point: proved, no surface moved further.
    pub largest_move: f64,
    /// Points of the file that moved.
    pub points: usize,
    /// Patches with moved points, the largest move first.
    pub moves: Vec<MoveLine>,
    /// Seams that were not as demanded and now are, worst first.
    pub mended: Vec<MendedLine>,
    /// Seams that are left alone, worst first.
    pub left: Vec<LeftLine>,
    /// What the mended set's own seam check finds.
    pub findings: usize,
    /// What the report does not say.
    pub caution: &'static str,
}

/// How far the control points of a patch moved.
#[derive(Debug, Clone, Serialize)]
pub struct MoveLine {
    /// The patch.
    pub patch: String,
    /// How many of its control points moved.
    pub points: usize,
    /// The largest move: proved, the surface moved no further.
    pub largest: f64,
}

/// A mended seam; figures attained.
#[derive(Debug, Clone, Serialize)]
pub struct MendedLine {
    /// The edge of lesser name.
    pub between: EdgeName,
    /// The other edge.
    pub and: EdgeName,
    /// Gaps before and after.
    pub gap: [f64; 2],
    /// Angles before and after, degrees.
    pub angle_deg: [Option<f64>; 2],
}

/// A seam that is left alone.
#[derive(Debug, Clone, Serialize)]
pub struct LeftLine {
    /// The edge of lesser name.
    pub between: EdgeName,
    /// The other edge.
    pub and: EdgeName,
    /// What is wrong with it.
    pub finding: String,
    /// Why it is left alone.
    pub reason: String,
}

impl MendingReport {
    /// The report of a mending within a limit.
    #[must_use]
    pub fn new(mending: &Mending, limit: Tolerance) -> Self {
        let set = &mending.set;
        let ends = |seam: &SurveyedSeam| (name(set, &seam.between), name(set, &seam.and));
        Self {
            schema_version: SCHEMA_VERSION,
            name: set.name().to_owned(),
            unit: set.unit().symbol(),
            limit: limit.get(),
            largest_move: mending.largest(),
            points: mending.points,
            moves: mending
                .moves
                .iter()
                .map(|line| MoveLine {
                    patch: line.patch.clone(),
                    points: line.points,
                    largest: line.largest,
                })
                .collect(),
            mended: mending
                .mended
                .iter()
                .map(|seam| {
                    let (between, and) = ends(&seam.before);
                    let both = [&seam.before, &seam.after];
                    MendedLine {
                        between,
                        and,
                        gap: both.map(|s| s.gap.bracket.attained),
                        angle_deg: both.map(|s| s.angle_deg.map(|f| f.bracket.attained)),
                    }
                })
                .collect(),
            left: mending
                .left
                .iter()
                .map(|(seam, reason)| {
                    let (between, and) = ends(seam);
                    LeftLine {
                        between,
                        and,
                        finding: seam.finding.to_string(),
                        reason: reason.to_string(),
                    }
                })
                .collect(),
            findings: mending.findings,
            caution: CAUTION,
        }
    }

    /// The report as text.
    #[must_use]
    pub fn text(&self) -> String {
        written(|out| self.write_text(out))
    }

    fn write_text(&self, out: &mut String) -> std::fmt::Result {
        let unit = self.unit;
        if !self.name.is_empty() {
            write!(out, "{}: ", self.name)?;
        }
        writeln!(
            out,
            "{} mended, {} left alone",
            many(self.mended.len(), "seam"),
            self.left.len()
        )?;
        if self.moves.is_empty() {
            writeln!(out, "nothing moved; limit {} {unit}", self.limit)?;
        } else {
            writeln!(
                out,
                "{} of the file moved by up to {} {unit}, proved for the surfaces too; limit {} {unit}",
                many(self.points, "point"),
                upward(self.largest_move),
                self.limit
            )?;
            writeln!(out, "\nmoved by up to:")?;
            for line in &self.moves {
                writeln!(
                    out,
                    "  {:>10} {unit}  {}, {}",
                    upward(line.largest),
                    line.patch,
                    many(line.points, "control point")
                )?;
            }
        }
        if !self.mended.is_empty() {
            writeln!(out, "\nmended:")?;
        }
        for line in &self.mended {
            let [gap, closed] = line.gap.map(figure);
            write!(
                out,
                "  {} | {}: gap {gap} -> {closed} {unit}",
                edge(&line.between),
                edge(&line.and)
            )?;
            if let [Some(before), Some(after)] = line.angle_deg {
                write!(out, ", angle {} -> {} deg", figure(before), figure(after))?;
            }
            writeln!(out)?;
        }
        if !self.left.is_empty() {
            writeln!(out, "\nleft alone:")?;
        }
        for line in &self.left {
            writeln!(
                out,
                "  {} | {} ({}): {}",
                edge(&line.between),
                edge(&line.and),
                line.finding,
                line.reason
            )?;
        }
        let check = if self.findings == 0 {
            "every seam is as demanded".to_owned()
        } else {
            many(self.findings, "finding")
        };
        writeln!(out, "\nseam check of the mended set: {check}")?;
        writeln!(out, "\n{}", self.caution)
    }
}
