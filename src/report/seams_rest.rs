//! What a seam report tells beside its table, as text.

use std::fmt::Write;

use super::seams::{NearMissLine, SeamReport};
use super::seams_text::{edge, figure, length};
use super::wording::many;

/// Names of a list told in full; the rest is counted.
const NAMES: usize = 12;

impl SeamReport {
    /// Near misses, what is bridged, what lies on one another, slivers.
    pub(super) fn write_near(&self, out: &mut String) -> std::fmt::Result {
        let unit = self.unit;
        let apart = |miss: &NearMissLine| {
            format!(
                "  {} | {}: {} {unit} apart over {} {unit}",
                edge(&miss.between),
                edge(&miss.and),
                figure(miss.gap),
                length(miss.length),
            )
        };
        if !self.near_misses.is_empty() {
            writeln!(out, "\nnear misses, open in the mesh:")?;
            for miss in &self.near_misses {
                let more = if miss.widens {
                    ", and further beyond"
                } else {
                    ""
                };
                writeln!(
                    out,
                    "{}{more}, no seam at the gap tolerance {}",
                    apart(miss),
                    miss.gap_limit
                )?;
            }
        }
        if !self.bridged.is_empty() {
            writeln!(out, "\nbridged in the mesh, as asked for:")?;
            for miss in &self.bridged {
                writeln!(out, "{}", apart(miss))?;
            }
        }
        for overlap in &self.overlaps {
            let [x, y, z] = overlap.at.map(length);
            let [a, b] = &overlap.patches;
            if overlap.duplicate {
                writeln!(out, "\nduplicate: {a} and {b} are one surface")?;
            } else {
                writeln!(out, "\noverlap: {a} lies on {b} at ({x}, {y}, {z})")?;
            }
        }
        for sliver in &self.slivers {
            writeln!(
                out,
                "\nsliver: {} is nowhere wider than {} {unit}",
                sliver.patch,
                super::seams_text::upward(sliver.width)
            )?;
        }
        Ok(())
    }

    /// How the patches face.
    pub(super) fn write_orientation(&self, out: &mut String) -> std::fmt::Result {
        let facing = &self.orientation;
        let opposed = self.summary.normals_opposed;
        if opposed > 0 {
            writeln!(
                out,
                "\nnormals: across {} they point to opposite sides",
                many(opposed, "seam")
            )?;
        }
        let told = |names: &[String]| {
            let mut list = names.iter().take(NAMES).cloned().collect::<Vec<_>>();
            if names.len() > NAMES {
                list.push(format!("and {} more", names.len() - NAMES));
            }
            list.join(", ")
        };
        for (names, what) in [
            (&facing.flipped, "flipped against their part"),
            (&facing.turned_over, "turned over, as asked for"),
            (&facing.not_orientable, "part cannot face one way; it has"),
        ] {
            if !names.is_empty() {
                writeln!(out, "{what}: {}", told(names))?;
            }
        }
        Ok(())
    }
}
