//! What a run is predicted to come to.

use std::fmt::Write;

use serde::Serialize;

use super::wording::written;
use super::{CAUTION, WrittenLine};
use crate::format::{Format, Written};
use crate::mesh::Prediction;
use crate::patch_set::PatchSet;
use crate::sampling::Limits;

/// Version of the JSON fields of [`Forecast`].
const SCHEMA_VERSION: u32 = 1;

/// A prediction, as told in text and as JSON; lengths in the set's unit.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Forecast {
    /// Version of these fields.
    pub schema_version: u32,
    /// The set's name.
    pub name: String,
    /// The unit of all lengths.
    pub unit: &'static str,
    /// The chord tolerance.
    pub chord: f64,
    /// Largest turn of the normal in a triangle, if asked for.
    pub normal_deg: Option<f64>,
    /// Largest edge, if asked for.
    pub max_edge: Option<f64>,
    /// Patches to be meshed.
    pub patches: usize,
    /// Triangles.
    pub triangles: u64,
    /// Geometric points, each once.
    pub vertices: u64,
    /// Points as the file would store them.
    pub file_vertices: u64,
    /// Whether all was meshed to find out, so that the counts are exact.
    pub exact: bool,
    /// The file.
    pub written: WrittenLine,
    /// Peak memory, bytes.
    pub memory: u64,
    /// Wall-clock seconds.
    pub seconds: f64,
    /// Why the run would be refused; null where it would not.
    pub refused: Option<String>,
    /// The usual caution.
    pub caution: &'static str,
}

impl Forecast {
    /// Puts together what was found.
    #[must_use]
    pub fn new(
        set: &PatchSet,
        limits: &Limits,
        prediction: &Prediction,
        format: Format,
        written: &Written,
        refused: Option<String>,
    ) -> Self {
        Self {
            schema_version: SCHEMA_VERSION,
            name: set.name().to_owned(),
            unit: set.unit().symbol(),
            chord: limits.chord,
            normal_deg: limits.normal_rad.map(f64::to_degrees),
            max_edge: limits.max_edge,
            patches: prediction.patches.iter().filter(|t| **t > 0.0).count(),
            triangles: whole(prediction.triangles()),
            vertices: whole(prediction.points),
            file_vertices: written.file_vertices,
            exact: prediction.exact,
            written: WrittenLine {
                format: format.name(),
                layout: written.layout.name(),
                bytes: written.bytes,
            },
            memory: whole(prediction.memory),
            seconds: prediction.seconds,
            refused,
            caution: CAUTION,
        }
    }

    /// The prediction as text, one subject a line.
    #[must_use]
    pub fn text(&self) -> String {
        written(|out| self.write_text(out))
    }

    fn write_text(&self, out: &mut String) -> std::fmt::Result {
        if !self.name.is_empty() {
            writeln!(out, "{}", self.name)?;
        }
        let (about, how) = if self.exact {
            ("", "counted: all of it was meshed")
        } else {
            ("about ", "predicted from a part of the patches")
        };
        writeln!(
            out,
            "mesh        {about}{} triangles, {about}{} vertices ({} in the file), {how}",
            self.triangles, self.vertices, self.file_vertices
        )?;
        writeln!(
            out,
            "file        {about}{} bytes of {}, layout {}",
            self.written.bytes,
            self.written.format.to_uppercase(),
            self.written.layout
        )?;
        #[allow(clippy::cast_precision_loss, reason = "two digits are shown")]
        let memory = self.memory as f64 / 1e6;
        writeln!(out, "memory      at most about {memory:.0} MB")?;
        writeln!(out, "seconds     about {:.1}", self.seconds)?;
        writeln!(out, "nothing was written\n\n{}", self.caution)
    }
}

#[allow(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "rounded; the cast saturates"
)]
fn whole(value: f64) -> u64 {
    value.round() as u64
}
