//! `chordwise seams`: how the patches of a set meet.

use std::path::PathBuf;

use clap::{Args, ValueEnum};

use super::Outcome;
use super::joining::close_gaps;
use super::output::Output;
use super::panels::panels;
use super::progress::Progress;
use super::source;
use crate::continuity::Survey;
use crate::report::SeamReport;
use crate::scalar::Length;
use crate::topology::{Orientation, Topology};

const EXAMPLES: &str = "\
Examples:
  chordwise seams front.ron
  chordwise seams front.ron --panel bonnet --panel wing
  chordwise seams front.ron --format json -o seams.json
  chordwise seams front.ron --format csv -o seams.csv

Exit code 0: every seam is as demanded. 1: there are findings. 2: the set
cannot be used.";

/// How a seam report is printed.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq, ValueEnum)]
enum SeamStyle {
    /// For people
    #[default]
    Text,
    /// For programs: everything
    Json,
    /// For tables: one line a seam
    Csv,
}

/// List every seam with its gap, angle, demand and verdict, worst first
#[derive(Debug, Args)]
#[command(before_help = EXAMPLES)]
pub(super) struct SeamsArguments {
    /// The patch set; `-` is standard input
    #[arg(value_name = "SET.ron")]
    set: PathBuf,

    /// How the report is printed
    #[arg(long, value_enum, default_value_t)]
    format: SeamStyle,

    /// Only seams and loops in which this panel takes part; may be repeated
    #[arg(long = "panel", value_name = "NAME")]
    panels: Vec<String>,

    /// Turn patches over so that each part faces one way, closed parts outwards
    #[arg(long)]
    orient: bool,

    /// Judge the mesh with gaps up to this closed, in the set's unit or with m,
    /// cm, mm or in behind it
    #[arg(long, value_name = "LENGTH", allow_negative_numbers = true)]
    close_gaps: Option<Length>,

    /// The file to write; `-` is standard output
    #[arg(short, long, value_name = "FILE", default_value = "-")]
    output: PathBuf,

    /// Threads to work with; the result is the same for any number
    /// [default: all cores]
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u16).range(1..))]
    jobs: Option<u16>,
}

impl SeamsArguments {
    /// Reads the set, examines its seams and writes the report.
    pub(super) fn run(&self) -> Outcome {
        let output = match Output::open(&self.output, &[&self.set]) {
            Ok(output) => output,
            Err(error) => return Outcome::refuse(error),
        };
        super::work_with(self.jobs);
        let progress = Progress::new();
        progress.stage("reading");
        let mut reading = match source::read(&self.set) {
            Ok(reading) => reading,
            Err(faults) => {
                drop(progress);
                source::show_faults(&faults);
                return Outcome::Refused;
            }
        };
        drop(progress);
        source::show_warnings(&reading);
        if let Err(error) = close_gaps(&mut reading.set, self.close_gaps) {
            return Outcome::refuse(error);
        }
        let panels = match panels(&reading.set, &self.panels) {
            Ok(panels) => panels,
            Err(error) => return Outcome::refuse(error),
        };
        let progress = Progress::new();
        progress.stage("pairing edges");
        let topology = match Topology::build(&reading.set) {
            Ok(topology) => topology,
            Err(error) => return Outcome::refuse(error),
        };
        let turned_over = if self.orient {
            Orientation::of(&reading.set, &topology).turned()
        } else {
            Vec::new()
        };
        reading.set.turn_over(&turned_over);
        let set = &reading.set;
        progress.stage("examining seams");
        let survey = Survey {
            turned_over,
            ..Survey::of(set, &topology)
        };
        drop(progress);
        let report = SeamReport::new(set, &survey, panels.as_deref());
        let text = match self.format {
            SeamStyle::Text => report.text(),
            SeamStyle::Csv => report.csv(),
            SeamStyle::Json => match serde_json::to_string_pretty(&report) {
                Ok(text) => text + "\n",
                Err(error) => return Outcome::refuse(error),
            },
        };
        match output.write(|out| Ok(out.write_all(text.as_bytes())?)) {
            Ok(_) if report.has_findings() => Outcome::Findings,
            Ok(_) => Outcome::Done,
            Err(error) => Outcome::refuse(error),
        }
    }
}
