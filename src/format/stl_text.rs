//! STL as text, a solid a panel: `solid NAME`, its facets, `endsolid NAME`.
//!
//! Coordinates are the singles of the binary form in the shortest decimals that
//! read back as the same single, so that a reader of singles and one of doubles
//! find the same points. In names white space, control characters, `#` and `%` are
//! percent-encoded. A panel without triangles is left out.

use std::io::Write;

use super::names::Encoded;
use super::normals::{facet, unit};
use super::rounding::{Rounding, single};
use super::sink::Sink;
use super::{Counts, Format, FormatError, Layout, Written, panels};
use crate::mesh::Mesh;
use crate::scalar::{Tolerance, Vector};

pub(super) fn write(
    mesh: &Mesh,
    chord: Tolerance,
    out: &mut dyn Write,
) -> Result<Written, FormatError> {
    let rounding = Rounding::plain(mesh).check(mesh, Format::Stl, chord)?;
    let mut sink = Sink::new(out);
    let mut file_vertices = 0;
    for (name, parts) in panels(mesh) {
        let name = Encoded::word(name);
        writeln!(sink, "solid {name}")?;
        for t in parts.iter().flat_map(|(_, part)| part.triangles.clone()) {
            let normal = unit(facet(mesh, t)).unwrap_or_else(Vector::zeros);
            let [x, y, z] = [normal.x, normal.y, normal.z].map(single);
            writeln!(sink, "facet normal {x:?} {y:?} {z:?}\nouter loop")?;
            for corner in mesh.triangle_corners(t) {
                let [x, y, z] = rounding.singles(&corner);
                writeln!(sink, "vertex {x:?} {y:?} {z:?}")?;
            }
            writeln!(sink, "endloop\nendfacet")?;
            file_vertices += 3;
        }
        writeln!(sink, "endsolid {name}")?;
    }
    Ok(Written {
        bytes: sink.finish()?,
        file_vertices,
        layout: Layout::Triangles,
        rounding: rounding.largest,
    })
}

/// About how many bytes a file has: facets as long as those of a sample.
pub(super) fn bytes(counts: &Counts<'_>, sample: &Mesh) -> f64 {
    /// Facets that are looked at.
    const FACETS: usize = 500;
    let length = |t: usize| {
        let normal = unit(facet(sample, t)).unwrap_or_else(Vector::zeros);
        let triple = |v: Vector| {
            let [x, y, z] = [v.x, v.y, v.z].map(single);
            format!("{x:?} {y:?} {z:?}").len()
        };
        let corners = sample.triangle_corners(t).map(|p| triple(p.coords));
        let words = "facet normal \nouter loop\nvertex \nvertex \nvertex \nendloop\nendfacet\n";
        words.len() + triple(normal) + corners.iter().sum::<usize>()
    };
    let step = (sample.triangles.len() / FACETS).max(1);
    let lengths: Vec<usize> = (0..sample.triangles.len())
        .step_by(step)
        .map(length)
        .collect();
    let names: usize = counts
        .outline
        .panels
        .iter()
        .map(|name| 2 * name.len() + "solid \nendsolid \n".len())
        .sum();
    let float = |count: u64| {
        #[allow(
            clippy::cast_precision_loss,
            reason = "a prediction is good to a fifth"
        )]
        let value = count as f64;
        value
    };
    let mean = float(lengths.iter().sum::<usize>() as u64) / float((lengths.len() as u64).max(1));
    mean * float(counts.triangles()) + float(names as u64)
}
