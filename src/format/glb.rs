//! GLB: glTF 2.0 in one binary file (ISO/IEC 12113).
//!
//! A set's z is up and its unit may be anything; glTF has metres and y up. The
//! root node, named after the set, carries a matrix that scales to metres and
//! takes (x, y, z) to (x, z, -y); under it stands one node a panel, named after
//! it, with one mesh of one primitive. Coordinates in the file are the set's
//! own, in single precision. Where that would eat the tolerance they are taken
//! relative to one origin for the whole file, which is exact in single
//! precision and stands as the translation of a node between root and panels.
//!
//! A point is stored once for every panel and normal that use it, always with
//! the same bytes. glTF forbids the restart index, so the strips of a panel
//! are joined by repeating the last index and the first (and that once more
//! where the next strip would begin at an odd place and be turned over): two
//! or three indices of four bytes, where a primitive of its own would take
//! well over a hundred bytes of JSON.
//!
//! Each mesh has `extras.patches`: name, first and count of every patch among
//! the panel's indices (its points, where there are no indices); joining
//! indices lie between them.

mod document;
mod overlays;
mod panel;

use std::io::Write;

use document::Document;
use panel::Streams;

use super::normals::Normals;
use super::rounding::{Rounding, single};
use super::sink::Sink;
use super::{Format, FormatError, Layout, WriteOptions, Written};
use crate::mesh::{Mesh, Strips};

/// Bytes of a position or a normal.
const TRIPLE: u64 = 12;
/// Bytes of an index.
const INDEX: u64 = 4;

pub(super) fn write(
    mesh: &Mesh,
    layout: Layout,
    options: &WriteOptions<'_>,
    out: &mut dyn Write,
) -> Result<Written, FormatError> {
    let rounding = Rounding::local(mesh, options.chord).check(mesh, Format::Glb, options.chord)?;
    let mut found = None;
    let strips = match (layout, options.strips) {
        (Layout::Strips, None) => Some(&*found.insert(Strips::of(mesh))),
        (Layout::Strips, given) => given,
        _ => None,
    };
    let streams = Streams::of(mesh, layout, strips);
    if streams.panels.is_empty() {
        return Err(FormatError::Empty);
    }
    let vertices = streams.vertices.len() as u64;
    let meshed = 2 * TRIPLE * vertices + INDEX * streams.indices.len() as u64;
    let extra = overlays::points(options.overlays).count() as u64;
    let binary = meshed + TRIPLE * extra;
    let json = Document::of(
        mesh,
        layout,
        &streams,
        &rounding,
        [meshed, binary],
        options.overlays,
    )
    .padded();
    let total = 12 + 8 + json.len() as u64 + 8 + binary;
    let too_large = |_| FormatError::TooLarge {
        format: Format::Glb,
        what: "bytes",
        count: total,
        limit: u32::MAX.into(),
    };
    let word = |n: u64| u32::try_from(n).map_err(too_large);
    let mut sink = Sink::new(out);
    let heads = [(word(total)?, word(json.len() as u64)?), (word(binary)?, 2)];
    sink.put(b"glTF")?;
    sink.put(&heads[1].1.to_le_bytes())?;
    sink.put(&heads[0].0.to_le_bytes())?;
    sink.put(&heads[0].1.to_le_bytes())?;
    sink.put(b"JSON")?;
    sink.put(&json)?;
    sink.put(&heads[1].0.to_le_bytes())?;
    sink.put(b"BIN\0")?;
    for &v in &streams.vertices {
        let point = mesh.vertices[v as usize].point;
        sink.singles(rounding.singles(&mesh.points[point as usize]))?;
    }
    let normals = Normals::of(mesh);
    for &v in &streams.vertices {
        let normal = normals.get(v);
        sink.singles([single(normal.x), single(normal.y), single(normal.z)])?;
    }
    for index in &streams.indices {
        sink.put(&index.to_le_bytes())?;
    }
    for point in overlays::points(options.overlays) {
        sink.singles(rounding.singles(point))?;
    }
    Ok(Written {
        bytes: sink.finish()?,
        file_vertices: vertices,
        layout,
        rounding: rounding.largest,
    })
}
