//! Binary STL: 84 + 50 T bytes. Eighty bytes of header, the number of
//! triangles, then for each its facet normal and three corners as singles and
//! two bytes that are zero. No names, no shared points.

use std::io::Write;

use super::normals::{facet, unit};
use super::rounding::{Rounding, single};
use super::sink::Sink;
use super::{Format, FormatError, Layout, Written};
use crate::mesh::Mesh;
use crate::scalar::{LengthUnit, Tolerance, Vector};

/// Bytes of a file with so many triangles.
pub(super) fn bytes(triangles: u64) -> u64 {
    84 + 50 * triangles
}

/// Where the number of triangles stands.
const COUNT_AT: u64 = 80;

pub(super) fn write(
    mesh: &Mesh,
    chord: Tolerance,
    out: &mut dyn Write,
) -> Result<Written, FormatError> {
    // Nothing is written of what cannot be written as a whole.
    Rounding::plain(mesh).check(mesh, Format::Stl, chord)?;
    let count = count(mesh.triangles.len() as u64)?;
    let mut stream = StlStream::new(out, mesh.unit, chord, count)?;
    stream.add(mesh)?;
    Ok(stream.finish()?.0)
}

fn count(triangles: u64) -> Result<u32, FormatError> {
    u32::try_from(triangles).map_err(|_| FormatError::TooLarge {
        format: Format::Stl,
        what: "triangles",
        count: triangles,
        limit: Format::Stl.most_triangles(),
    })
}

/// A file that is written mesh by mesh; its number of triangles may be put into it
/// at the end.
pub struct StlStream<'a> {
    sink: Sink<'a>,
    chord: Tolerance,
    triangles: u64,
    rounding: f64,
}

impl<'a> StlStream<'a> {
    /// Begins a file of meshes in this unit, made for this chord tolerance. `count`
    /// is its number of triangles, or anything where that is not known yet.
    ///
    /// # Errors
    /// [`FormatError::Io`] where the writer fails.
    pub fn new(
        out: &'a mut dyn Write,
        unit: LengthUnit,
        chord: Tolerance,
        count: u32,
    ) -> Result<Self, FormatError> {
        let mut sink = Sink::new(out);
        let mut header = [b' '; 80];
        // It must not begin with `solid`, by which readers know the text form.
        let text = format!(
            "chordwise {} binary STL, unit {unit}",
            env!("CARGO_PKG_VERSION")
        );
        for (place, byte) in header.iter_mut().zip(text.bytes()) {
            *place = byte;
        }
        sink.put(&header)?;
        sink.put(&count.to_le_bytes())?;
        Ok(Self {
            sink,
            chord,
            triangles: 0,
            rounding: 0.0,
        })
    }

    /// Appends the triangles of a mesh.
    ///
    /// # Errors
    /// [`FormatError`] where single precision is too coarse, triangles are more than
    /// the format counts, or the writer fails.
    pub fn add(&mut self, mesh: &Mesh) -> Result<(), FormatError> {
        let rounding = Rounding::plain(mesh).check(mesh, Format::Stl, self.chord)?;
        self.rounding = self.rounding.max(rounding.largest);
        self.triangles += mesh.triangles.len() as u64;
        count(self.triangles)?;
        for t in 0..mesh.triangles.len() {
            let normal = unit(facet(mesh, t)).unwrap_or_else(Vector::zeros);
            let normal = [single(normal.x), single(normal.y), single(normal.z)];
            self.sink.singles(normal)?;
            for corner in mesh.triangle_corners(t) {
                self.sink.singles(rounding.singles(&corner))?;
            }
            self.sink.put(&[0, 0])?;
        }
        Ok(())
    }

    /// What was written; and the bytes of the number of triangles, with their place
    /// in the file.
    ///
    /// # Errors
    /// [`FormatError`] where the writer fails.
    pub fn finish(self) -> Result<(Written, (u64, [u8; 4])), FormatError> {
        let count = count(self.triangles)?;
        let written = Written {
            bytes: self.sink.finish()?,
            file_vertices: 3 * self.triangles,
            layout: Layout::Triangles,
            rounding: self.rounding,
        };
        Ok((written, (COUNT_AT, count.to_le_bytes())))
    }
}

impl std::fmt::Debug for StlStream<'_> {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.debug_struct("StlStream")
            .field("triangles", &self.triangles)
            .field("rounding", &self.rounding)
            .finish_non_exhaustive()
    }
}
