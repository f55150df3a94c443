//! The sets we ship, made by code, so that no file is a mystery, and sets of any
//! size for trying the tool at scale.
//!
//! [`Demo::write`] makes a shipped set byte for byte; [`write_panels`] streams a
//! quilted field of bicubic panels. Surfaces are built by construction, not
//! fitted: a plane profile carried along guides, with every joint tangent to
//! round-off, and coordinates use only sums, products, quotients and square
//! roots, which are the same on every machine.

mod family;
mod front_quarter;
mod guide;
mod panels;
mod patch;
mod profile;
mod sheet;
mod text;

use std::io::{self, Write};

pub use family::{Member, family};
pub use panels::write_panels;

/// A shipped set.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Demo {
    /// The left front quarter of an invented vehicle, in mm.
    FrontQuarter,
}

impl Demo {
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
