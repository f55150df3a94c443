//! `tessellate --family`: meshes of one set, each finer than the one before.

use std::path::{Path, PathBuf};

use super::super::output::Output;
use super::making::Job;
use super::{TessellateArguments, UsageError};
use crate::report::{FAMILY_FACTOR, FamilySummary};
use crate::sampling::Limits;

/// The file of a level, counted from 1: `front.vtu` becomes `front_1.vtu`.
fn file(output: &Path, level: u32) -> PathBuf {
    let mut name = output.file_stem().unwrap_or_default().to_owned();
    name.push(format!("_{level}"));
    if let Some(extension) = output.extension() {
        name.push(".");
        name.push(extension);
    }
    output.with_file_name(name)
}

/// The limits of a level: lengths and angles are divided by the factor from level to
/// level, the chord by its square, as the error of a facet goes with the square of
/// its size.
fn limits(asked: &Limits, level: u32) -> Limits {
    let factor = (1..level).fold(1.0, |all, _| all * FAMILY_FACTOR);
    Limits::new(
        asked.chord / (factor * factor),
        asked.normal_rad.map(|angle| angle / factor),
        asked.max_edge.map(|edge| edge / factor),
    )
}

impl TessellateArguments {
    /// The places of all files, found fit before the work begins.
    pub(super) fn family_outputs(
        &self,
        levels: u32,
    ) -> Result<Vec<(PathBuf, Output)>, Box<dyn std::error::Error>> {
        let mut outputs = Vec::new();
        for level in 1..=levels {
            let name = file(&self.output, level);
            let output = Output::open(&name, &[&self.set])?;
            if self.output.as_os_str() == "-" || !output.is_file() {
                return Err(UsageError::Family.into());
            }
            outputs.push((name, output));
        }
        Ok(outputs)
    }

    /// Makes every mesh of the family. Files get their names once all are written.
    pub(super) fn family(
        &self,
        job: &Job<'_>,
        asked: &Limits,
        outputs: Vec<(PathBuf, Output)>,
    ) -> Result<FamilySummary, Box<dyn std::error::Error>> {
        let (mut written, mut levels) = (Vec::new(), Vec::new());
        for ((name, output), level) in outputs.into_iter().zip(1..) {
            let limits = limits(asked, level);
            let finer = (1..level).fold(1.0, |all, _| all * FAMILY_FACTOR);
            let made = self.make(job, &limits, finer, |write| output.prepare(write))?;
            let Some((summary, ready)) = made else {
                return Err(UsageError::Family.into());
            };
            written.push(ready);
            let name = name.file_name().unwrap_or_default();
            levels.push((name.to_string_lossy().into_owned(), summary));
        }
        for ready in written {
            ready.place()?;
        }
        Ok(FamilySummary::new(levels))
    }
}
