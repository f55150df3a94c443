//! PLY, binary, little endian, doubles.
//!
//! Points are shared by index. The faces of a patch follow each other; names
//! and ranges are comments in the header, `comment panel 0 bonnet` and
//! `comment patch 0 120 64 bonnet/4` (the panel's number, the first face, how
//! many faces, the name), control characters and `%` percent-encoded. Numbers
//! on the faces themselves would be neater, but not every reader takes faces
//! with more than their corners. With normals a point is repeated where they
//! differ.
//!
//! A mesh with evidence has seven more properties a face: `int patch`, the
//! number of the patch comment it belongs to, counted from 0, and the doubles
//! `u0 v0 u1 v1 u2 v2`, the patch's own parameters of its corners.

use std::io::Write;

use super::names::Encoded;
use super::normals::Normals;
use super::sink::Sink;
use super::{Counts, Format, FormatError, Layout, Written};
use crate::mesh::Mesh;
use crate::scalar::Point;

/// The parameters of a face's corners, as its properties are called.
pub(super) const EVIDENCE: [&str; 6] = ["u0", "v0", "u1", "v1", "u2", "v2"];

/// And, where triangles may lie on several patches, those of the corners.
pub(super) const CORNERS: [&str; 3] = ["patch0", "patch1", "patch2"];

/// Bytes of a file with these counts.
pub(super) fn bytes(counts: &Counts<'_>, layout: Layout, with_normals: bool) -> u64 {
    let triangles = counts.triangles();
    let vertices = match (layout, with_normals) {
        (Layout::Triangles, _) => 3 * triangles,
        (_, true) => counts.vertices,
        (_, false) => counts.points,
    };
    let mut nowhere = std::io::sink();
    let mut sink = Sink::new(&mut nowhere);
    let shape = [vertices, triangles];
    let head = header(counts.outline, shape, with_normals, &mut sink).and_then(|()| sink.finish());
    let head = head.expect("writing to nowhere cannot fail");
    let point = if with_normals { 48 } else { 24 };
    let face = match (&counts.outline.evidence, &counts.outline.corner_parts) {
        (Some(_), Some(_)) => 13 + 52 + 12,
        (Some(_), None) => 13 + 52,
        (None, _) => 13,
    };
    head + point * vertices + face * triangles
}

pub(super) fn write(
    mesh: &Mesh,
    layout: Layout,
    with_normals: bool,
    out: &mut dyn Write,
) -> Result<Written, FormatError> {
    let repeated = layout == Layout::Triangles;
    let vertices = match (repeated, with_normals) {
        (true, _) => 3 * mesh.triangles.len(),
        (false, true) => mesh.vertices.len(),
        (false, false) => mesh.points.len(),
    };
    // Indices are signed, as most readers expect.
    for (what, count) in [("vertices", vertices), ("triangles", mesh.triangles.len())] {
        if i32::try_from(count).is_err() {
            return Err(FormatError::TooLarge {
                format: Format::Ply,
                what,
                count: count as u64,
                limit: i32::MAX.unsigned_abs().into(),
            });
        }
    }
    let mut sink = Sink::new(out);
    let shape = [vertices as u64, mesh.triangles.len() as u64];
    header(mesh, shape, with_normals, &mut sink)?;
    let normals = with_normals.then(|| Normals::of(mesh));
    let vertex = |sink: &mut Sink<'_>, point: Point, v: u32| {
        sink.doubles(point.coords.into())?;
        match &normals {
            Some(normals) => sink.doubles(normals.get(v).into()),
            None => Ok(()),
        }
    };
    if repeated {
        for &v in mesh
            .parts
            .iter()
            .flat_map(|part| mesh.triangles[part.triangles.clone()].as_flattened())
        {
            let point = mesh.points[mesh.vertices[v as usize].point as usize];
            vertex(&mut sink, point, v)?;
        }
    } else if with_normals {
        for (v, of) in (0_u32..).zip(&mesh.vertices) {
            vertex(&mut sink, mesh.points[of.point as usize], v)?;
        }
    } else {
        for &point in &mesh.points {
            vertex(&mut sink, point, 0)?;
        }
    }
    let mut corner = 0_u32;
    let numbered = (0_i32..).zip(&mesh.parts);
    for (number, t) in numbered.flat_map(|(k, part)| part.triangles.clone().map(move |t| (k, t))) {
        let indices = match (repeated, with_normals) {
            (true, _) => {
                corner += 3;
                [corner - 3, corner - 2, corner - 1]
            }
            (false, true) => mesh.triangles[t],
            (false, false) => mesh.triangle_points(t),
        };
        let mut face = [3; 13];
        for (four, index) in face[1..].chunks_exact_mut(4).zip(indices) {
            four.copy_from_slice(&index.to_le_bytes());
        }
        sink.put(&face)?;
        if let Some(evidence) = &mesh.evidence {
            sink.put(&number.to_le_bytes())?;
            let [[a, b], [c, d], [e, f]] = evidence[t];
            sink.doubles([a, b, c])?;
            sink.doubles([d, e, f])?;
            if let Some(parts) = &mesh.corner_parts {
                for part in parts[t] {
                    sink.put(&part.to_le_bytes())?;
                }
            }
        }
    }
    Ok(Written {
        bytes: sink.finish()?,
        file_vertices: vertices as u64,
        layout,
        rounding: 0.0,
    })
}

fn header(
    mesh: &Mesh,
    [vertices, triangles]: [u64; 2],
    with_normals: bool,
    sink: &mut Sink<'_>,
) -> std::io::Result<()> {
    writeln!(sink, "ply\nformat binary_little_endian 1.0")?;
    writeln!(sink, "comment chordwise {}", env!("CARGO_PKG_VERSION"))?;
    writeln!(sink, "comment set {}", Encoded::line(&mesh.name))?;
    writeln!(sink, "comment unit {}", mesh.unit)?;
    for (number, name) in mesh.panels.iter().enumerate() {
        writeln!(sink, "comment panel {number} {}", Encoded::line(name))?;
    }
    let mut first = 0;
    for part in &mesh.parts {
        let (panel, count) = (part.panel, part.triangles.len());
        let name = Encoded::line(&part.name);
        writeln!(sink, "comment patch {panel} {first} {count} {name}")?;
        first += count;
    }
    writeln!(sink, "element vertex {vertices}")?;
    let normals: &[&str] = if with_normals {
        &["nx", "ny", "nz"]
    } else {
        &[]
    };
    for name in ["x", "y", "z"].iter().chain(normals) {
        writeln!(sink, "property double {name}")?;
    }
    writeln!(sink, "element face {triangles}")?;
    writeln!(sink, "property list uchar int vertex_indices")?;
    if mesh.evidence.is_some() {
        writeln!(sink, "property int patch")?;
        for name in EVIDENCE {
            writeln!(sink, "property double {name}")?;
        }
        for name in CORNERS.iter().filter(|_| mesh.corner_parts.is_some()) {
            writeln!(sink, "property int {name}")?;
        }
    }
    writeln!(sink, "end_header")
}
