//! `chordwise completions`: what a shell needs to complete our arguments.

use std::path::PathBuf;

use clap::{Args, CommandFactory};
use clap_complete::Shell;

use super::output::Output;
use super::{Arguments, Outcome};

const EXAMPLES: &str = "\
Examples:
  chordwise completions bash > ~/.local/share/bash-completion/completions/chordwise
  chordwise completions zsh -o _chordwise";

/// Write a completion script for a shell
#[derive(Debug, Args)]
#[command(before_help = EXAMPLES)]
pub(super) struct CompletionsArguments {
    /// The shell
    shell: Shell,

    /// The file to write; `-` is standard output
    #[arg(short, long, value_name = "FILE", default_value = "-")]
    output: PathBuf,
}

impl CompletionsArguments {
    /// Writes the script.
    pub(super) fn run(&self) -> Outcome {
        let mut script = Vec::new();
        clap_complete::generate(
            self.shell,
            &mut Arguments::command(),
            "chordwise",
            &mut script,
        );
        Output::open(&self.output, &[])
            .and_then(|output| output.write(|out| Ok(out.write_all(&script)?)))
            .map_or_else(Outcome::refuse, |_| Outcome::Done)
    }
}
