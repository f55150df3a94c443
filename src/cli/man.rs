//! `chordwise man`: the manual page, one for the program and one a command.

use std::io::{self, Write};
use std::path::PathBuf;

use clap::{Args, Command, CommandFactory};
use clap_mangen::Man;
use clap_mangen::roff::{Roff, roman};

use super::output::Output;
use super::{Arguments, Outcome};

const EXAMPLES: &str = "\
Examples:
  chordwise man | man -l -                        read the page of the program
  chordwise man tessellate -o chordwise-tessellate.1";

/// Write a manual page
#[derive(Debug, Args)]
#[command(before_help = EXAMPLES)]
pub(super) struct ManArguments {
    /// The command to describe, in place of the whole program
    command: Option<String>,

    /// The file to write; `-` is standard output
    #[arg(short, long, value_name = "FILE", default_value = "-")]
    output: PathBuf,
}

impl ManArguments {
    /// Writes the page.
    pub(super) fn run(&self) -> Outcome {
        let mut program = Arguments::command();
        program.build();
        let subject = match &self.command {
            None => &program,
            Some(name) => match program.find_subcommand(name) {
                Some(command) => command,
                None => {
                    let names: Vec<_> = program
                        .get_subcommands()
                        .map(Command::get_name)
                        .filter(|name| *name != "help")
                        .collect();
                    return Outcome::refuse(format_args!(
                        "`{name}` is no command; the commands are {}",
                        names.join(", ")
                    ));
                }
            },
        };
        Output::open(&self.output, &[])
            .and_then(|output| output.write(|out| Ok(write(subject, out)?)))
            .map_or_else(Outcome::refuse, |_| Outcome::Done)
    }
}

/// The page of a command; its examples, which the generator does not know,
/// come last.
fn write(command: &Command, out: &mut dyn Write) -> io::Result<()> {
    Man::new(command.clone())
        .source(concat!("chordwise ", env!("CARGO_PKG_VERSION")))
        .render(out)?;
    if let Some(examples) = command.get_before_help() {
        let mut section = Roff::new();
        section.control("SH", ["EXAMPLES"]).control("nf", []);
        for line in examples.to_string().lines().skip(1) {
            section.text([roman(line.trim_start())]);
        }
        section.control("fi", []).to_writer(out)?;
    }
    Ok(())
}
