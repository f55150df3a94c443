//! `chordwise compare`: what changed between two revisions of a set.

use std::path::PathBuf;

use clap::Args;

use super::Outcome;
use super::message;
use super::progress::Progress;
use super::source;
use super::style::OutputStyle;
use crate::patch_set::{Faults, Reading};
use crate::report::ComparisonReport;
use crate::revision::Comparison;
use crate::scalar::{Length, Tolerance};

const EXAMPLES: &str = "\
Examples:
  chordwise compare old.ron new.ron
  chordwise compare old.ron new.ron --tolerance 0.01mm
  chordwise compare old.ron new.ron --format json

Patches are compared by name: how far the surface moved, proved and attained,
whether it is written down otherwise, what came and went; then the seams that
are better or worse. One surface in another degree, in more pieces, or with u
and v exchanged is the same surface.

Exit code 0: nothing changed beyond the tolerance. 1: something did. 2: a set
cannot be used.";

/// Tell what changed between two revisions of a set
#[derive(Debug, Args)]
#[command(before_help = EXAMPLES)]
pub(super) struct CompareArguments {
    /// The old patch set; `-` is standard input
    #[arg(value_name = "OLD.ron")]
    old: PathBuf,

    /// The new patch set; `-` is standard input
    #[arg(value_name = "NEW.ron")]
    new: PathBuf,

    /// How far a patch may move and be the same, in the sets' unit or with m,
    /// cm, mm or in behind it [default: rounding, 1e-9 of the size]
    #[arg(long, value_name = "LENGTH", allow_negative_numbers = true)]
    tolerance: Option<Length>,

    /// How the report is printed
    #[arg(long, value_enum, default_value_t)]
    format: OutputStyle,
}

/// Wrong usage.
#[derive(Debug, thiserror::Error)]
#[error("both sets are standard input; one of them must be a file")]
struct BothStandard;

impl CompareArguments {
    /// Reads both sets, compares them and prints the report.
    pub(super) fn run(&self) -> Outcome {
        match self.try_run() {
            Ok(outcome) => outcome,
            Err(error) => Outcome::refuse(error),
        }
    }

    fn try_run(&self) -> Result<Outcome, Box<dyn std::error::Error>> {
        if [&self.old, &self.new]
            .iter()
            .all(|path| path.as_os_str() == "-")
        {
            return Err(BothStandard.into());
        }
        let progress = Progress::new();
        progress.stage("reading");
        let (old, new) = match (source::read(&self.old), source::read(&self.new)) {
            (Ok(old), Ok(new)) => (old, new),
            (old, new) => {
                drop(progress);
                let show = |reading: Result<Reading, Faults>| {
                    if let Err(faults) = reading {
                        source::show_faults(&faults);
                    }
                };
                show(old);
                show(new);
                return Ok(Outcome::Refused);
            }
        };
        let tolerance = self
            .tolerance
            .map(|length| Tolerance::new(length.in_unit(new.set.unit())))
            .transpose()?;
        progress.stage("comparing");
        let found = Comparison::of(&old.set, &new.set, tolerance)?;
        drop(progress);
        let report = ComparisonReport::new(&old.set, &new.set, &found);
        let text = match self.format {
            OutputStyle::Text => report.text(),
            OutputStyle::Json => serde_json::to_string_pretty(&report)? + "\n",
        };
        message::report(&text, false)?;
        Ok(if report.changed {
            Outcome::Findings
        } else {
            Outcome::Done
        })
    }
}
