//! `chordwise mend`: moves control points so that seams are as demanded.

use std::path::PathBuf;

use clap::Args;

use super::Outcome;
use super::message;
use super::output::Output;
use super::progress::Progress;
use super::source;
use super::style::OutputStyle;
use crate::mending::{Mending, MendingError};
use crate::patch_set::PatchSet;
use crate::report::MendingReport;
use crate::scalar::{Length, Tolerance};

const EXAMPLES: &str = "\
Examples:
  chordwise mend front.ron --dry-run
  chordwise mend front.ron -o mended.ron
  chordwise mend front.ron -o mended.ron --limit 0.5mm --format json

Seams that are not as demanded are mended by the smallest moves of control points
(least squares): boundary rows for gaps, the next rows for tangents. Seams that
meet are mended together; none that was as demanded is spoilt. What would take a
larger move than the limit, what cannot be met at once, and kinds without a
control net are left alone, and named. The rest of the file, with its comments,
is kept to the letter.

Exit code 0: every seam of the mended set is as demanded. 1: something is left.
2: the set cannot be used.";

/// Move control points so that seams are as demanded
#[derive(Debug, Args)]
#[command(before_help = EXAMPLES)]
pub(super) struct MendArguments {
    /// The patch set; `-` is standard input
    #[arg(value_name = "SET.ron")]
    set: PathBuf,

    /// The file to write; `-` is standard output
    #[arg(short, long, value_name = "FILE", required_unless_present = "dry_run")]
    output: Option<PathBuf>,

    /// How far a control point may move, in the set's unit or with m, cm, mm or
    /// in behind it [default: ten times the search distance]
    #[arg(long, value_name = "LENGTH", allow_negative_numbers = true)]
    limit: Option<Length>,

    /// Say what would be moved, and write nothing
    #[arg(long)]
    dry_run: bool,

    /// How the report is printed
    #[arg(long, value_enum, default_value_t)]
    format: OutputStyle,
}

impl MendArguments {
    /// Reads the set, mends it, writes it and prints the report.
    pub(super) fn run(&self) -> Outcome {
        match self.try_run() {
            Ok(outcome) => outcome,
            Err(error) => match error.downcast_ref::<MendingError>() {
                Some(MendingError::Faults(faults)) => {
                    source::show_faults(faults);
                    Outcome::Refused
                }
                _ => Outcome::refuse(error),
            },
        }
    }

    fn try_run(&self) -> Result<Outcome, Box<dyn std::error::Error>> {
        let output = match (&self.output, self.dry_run) {
            (Some(path), false) => Some(Output::open(path, &[&self.set])?),
            _ => None,
        };
        let progress = Progress::new();
        progress.stage("reading");
        let name = source::name(&self.set);
        let bytes = source::bytes(&self.set).map_err(MendingError::Faults)?;
        let reading = PatchSet::from_bytes(bytes.clone(), &name).map_err(MendingError::Faults)?;
        let text = String::from_utf8(bytes)?;
        let own = 10.0 * reading.set.tolerances().search.get();
        let unit = reading.set.unit();
        let limit = Tolerance::new(self.limit.map_or(own, |limit| limit.in_unit(unit)))?;
        drop(reading);
        progress.stage("mending");
        let mending = Mending::of(&text, &name, limit)?;
        drop(progress);
        let report = MendingReport::new(&mending, limit);
        let standard = output.as_ref().is_some_and(Output::is_standard);
        if let Some(output) = output {
            output.write(|out| Ok(out.write_all(mending.text.as_bytes())?))?;
        }
        let told = match self.format {
            OutputStyle::Text => report.text(),
            OutputStyle::Json => serde_json::to_string_pretty(&report)? + "\n",
        };
        message::report(&told, standard)?;
        Ok(if report.findings == 0 {
            Outcome::Done
        } else {
            Outcome::Findings
        })
    }
}
