//! `check`: reads a set and says what is wrong with it.

use std::io::{self, Write};
use std::path::PathBuf;

use clap::Args;
use serde::Serialize;

use super::outcome::Outcome;
use super::source;
use super::style::OutputStyle;
use crate::patch_set::{Diagnostic, Faults, PatchSet, Reading};
use crate::report::many;

const EXAMPLES: &str = "\
Examples:
  chordwise check front.ron                  faults and warnings, with their lines
  chordwise check front.ron --format json    the same for a program
  some-generator | chordwise check -

Exit code 0: valid, warnings included. 2: not valid, or not readable.";

/// Say what is wrong with a patch set
#[derive(Debug, Args)]
#[command(before_help = EXAMPLES)]
pub(super) struct CheckArguments {
    /// The patch set; `-` reads standard input
    #[arg(value_name = "SET.ron")]
    set: PathBuf,

    /// How the result is printed
    #[arg(long, value_enum, default_value_t)]
    format: OutputStyle,
}

impl CheckArguments {
    /// Reads the set, prints what is found, and ends.
    pub(super) fn run(&self) -> Outcome {
        let read = source::read(&self.set);
        let outcome = if read.is_ok() {
            Outcome::Done
        } else {
            Outcome::Refused
        };
        let mut out = io::stdout().lock();
        match self.print(&read, &mut out).and_then(|()| out.flush()) {
            Ok(()) => outcome,
            // Whoever reads our output may stop when they have seen enough.
            Err(error) if error.kind() == io::ErrorKind::BrokenPipe => outcome,
            Err(error) => Outcome::refuse(format_args!(
                "standard output: cannot write the report; {error}"
            )),
        }
    }

    fn print(&self, read: &Result<Reading, Faults>, out: &mut impl Write) -> io::Result<()> {
        match (self.format, read) {
            (OutputStyle::Text, Ok(reading)) => {
                source::show_warnings(reading);
                writeln!(out, "{}", Summary::of(&reading.set).line())
            }
            (OutputStyle::Text, Err(faults)) => {
                source::show_faults(faults);
                Ok(())
            }
            (OutputStyle::Json, _) => {
                serde_json::to_writer_pretty(&mut *out, &CheckReport::of(read))?;
                writeln!(out)
            }
        }
    }
}

/// The result as JSON.
#[derive(Debug, Serialize)]
struct CheckReport {
    /// Rises when a field changes its meaning.
    schema_version: u32,
    valid: bool,
    faults: Vec<Entry>,
    warnings: Vec<Entry>,
    summary: Option<Summary>,
}

/// A fault or warning as JSON; `line` and `column` count from 1.
#[derive(Debug, Serialize)]
struct Entry {
    line: Option<usize>,
    column: Option<usize>,
    place: String,
    message: String,
    hint: Option<String>,
}

impl From<&Diagnostic> for Entry {
    fn from(diagnostic: &Diagnostic) -> Self {
        Self {
            line: diagnostic.position.as_ref().map(|p| p.line),
            column: diagnostic.position.as_ref().map(|p| p.column),
            place: diagnostic.place.clone(),
            message: diagnostic.message(),
            hint: diagnostic.hint.clone(),
        }
    }
}

impl CheckReport {
    fn of(read: &Result<Reading, Faults>) -> Self {
        let entries = |list: &[Diagnostic]| list.iter().map(Entry::from).collect();
        match read {
            Ok(reading) => Self {
                schema_version: 1,
                valid: true,
                faults: Vec::new(),
                warnings: entries(&reading.warnings),
                summary: Some(Summary::of(&reading.set)),
            },
            Err(faults) => Self {
                schema_version: 1,
                valid: false,
                faults: entries(&faults.list),
                warnings: Vec::new(),
                summary: None,
            },
        }
    }
}

/// What a valid set holds. The box is that of the control points, which holds
/// the surface.
#[derive(Debug, Serialize)]
struct Summary {
    name: String,
    unit: &'static str,
    panels: usize,
    patches: usize,
    pieces: usize,
    control_points: usize,
    low: [f64; 3],
    high: [f64; 3],
}

impl Summary {
    fn of(set: &PatchSet) -> Self {
        let (mut low, mut high) = ([f64::INFINITY; 3], [f64::NEG_INFINITY; 3]);
        let mut control_points = 0;
        for piece in set.pieces() {
            for point in piece.surface.control_points() {
                control_points += 1;
                for axis in 0..3 {
                    low[axis] = low[axis].min(point[axis]);
                    high[axis] = high[axis].max(point[axis]);
                }
            }
        }
        Self {
            name: set.name().to_owned(),
            unit: set.unit().symbol(),
            panels: set.panels().len(),
            patches: set.patches().len(),
            pieces: set.pieces().len(),
            control_points,
            low,
            high,
        }
    }

    fn line(&self) -> String {
        let name = if self.name.is_empty() {
            String::new()
        } else {
            format!("{}: ", self.name)
        };
        let corner = |[x, y, z]: [f64; 3]| format!("({}, {}, {})", short(x), short(y), short(z));
        format!(
            "{name}valid; {}, {}, {}, {}; box of the nets {} to {} {}",
            many(self.panels, "panel"),
            many(self.patches, "patch"),
            many(self.pieces, "Bezier piece"),
            many(self.control_points, "control point"),
            corner(self.low),
            corner(self.high),
            self.unit,
        )
    }
}

/// At most four digits behind the point, without trailing zeros.
fn short(value: f64) -> String {
    let text = format!("{value:.4}");
    let text = text.trim_end_matches('0').trim_end_matches('.');
    if text == "-0" { "0" } else { text }.to_owned()
}
