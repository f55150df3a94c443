//! What is said to the user: messages on standard error, reports on standard
//! output.

use std::fmt::Display;
use std::io::{self, ErrorKind, Write};

use super::output::OutputError;

/// Says something on standard error, in colour on a terminal. Where nobody can
/// hear it the exit code must do.
pub(super) fn say(message: impl Display) {
    let _ = writeln!(anstream::stderr(), "{message}");
}

/// Writes a report to standard output, or to standard error where standard
/// output has the mesh. A reader who has gone misses it, which is no fault.
///
/// # Errors
/// [`OutputError`] where it gets lost in any other way.
pub(super) fn report(text: &str, beside: bool) -> Result<(), OutputError> {
    let result = if beside {
        io::stderr().write_all(text.as_bytes())
    } else {
        let mut out = io::stdout().lock();
        out.write_all(text.as_bytes()).and_then(|()| out.flush())
    };
    match result {
        Err(error) if error.kind() != ErrorKind::BrokenPipe => Err(OutputError::System {
            place: if beside {
                "standard error"
            } else {
                "standard output"
            }
            .to_owned(),
            action: "write the report",
            source: error,
        }),
        _ => Ok(()),
    }
}
