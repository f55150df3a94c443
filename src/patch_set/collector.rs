//! Collecting the faults of a set: every check records its fault and goes on.

use super::diagnostic::{Diagnostic, Finding};
use super::fault::SetFault;
use crate::surface::{MAX_COORDINATE, Place, Step};

/// Faults met so far.
#[derive(Debug, Default)]
pub(super) struct Collector {
    pub(super) list: Vec<Diagnostic>,
}

impl Collector {
    pub(super) fn fault(&mut self, place: String, path: Vec<Step>, fault: SetFault) {
        self.hinted(place, path, fault, None);
    }

    pub(super) fn hinted(
        &mut self,
        place: String,
        path: Vec<Step>,
        fault: SetFault,
        hint: Option<String>,
    ) {
        self.list.push(Diagnostic {
            finding: Finding::Fault(fault),
            place,
            hint,
            position: None,
            path: Place(path),
        });
    }

    pub(super) fn number(
        &mut self,
        value: f64,
        name: &'static str,
        place: impl Fn() -> (String, Vec<Step>),
    ) -> bool {
        let good = value.abs() <= MAX_COORDINATE;
        if !good {
            let (place, path) = place();
            self.fault(place, path, SetFault::Number { name, value });
        }
        good
    }
}
