//! One file per output format, each writing to a [`std::io::Write`].
//!
//! | format | positions | points shared | normals | names | lengths |
//! |---|---|---|---|---|---|
//! | STL, binary | single | no, repeated | facets' | none | the set's unit |
//! | STL, text | single | no, repeated | facets' | a solid a panel | the set's unit |
//! | OBJ | double | by index | by index of their own | `o` panel, `g` patch | the set's unit |
//! | PLY, binary | double | by index | if asked for | comments, with ranges of faces | the set's unit |
//! | GLB (glTF 2.0) | single, one local origin | inside a panel and crease, else repeated | yes | a node a panel, patches as extras | metres, y up, by a node transform |
//! | VTU (VTK XML) | double | by index | yes, one a point | numbers a triangle, names as field data | the set's unit |
//!
//! A repeated point has bitwise equal coordinates wherever it is repeated, so
//! merging exact duplicates gives back the mesh. What rounding to single
//! precision moves a point by is returned, to be added to the proved
//! deviation; where it would exceed a tenth of the chord tolerance nothing is
//! written.
//!
//! Evidence (patch, u and v of every corner) goes into PLY, the form that
//! [`read_evidence`] reads back, into OBJ as texture coordinates, and into VTU as an
//! array.

mod error;
mod glb;
mod kind;
mod names;
mod normals;
mod obj;
mod overlay;
mod ply;
mod ply_reading;
mod rounding;
mod sink;
mod size;
mod stl;
mod stl_text;
mod vtu;

use std::io::Write;

pub use error::FormatError;
pub use kind::{Format, FormatNameError, Layout, LayoutNameError};
pub use overlay::{Overlay, Stroke};
pub use ply_reading::{EvidenceError, read_evidence};
pub use size::{Counts, about_bytes, bytes_of, predict};
pub use stl::StlStream;

use crate::mesh::{Mesh, Nodes, Part, Strips};
use crate::scalar::Tolerance;

/// How a mesh is to be written.
#[derive(Debug, Clone, Copy)]
pub struct WriteOptions<'a> {
    /// The chord tolerance the mesh was made for, in its unit: it decides how
    /// much rounding to single precision may move a point.
    pub chord: Tolerance,
    /// How triangles are stored; the format's own default where `None`.
    pub layout: Option<Layout>,
    /// The mesh's strips, if they are at hand; otherwise they are found when
    /// the layout needs them.
    pub strips: Option<&'a Strips>,
    /// Whether a PLY file gets vertex normals, which repeats points where
    /// normals differ. The other formats are not concerned.
    pub normals: bool,
    /// Whether STL is written as text, a named solid a panel. The other formats are
    /// not concerned.
    pub solids: bool,
    /// What a VTU file says of the surface. The other formats have no room for it
    /// and are not concerned.
    pub surface: SurfaceFigures<'a>,
    /// Lines and points that a GLB file has besides the mesh. The other formats
    /// have no room for them and are not concerned.
    pub overlays: &'a [Overlay],
}

impl WriteOptions<'_> {
    /// The format's own layout, for a mesh made to the given chord tolerance.
    #[must_use]
    pub fn new(chord: Tolerance) -> Self {
        Self {
            chord,
            layout: None,
            strips: None,
            normals: false,
            solids: false,
            surface: SurfaceFigures::default(),
            overlays: &[],
        }
    }
}

/// What is known of the surface under a mesh.
#[derive(Debug, Clone, Copy, Default)]
pub struct SurfaceFigures<'a> {
    /// Of every point.
    pub nodes: Option<&'a Nodes>,
    /// The proved deviation of every triangle.
    pub deviations: Option<&'a [f64]>,
}

/// What was written.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Written {
    /// Bytes in all.
    pub bytes: u64,
    /// Points as the format stores them, repeated ones counted each time.
    pub file_vertices: u64,
    /// The layout used.
    pub layout: Layout,
    /// Upper bound of the distance by which rounding moved any point, in the
    /// mesh's unit. Zero where doubles are kept.
    pub rounding: f64,
}

/// Writes a mesh. The writer may be unbuffered; it is not flushed.
///
/// # Errors
/// [`FormatError`] where the mesh has no triangles, the format does not have
/// the layout or no room for the evidence the mesh carries, single precision is too coarse, a count exceeds what the format
/// can hold (all these before the first byte), or the writer fails.
///
/// # Panics
/// Where figures of the surface are given that are fewer than the mesh's points or
/// triangles.
pub fn write(
    mesh: &Mesh,
    format: Format,
    options: &WriteOptions<'_>,
    out: &mut dyn Write,
) -> Result<Written, FormatError> {
    if mesh.triangles.is_empty() {
        return Err(FormatError::Empty);
    }
    let layout = format.layout(options.layout)?;
    if mesh.evidence.is_some() && !format.holds_evidence() {
        return Err(FormatError::Evidence(format));
    }
    match format {
        Format::Stl if options.solids => stl_text::write(mesh, options.chord, out),
        Format::Stl => stl::write(mesh, options.chord, out),
        Format::Obj => obj::write(mesh, layout, out),
        Format::Ply => ply::write(mesh, layout, options.normals, out),
        Format::Glb => glb::write(mesh, layout, options, out),
        Format::Vtu => vtu::write(mesh, options.surface, out),
    }
}

/// Every panel that has triangles: its name, and its parts with their numbers,
/// in the mesh's order.
fn panels(mesh: &Mesh) -> Vec<(&str, Vec<(usize, &Part)>)> {
    let mut panels: Vec<_> = mesh
        .panels
        .iter()
        .map(|name| (name.as_str(), Vec::new()))
        .collect();
    for (number, part) in mesh.parts.iter().enumerate() {
        if !part.triangles.is_empty() {
            panels[part.panel].1.push((number, part));
        }
    }
    panels.retain(|(_, parts)| !parts.is_empty());
    panels
}
