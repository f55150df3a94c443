//! What a run came to that passed its triangles on as they were made.

use std::fmt::Write;

use serde::Serialize;

use super::summary_text::figure;
use super::wording::{many, written};
use super::{CAUTION, SecondsLine, WrittenLine, upward};
use crate::format::{Format, Written};
use crate::mesh::Streamed;
use crate::patch_set::PatchSet;
use crate::sampling::Limits;

/// The outcome, as told in text and as JSON; lengths in the set's unit.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct StreamSummary {
    /// Version of these fields.
    pub schema_version: u32,
    /// The set's name.
    pub name: String,
    /// The unit of all lengths.
    pub unit: &'static str,
    /// The chord tolerance the mesh was held to.
    pub chord: f64,
    /// Largest turn of the normal in a triangle, if asked for.
    pub normal_deg: Option<f64>,
    /// Largest edge, if asked for.
    pub max_edge: Option<f64>,
    /// Patches meshed.
    pub patches: usize,
    /// Seams of the whole set where two edges or more are joined.
    pub seams: usize,
    /// Triangles.
    pub triangles: u64,
    /// Proved bounds of the deviation.
    pub deviation: ProvedLine,
    /// How few triangles would do: sampled from the curvature.
    pub floor: f64,
    /// Triangles over that floor.
    pub triangles_over_floor: f64,
    /// Open chains of edges of the whole set.
    pub open_loops: usize,
    /// Patches turned over, by name.
    pub turned_over: Vec<String>,
    /// The file.
    pub written: WrittenLine,
    /// Wall-clock seconds by stage; `tessellation` includes writing.
    pub seconds: SecondsLine,
    /// What it is not.
    pub caution: &'static str,
}

/// Proved bounds, rounding of the file included.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct ProvedLine {
    /// The larger of the two.
    pub proved: f64,
    /// Surface to mesh.
    pub proved_to_mesh: f64,
    /// Mesh to surface.
    pub proved_to_surface: f64,
    /// What of it is rounding in the file.
    pub rounding: f64,
}

impl StreamSummary {
    /// Gathers what is told of a mesh written as STL; `turned_over` are the names of
    /// patches turned over beforehand.
    #[must_use]
    pub fn new(
        set: &PatchSet,
        limits: &Limits,
        made: &Streamed,
        written: &Written,
        seconds: SecondsLine,
        turned_over: Vec<String>,
    ) -> Self {
        let joined = made.topology.seams().iter().filter(|s| s.spans.len() > 1);
        #[allow(clippy::cast_precision_loss, reason = "counts stay below 2^52")]
        let over = made.triangles as f64 / made.floor.max(1.0);
        let with_rounding = |proved: f64| (proved + written.rounding).next_up();
        Self {
            schema_version: 1,
            name: set.name().to_owned(),
            unit: set.unit().symbol(),
            chord: limits.chord,
            normal_deg: limits.normal_rad.map(f64::to_degrees),
            max_edge: limits.max_edge,
            patches: made.patches,
            seams: joined.count(),
            triangles: made.triangles,
            deviation: ProvedLine {
                proved: with_rounding(made.proved()),
                proved_to_mesh: with_rounding(made.proved_to_mesh),
                proved_to_surface: with_rounding(made.proved_to_surface),
                rounding: written.rounding,
            },
            floor: made.floor,
            triangles_over_floor: over,
            open_loops: made.topology.open_loops().len(),
            turned_over,
            written: WrittenLine {
                format: Format::Stl.name(),
                layout: written.layout.name(),
                bytes: written.bytes,
            },
            seconds: SecondsLine {
                pairing: made.seconds.pairing,
                sampling: made.seconds.sampling,
                tessellation: made.seconds.tessellation,
                ..seconds
            },
            caution: CAUTION,
        }
    }

    /// The outcome as text, one subject a line.
    #[must_use]
    pub fn text(&self) -> String {
        written(|out| self.write_text(out))
    }

    fn write_text(&self, out: &mut String) -> std::fmt::Result {
        let unit = self.unit;
        if !self.name.is_empty() {
            writeln!(out, "{}", self.name)?;
        }
        let (patches, seams) = (self.patches, many(self.seams, "joined seam"));
        writeln!(out, "patches     {patches}, {seams}")?;
        writeln!(out, "mesh        {} triangles, streamed", self.triangles)?;
        let d = &self.deviation;
        writeln!(
            out,
            "deviation   surface to mesh {} {unit}, mesh to surface {} {unit}, both proved for every triangle; {} {unit} of it is rounding in the file; chord tolerance {} {unit}",
            upward(d.proved_to_mesh, figure),
            upward(d.proved_to_surface, figure),
            upward(d.rounding, figure),
            self.chord
        )?;
        writeln!(
            out,
            "economy     {:.2} x the theoretical floor of {:.0} triangles",
            self.triangles_over_floor, self.floor
        )?;
        let border = many(self.open_loops, "open loop");
        writeln!(
            out,
            "border      {border} in the set; joined seams are crack-free"
        )?;
        if !self.turned_over.is_empty() {
            writeln!(out, "turned over {}", self.turned_over.join(", "))?;
        }
        writeln!(out, "written     {} bytes of STL", self.written.bytes)?;
        let t = &self.seconds;
        writeln!(
            out,
            "seconds     {:.2}: reading {:.2}, pairing {:.2}, sampling {:.2}, tessellating, proving and writing {:.2}",
            t.reading + t.pairing + t.sampling + t.tessellation,
            t.reading,
            t.pairing,
            t.sampling,
            t.tessellation
        )?;
        writeln!(out, "\n{}", self.caution)
    }
}
