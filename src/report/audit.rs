//! What an audit came to.

use std::fmt::Write;

use serde::Serialize;

use super::wording::{many, written};
use super::{CAUTION, upward};
use crate::mesh::{Audit, Finding};
use crate::patch_set::PatchSet;
use crate::scalar::Tolerance;

/// Version of the JSON fields of [`AuditReport`].
const SCHEMA_VERSION: u32 = 1;

/// Findings told in text; JSON has them all.
const SHOWN: usize = 20;

/// The outcome of an audit, as told in text and as JSON; lengths in the set's
/// unit.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct AuditReport {
    /// Version of these fields.
    pub schema_version: u32,
    /// The set's name.
    pub name: String,
    /// The unit of all lengths.
    pub unit: &'static str,
    /// The chord tolerance the mesh was held to.
    pub chord: f64,
    /// `proved` or `findings`.
    pub verdict: &'static str,
    /// Triangles.
    pub triangles: usize,
    /// Patches of the set that have triangles.
    pub patches: usize,
    /// Patches of the set that have none.
    pub absent: Vec<String>,
    /// The deviation, proved anew.
    pub deviation: AuditDeviation,
    /// What is wrong.
    pub findings: Vec<FindingLine>,
    /// The usual caution.
    pub caution: &'static str,
}

/// The deviation of the triangles that could be placed.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct AuditDeviation {
    /// The larger of the two that follow.
    pub proved: f64,
    /// Proved from the surface to the mesh.
    pub proved_to_mesh: f64,
    /// Proved from the mesh to the surface.
    pub proved_to_surface: f64,
    /// A true distance of a point of the surface from the mesh.
    pub attained: f64,
    /// The triangle there, from 0.
    pub triangle: Option<usize>,
    /// The patch of that point.
    pub patch: Option<String>,
    /// Its parameters.
    pub place: Option<[f64; 2]>,
    /// The point.
    pub at: Option<[f64; 3]>,
}

/// One finding.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct FindingLine {
    /// A short name of the fault.
    pub fault: &'static str,
    /// The fault in words, with its figures.
    pub text: String,
    /// The triangle, from 0 in the file's order.
    pub triangle: Option<usize>,
    /// The patch.
    pub patch: String,
    /// The patch's own (u, v).
    pub place: Option<[f64; 2]>,
    /// The place in space.
    pub at: Option<[f64; 3]>,
}

impl FindingLine {
    fn new(finding: &Finding) -> Self {
        Self {
            fault: finding.fault.name(),
            text: finding.fault.to_string(),
            triangle: finding.triangle,
            patch: finding.patch.clone(),
            place: finding.place,
            at: finding.point.map(|p| p.coords.into()),
        }
    }

    fn line(&self) -> String {
        let mut place = format!("patch `{}`", self.patch);
        // Writing to a string cannot fail.
        if let Some(triangle) = self.triangle {
            let _ = write!(place, ", triangle {triangle}");
        }
        if let Some([u, v]) = self.place {
            let _ = write!(place, ", (u, v) = ({u:.6}, {v:.6})");
        }
        if let Some([x, y, z]) = self.at {
            let _ = write!(place, ", place ({x:.6}, {y:.6}, {z:.6})");
        }
        format!("{place}: {}", self.text)
    }
}

impl AuditReport {
    /// The report of an audit against a chord tolerance.
    #[must_use]
    pub fn new(set: &PatchSet, chord: Tolerance, audit: &Audit) -> Self {
        let worst = audit.worst.as_ref();
        Self {
            schema_version: SCHEMA_VERSION,
            name: set.name().to_owned(),
            unit: set.unit().symbol(),
            chord: chord.get(),
            verdict: if audit.findings.is_empty() {
                "proved"
            } else {
                "findings"
            },
            triangles: audit.triangles,
            patches: audit.patches,
            absent: audit.absent.clone(),
            deviation: AuditDeviation {
                proved: audit.proved(),
                proved_to_mesh: audit.to_mesh.proved,
                proved_to_surface: audit.to_surface,
                attained: audit.to_mesh.attained,
                triangle: worst.map(|w| w.triangle),
                patch: worst.map(|w| w.patch.clone()),
                place: worst.map(|w| w.place),
                at: worst.map(|w| w.point.coords.into()),
            },
            findings: audit.findings.iter().map(FindingLine::new).collect(),
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
            writeln!(out, "{}", self.name)?;
        }
        let few = self.absent.iter().take(5).map(String::as_str);
        let names = few.collect::<Vec<_>>().join(", ");
        let absent = match self.absent.len() {
            0 => "all patches of the set are there".to_owned(),
            n if n <= 5 => format!("{n} patches of the set have none: {names}"),
            n => format!("{n} patches of the set have none: {names}, ..."),
        };
        writeln!(
            out,
            "mesh        {} on {}; {absent}",
            many(self.triangles, "triangle"),
            many(self.patches, "patch")
        )?;
        let d = &self.deviation;
        let long = |value: f64| format!("{value:.6e}");
        write!(
            out,
            "deviation   {} {unit} proved, {:.6e} {unit} attained",
            upward(d.proved, long),
            d.attained
        )?;
        if let (Some(patch), Some([u, v])) = (&d.patch, d.place) {
            write!(out, " at {patch} (u {u:.4}, v {v:.4})")?;
        }
        writeln!(out, "; chord tolerance {} {unit}", self.chord)?;
        let of = if self.findings.is_empty() {
            "both proved for every triangle"
        } else {
            "both for the triangles that could be placed"
        };
        writeln!(
            out,
            "            surface to mesh {} {unit}, mesh to surface {} {unit}, {of}",
            upward(d.proved_to_mesh, long),
            upward(d.proved_to_surface, long)
        )?;
        if self.findings.is_empty() {
            writeln!(out, "verdict     proved within the chord tolerance")?;
        } else {
            writeln!(out, "verdict     {} findings\n", self.findings.len())?;
            for finding in self.findings.iter().take(SHOWN) {
                writeln!(out, "{}", finding.line())?;
            }
            if self.findings.len() > SHOWN {
                let more = self.findings.len() - SHOWN;
                writeln!(out, "and {more} more; --format json has them all")?;
            }
        }
        writeln!(out, "\n{}", self.caution)
    }
}
