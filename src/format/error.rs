//! Why a mesh cannot be written.

use std::io;

use thiserror::Error;

use super::{Format, Layout};
use crate::scalar::LengthUnit;

/// A mesh that cannot be written as asked.
#[derive(Debug, Error)]
pub enum FormatError {
    /// There is nothing to write.
    #[error("mesh: no triangles; there is nothing to write")]
    Empty,
    /// The format does not have the layout.
    #[error("{format}: layout {layout} cannot be stored; choose {}, or write glb", choices(*format))]
    Layout {
        /// The format asked for.
        format: Format,
        /// The layout asked for.
        layout: Layout,
    },
    /// The format has no room for the parameters of every corner.
    #[error(
        "{0}: evidence (patch, u and v of every corner) cannot be stored; write ply, which keeps it whole, or obj"
    )]
    Evidence(Format),
    /// Single precision is too coarse for the tolerance at these coordinates.
    #[error(
        "{format}: rounding to single precision moves a point by up to {rounding:.3e} {unit}; it must stay below a tenth of the chord tolerance {chord} {unit}: write ply or obj, which keep doubles{}",
        alternative(*format)
    )]
    Rounding {
        /// The format asked for.
        format: Format,
        /// The largest displacement, or infinity.
        rounding: f64,
        /// The chord tolerance.
        chord: f64,
        /// The unit of both.
        unit: LengthUnit,
    },
    /// A count or size does not fit the format.
    #[error(
        "{format}: {count} {what}; the format holds at most {limit}: write fewer panels a file, or another format"
    )]
    TooLarge {
        /// The format asked for.
        format: Format,
        /// What there are too many of.
        what: &'static str,
        /// How many there are.
        count: u64,
        /// How many the format can hold.
        limit: u64,
    },
    /// The writer failed.
    #[error(transparent)]
    Io(#[from] io::Error),
}

fn choices(format: Format) -> String {
    let names: Vec<&str> = format
        .layouts()
        .iter()
        .map(|layout| layout.name())
        .collect();
    names.join(" or ")
}

fn alternative(format: Format) -> &'static str {
    match format {
        Format::Stl => ", or glb, which has a local origin",
        _ => "",
    }
}
