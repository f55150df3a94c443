//! How a command ends.

use std::fmt::Display;
use std::process::ExitCode;

use super::message::say;

/// The three endings, which are the exit codes 0, 1 and 2.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Outcome {
    /// 0: done, and all as demanded (warnings included).
    Done,
    /// 1: done, with findings.
    Findings,
    /// 2: bad usage, unreadable, refused or unprovable.
    Refused,
}

impl Outcome {
    /// Says why the program does not do what it was asked to.
    #[allow(
        clippy::needless_pass_by_value,
        reason = "so that it can stand where a function of an error is wanted"
    )]
    pub(super) fn refuse(why: impl Display) -> Self {
        say(format_args!("error: {why}"));
        Self::Refused
    }
}

impl From<Outcome> for ExitCode {
    fn from(outcome: Outcome) -> Self {
        Self::from(match outcome {
            Outcome::Done => 0,
            Outcome::Findings => 1,
            Outcome::Refused => 2,
        })
    }
}
