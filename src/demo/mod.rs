//! The sets we ship, made by code.

mod front_quarter;
mod guide;
mod panels;
mod patch;
mod profile;
mod sheet;
mod text;

use std::io::{self, Write};

pub use panels::write_panels;

/// A shipped set.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Demo {
    /// The left front quarter of an invented vehicle, in mm.
    FrontQuarter,
}

impl Demo {
    /// All shipped sets.
    pub const ALL: [Self; 1] = [Self::FrontQuarter];

    /// The name by which the command asks for it.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::FrontQuarter => "front-quarter",
        }
    }

    /// Writes the set as a RON file with comments, the same bytes every time.
    ///
    /// # Errors
    /// Whatever the writer reports.
    pub fn write(self, out: &mut impl Write) -> io::Result<()> {
        match self {
            Self::FrontQuarter => text::write(&front_quarter::set(), out),
        }
    }
}
