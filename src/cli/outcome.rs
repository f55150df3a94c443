//! How a command ends.

use std::process::ExitCode;

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

impl From<Outcome> for ExitCode {
    fn from(outcome: Outcome) -> Self {
        Self::from(match outcome {
            Outcome::Done => 0,
            Outcome::Findings => 1,
            Outcome::Refused => 2,
        })
    }
}
