//! `chordwise demo`: writes the sets we ship, and sets of any size.

use std::io::{self, BufWriter, Write};
use std::path::PathBuf;

use clap::{Args, ValueEnum};

use super::Outcome;
use super::output::Output;
use crate::demo::{Demo, write_panels};

const EXAMPLES: &str = "\
Examples:
  chordwise demo -o front_quarter.ron             the front quarter of a vehicle
  chordwise demo --panels 100000 -o large.ron     100,000 bicubic patches
  chordwise demo -o - | less                      to standard output";

/// Write a patch set made by code: a shipped one, or one of any size
#[derive(Debug, Args)]
#[command(before_help = EXAMPLES)]
pub(super) struct DemoArguments {
    /// Which set
    #[arg(value_enum, default_value_t = Name::FrontQuarter, conflicts_with = "panels")]
    name: Name,

    /// Write N smooth bicubic patches instead, 64 to a panel
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u32).range(1..=100_000_000))]
    panels: Option<u32>,

    /// The file to write; `-` is standard output
    #[arg(short, long, value_name = "FILE")]
    output: PathBuf,
}

/// The shipped sets by name.
#[derive(Debug, Clone, Copy, ValueEnum)]
enum Name {
    /// The left front quarter of an invented vehicle
    FrontQuarter,
}

impl From<Name> for Demo {
    fn from(name: Name) -> Self {
        match name {
            Name::FrontQuarter => Self::FrontQuarter,
        }
    }
}

impl DemoArguments {
    /// Writes the set.
    pub(super) fn run(&self) -> Outcome {
        Output::open(&self.output, &[])
            .and_then(|output| output.write(|out| Ok(self.write(out)?)))
            .map_or_else(Outcome::refuse, |_| Outcome::Done)
    }

    fn write(&self, out: &mut dyn Write) -> io::Result<()> {
        let mut out = BufWriter::with_capacity(1 << 18, out);
        match self.panels {
            Some(count) => write_panels(count, &mut out)?,
            None => Demo::from(self.name).write(&mut out)?,
        }
        out.flush()
    }
}
