//! What a family of meshes came to.

use std::fmt::Write;

use serde::Serialize;

use super::summary_text::figure;
use super::wording::{many, written};
use super::{CAUTION, Summary, upward};

/// How many times finer in length a mesh of a family is than the one before.
pub const FAMILY_FACTOR: f64 = 1.5;

/// Meshes of one set, each finer than the one before.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct FamilySummary {
    /// Version of these fields.
    pub schema_version: u32,
    /// How many times finer in length a mesh is than the one before.
    pub factor: f64,
    /// The meshes, the coarsest first.
    pub levels: Vec<LevelLine>,
    /// What it is not.
    pub caution: &'static str,
}

/// One mesh of a family.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct LevelLine {
    /// Its number, from 1.
    pub level: usize,
    /// The file, without its folder.
    pub file: String,
    /// The edge of the equilateral triangle that has the mean area.
    pub mean_edge: f64,
    /// All that is told of a single mesh.
    pub summary: Summary,
}

impl FamilySummary {
    /// The meshes by the names of their files, the coarsest first.
    #[must_use]
    pub fn new(levels: Vec<(String, Summary)>) -> Self {
        let levels = levels.into_iter().zip(1..).map(|((file, summary), level)| {
            #[allow(clippy::cast_precision_loss, reason = "counts stay below 2^52")]
            let each = summary.area / summary.triangles.max(1) as f64;
            LevelLine {
                level,
                file,
                mean_edge: (4.0 * each / 3.0_f64.sqrt()).sqrt(),
                summary,
            }
        });
        Self {
            schema_version: 1,
            factor: FAMILY_FACTOR,
            levels: levels.collect(),
            caution: CAUTION,
        }
    }

    /// The family as text, a mesh a line.
    #[must_use]
    pub fn text(&self) -> String {
        self.text_with(Summary::text_of_one)
    }

    /// The same, with all that is known of the shape of triangles.
    #[must_use]
    pub fn text_with_places(&self) -> String {
        self.text_with(Summary::text_of_one_with_places)
    }

    fn text_with(&self, one: impl Fn(&Summary) -> String) -> String {
        written(|out| {
            self.write_table(out)?;
            for line in &self.levels {
                writeln!(out, "\nlevel {}, {}", line.level, line.file)?;
                out.push_str(&one(&line.summary));
            }
            writeln!(out, "\n{}", self.caution)
        })
    }

    fn write_table(&self, out: &mut String) -> std::fmt::Result {
        let Some(first) = self.levels.first().map(|line| &line.summary) else {
            return Ok(());
        };
        let unit = first.unit;
        writeln!(
            out,
            "{}{}, each {} times finer in length than the one before",
            if first.name.is_empty() {
                String::new()
            } else {
                format!("{}: ", first.name)
            },
            many(self.levels.len(), "mesh"),
            self.factor
        )?;
        writeln!(
            out,
            "mean edge: of the equilateral triangle with the mean area\n"
        )?;
        writeln!(
            out,
            "{:>5}{:>12}{:>10}{:>12}{:>12}{:>13}{:>13}  file",
            "level",
            format!("chord {unit}"),
            "triangles",
            format!("edge {unit}"),
            format!("proved {unit}"),
            format!("area {unit}^2"),
            format!("volume {unit}^3")
        )?;
        for line in &self.levels {
            let summary = &line.summary;
            writeln!(
                out,
                "{:>5}{:>12}{:>10}{:>12}{:>12}{:>13}{:>13}  {}",
                line.level,
                summary.chord.map_or_else(|| "none".to_owned(), figure),
                summary.triangles,
                figure(line.mean_edge),
                upward(summary.deviation.proved, figure),
                figure(summary.area),
                summary.volume.map_or_else(|| "open".to_owned(), figure),
                line.file
            )?;
        }
        Ok(())
    }
}
