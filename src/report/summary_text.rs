//! The outcome of a run as a short text.

use std::fmt::Write;

use super::wording::{many, written};
use super::{Summary, upward};

impl Summary {
    /// The outcome as text, one subject a line.
    #[must_use]
    pub fn text(&self) -> String {
        format!("{}\n{}\n", self.text_of_one(), self.caution)
    }

    /// The same, with histograms and the worst triangles with their places, where
    /// these are known.
    #[must_use]
    pub fn text_with_places(&self) -> String {
        format!("{}\n{}\n", self.text_of_one_with_places(), self.caution)
    }

    /// The outcome as one of several.
    pub(super) fn text_of_one(&self) -> String {
        written(|out| self.write_text(out))
    }

    /// The same, with the places.
    pub(super) fn text_of_one_with_places(&self) -> String {
        written(|out| {
            self.write_text(out)?;
            self.quality.write_places(out)
        })
    }

    fn write_text(&self, out: &mut String) -> std::fmt::Result {
        let unit = self.unit;
        if !self.name.is_empty() {
            writeln!(out, "{}", self.name)?;
        }
        writeln!(
            out,
            "patches     {} in {}, {}, {}",
            self.patches,
            many(self.panels, "panel"),
            many(self.edges, "edge"),
            many(self.seams, "joined seam"),
        )?;
        writeln!(
            out,
            "mesh        {} triangles, {} vertices ({} in the file), {} ({:.2} indices a triangle)",
            self.triangles,
            self.vertices,
            self.file_vertices,
            many(self.strips, "strip"),
            self.indices_per_triangle
        )?;
        let d = &self.deviation;
        writeln!(
            out,
            "deviation   {} {unit} proved, {} {unit} attained at {} (u {:.4}, v {:.4}); {}",
            upward(d.proved, figure),
            figure(d.attained),
            d.patch,
            d.u,
            d.v,
            self.chord.map_or_else(
                || "no chord tolerance was given".to_owned(),
                |chord| format!("chord tolerance {chord} {unit}")
            )
        )?;
        writeln!(
            out,
            "            surface to mesh {} {unit}, mesh to surface {} {unit}, both proved for every triangle{}",
            upward(d.proved_to_mesh, figure),
            upward(d.proved_to_surface, figure),
            if d.rounding > 0.0 {
                format!(
                    "; {} {unit} of it is rounding in the file",
                    upward(d.rounding, figure)
                )
            } else {
                String::new()
            }
        )?;
        if let Some(angle) = self.normal_deg {
            writeln!(
                out,
                "            normals turn at most {angle} deg in a triangle"
            )?;
        }
        if let Some(edge) = self.max_edge {
            writeln!(out, "            edges at most {edge} {unit}")?;
        }
        match &self.sized {
            Some(sized) => sized.write_text(unit, out)?,
            None => writeln!(
                out,
                "economy     {:.2} x the theoretical floor of {:.0} triangles",
                self.triangles_over_floor, self.floor
            )?,
        }
        writeln!(out, "watertight  {}", self.watertight)?;
        if !self.bridged.is_empty() {
            writeln!(
                out,
                "bridged     {}, as asked for:",
                many(self.bridged.len(), "gap")
            )?;
        }
        for line in &self.bridged {
            writeln!(
                out,
                "            {} {} | {} {}: up to {} {unit}, proved",
                line.between.0,
                line.between.1,
                line.and.0,
                line.and.1,
                upward(line.gap, figure)
            )?;
        }
        if !self.turned_over.is_empty() {
            writeln!(
                out,
                "turned over {}: {}",
                many(self.turned_over.len(), "patch"),
                self.turned_over.join(", ")
            )?;
        }
        match self.volume {
            Some(volume) => writeln!(
                out,
                "size        area {} {unit}^2, volume {} {unit}^3{}",
                figure(self.area),
                figure(volume),
                if volume < 0.0 {
                    ": it faces inwards, --orient turns it outwards"
                } else {
                    ""
                }
            )?,
            None => writeln!(out, "size        area {} {unit}^2", figure(self.area))?,
        }
        self.quality.write_short(out, unit)?;
        self.quality.write_table(out)?;
        let s = &self.storage;
        writeln!(
            out,
            "storage     {} bytes as separate triangles, {} indexed, {} in strips of points, {} in indexed strips",
            s.triangles, s.indexed, s.strips, s.indexed_strips
        )?;
        writeln!(
            out,
            "written     {} bytes of {}, layout {}",
            self.written.bytes,
            self.written.format.to_uppercase(),
            self.written.layout
        )?;
        let t = &self.seconds;
        let total =
            t.reading + t.pairing + t.sampling + t.tessellation + t.assembly + t.strips + t.writing;
        writeln!(
            out,
            "seconds     {total:.2}: reading {:.2}, pairing {:.2}, sampling {:.2}, tessellating and proving {:.2}, assembling {:.2}, strips {:.2}, writing {:.2}",
            t.reading, t.pairing, t.sampling, t.tessellation, t.assembly, t.strips, t.writing
        )
    }
}

/// Five significant digits, without an exponent where that stays short.
pub(super) fn figure(value: f64) -> String {
    let size = value.abs();
    if size > 0.0 && !(1e-4..1e9).contains(&size) {
        return format!("{value:.3e}");
    }
    #[allow(
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "a logarithm between -4 and 9"
    )]
    let before = if size >= 1.0 {
        size.log10().floor() as usize + 1
    } else {
        0
    };
    let decimals = if size == 0.0 || before == 0 {
        6
    } else {
        5_usize.saturating_sub(before)
    };
    format!("{value:.decimals$}")
}
