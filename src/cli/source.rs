//! Where a command reads its set from, and how it shows what is wrong with it.

use std::io::Read;
use std::path::Path;

use super::message::say;
use crate::patch_set::{Diagnostic, Faults, PatchSet, Reading};
use crate::report::many;

/// How many diagnostics are shown in full; a script that goes wrong can make
/// one for every patch.
const SHOWN: usize = 50;

/// Reads a set from a file, or from standard input for `-`.
pub(super) fn read(path: &Path) -> Result<Reading, Faults> {
    if path.as_os_str() != "-" {
        return PatchSet::read(path);
    }
    let name = "standard input";
    let mut bytes = Vec::new();
    match std::io::stdin().lock().read_to_end(&mut bytes) {
        Ok(_) => PatchSet::from_bytes(bytes, name),
        Err(error) => Err(Faults::unreadable(name, &error)),
    }
}

/// The bytes of a set, from a file or from standard input for `-`.
pub(super) fn bytes(path: &Path) -> Result<Vec<u8>, Faults> {
    let mut bytes = Vec::new();
    let done = if path.as_os_str() == "-" {
        std::io::stdin().lock().read_to_end(&mut bytes).map(|_| ())
    } else {
        std::fs::read(path).map(|found| bytes = found)
    };
    match done {
        Ok(()) => Ok(bytes),
        Err(error) => Err(Faults::unreadable(&name(path), &error)),
    }
}

/// What messages call a source.
pub(super) fn name(path: &Path) -> String {
    if path.as_os_str() == "-" {
        "standard input".to_owned()
    } else {
        path.display().to_string()
    }
}

/// Shows all faults on standard error, in colour on a terminal.
pub(super) fn show_faults(faults: &Faults) {
    if faults.list.iter().all(|fault| fault.position.is_none()) {
        // Of the file as a whole: there is no line to show.
        say(format_args!("error: {faults}"));
        return;
    }
    show(&faults.list, &faults.source_name);
    say(format_args!(
        "{}: {}; the set is not used",
        faults.source_name,
        many(faults.list.len(), "fault")
    ));
}

/// Shows all warnings on standard error, in colour on a terminal.
pub(super) fn show_warnings(reading: &Reading) {
    show(&reading.warnings, &reading.source_name);
}

fn show(list: &[Diagnostic], source_name: &str) {
    for diagnostic in list.iter().take(SHOWN) {
        say(format_args!("{}\n", diagnostic.render(source_name, true)));
    }
    if list.len() > SHOWN {
        say(format_args!("and {} more", list.len() - SHOWN));
    }
}
