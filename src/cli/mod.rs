//! The command line: arguments as typed, options as meant, one file a command.

use std::ffi::OsString;
use std::process::ExitCode;

use clap::{Parser, Subcommand};

mod audit;
mod budget;
mod check;
mod compare;
mod completions;
mod demo;
mod disk;
mod draw;
mod figures;
mod interrupt;
mod joining;
mod man;
mod mend;
mod meshing;
mod message;
mod outcome;
mod output;
mod panels;
mod progress;
mod report;
mod seams;
mod source;
mod stream;
mod style;
mod tessellate;

pub use outcome::Outcome;

const EXAMPLES: &str = "\
Examples:
  chordwise demo -o front.ron                      a set to try things on
  chordwise check front.ron                        what is wrong with it
  chordwise tessellate front.ron -o front.glb      a proved mesh
  chordwise seams front.ron                        how its patches meet
  chordwise compare old.ron new.ron                what changed
  chordwise mend front.ron -o mended.ron           seams as demanded
  chordwise draw front.ron -o front.png            a picture of it
  chordwise report front.ron -o front.html         a page to sign off";

const ENDINGS: &str = "\
Every command has examples of its own: chordwise tessellate --help

Exit code 0: done, and all as demanded. 1: done, with findings. 2: bad usage,
unreadable, refused or unprovable.";

/// The arguments as typed.
#[derive(Debug, Parser)]
#[command(
    name = "chordwise",
    version = env!("CHORDWISE_VERSION"),
    about = "Certified meshes and seam reports from parametric patch sets",
    before_help = EXAMPLES,
    after_help = ENDINGS,
    subcommand_required = true,
    arg_required_else_help = true
)]
pub struct Arguments {
    /// What to do.
    #[command(subcommand)]
    command: Command,
}

/// The commands.
#[derive(Debug, Subcommand)]
enum Command {
    Tessellate(tessellate::TessellateArguments),
    Audit(audit::AuditArguments),
    Seams(seams::SeamsArguments),
    Draw(draw::DrawArguments),
    Report(report::ReportArguments),
    Check(check::CheckArguments),
    Compare(compare::CompareArguments),
    Mend(mend::MendArguments),
    Demo(demo::DemoArguments),
    Completions(completions::CompletionsArguments),
    Man(man::ManArguments),
}

/// Runs the program on the given arguments, the program's name first.
pub fn run(arguments: impl IntoIterator<Item = OsString>) -> ExitCode {
    match Arguments::try_parse_from(arguments) {
        Ok(arguments) => match arguments.command {
            Command::Audit(arguments) => arguments.run(),
            Command::Check(arguments) => arguments.run(),
            Command::Compare(arguments) => arguments.run(),
            Command::Completions(arguments) => arguments.run(),
            Command::Demo(arguments) => arguments.run(),
            Command::Draw(arguments) => arguments.run(),
            Command::Man(arguments) => arguments.run(),
            Command::Mend(arguments) => arguments.run(),
            Command::Report(arguments) => arguments.run(),
            Command::Seams(arguments) => arguments.run(),
            Command::Tessellate(arguments) => arguments.run(),
        }
        .into(),
        Err(error) => {
            let code = if error.use_stderr() {
                Outcome::Refused
            } else {
                Outcome::Done
            };
            // Nothing is left to be done where even the message cannot be written.
            let _ = error.print();
            code.into()
        }
    }
}

/// Has everything after it done by so many threads; by all cores without a
/// number.
fn work_with(jobs: Option<u16>) {
    if let Some(jobs) = jobs {
        // Fails only if the pool exists already, which then has its size.
        let _ = rayon::ThreadPoolBuilder::new()
            .num_threads(jobs.into())
            .build_global();
    }
}
