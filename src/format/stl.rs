//! Binary STL: 84 + 50 T bytes. Eighty bytes of header, the number of
//! triangles, then for each its facet normal and three corners as singles and
//! two bytes that are zero. No names, no shared points.

use std::io::Write;

use super::normals::{facet, unit};
use super::rounding::{Rounding, single};
use super::sink::Sink;
use super::{Format, FormatError, Layout, Written};
use crate::mesh::Mesh;
use crate::scalar::{Tolerance, Vector};

/// Bytes of a file with so many triangles.
pub(super) fn bytes(triangles: u64) -> u64 {
    84 + 50 * triangles
}

pub(super) fn write(
    mesh: &Mesh,
    chord: Tolerance,
    out: &mut dyn Write,
) -> Result<Written, FormatError> {
    let rounding = Rounding::plain(mesh).check(mesh, Format::Stl, chord)?;
    let count = u32::try_from(mesh.triangles.len()).map_err(|_| FormatError::TooLarge {
        format: Format::Stl,
        what: "triangles",
        count: mesh.triangles.len() as u64,
        limit: u32::MAX.into(),
    })?;
    let mut sink = Sink::new(out);
    let mut header = [b' '; 80];
    // It must not begin with `solid`, by which readers know the text form.
    let text = format!(
        "chordwise {} binary STL, unit {}",
        env!("CARGO_PKG_VERSION"),
        mesh.unit
    );
    for (place, byte) in header.iter_mut().zip(text.bytes()) {
        *place = byte;
    }
    sink.put(&header)?;
    sink.put(&count.to_le_bytes())?;
    for t in 0..mesh.triangles.len() {
        let normal = unit(facet(mesh, t)).unwrap_or_else(Vector::zeros);
        sink.singles([single(normal.x), single(normal.y), single(normal.z)])?;
        for corner in mesh.triangle_corners(t) {
            sink.singles(rounding.singles(&corner))?;
        }
        sink.put(&[0, 0])?;
    }
    Ok(Written {
        bytes: sink.finish()?,
        file_vertices: 3 * u64::from(count),
        layout: Layout::Triangles,
        rounding: rounding.largest,
    })
}
