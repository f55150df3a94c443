//! The `chordwise` program: everything it does is in [`chordwise::cli`].

use std::process::ExitCode;

fn main() -> ExitCode {
    chordwise::cli::run(std::env::args_os())
}
