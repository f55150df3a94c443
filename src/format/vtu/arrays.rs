//! Which arrays a VTU file has, and its header, which lists them.

use std::io::Write;

use super::super::names::Encoded;
use super::super::sink::Sink;
use super::super::{Counts, SurfaceFigures};
use crate::mesh::Mesh;
use crate::quality::Measure;

/// Where an array belongs.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Place {
    Field,
    Points,
    PointData,
    CellData,
    Cells,
}

/// What an array holds.
#[derive(Debug, Clone, Copy)]
pub(super) enum Content {
    Unit,
    PanelNames,
    PatchNames,
    Coordinates,
    Normals,
    NodePanels,
    NodeNumbers,
    NodePatches,
    NodePlaces,
    Curvatures,
    Panels,
    Patches,
    Elements,
    Deviations,
    Measure(Measure),
    Evidence,
    EvidencePatches,
    Connectivity,
    Offsets,
    Types,
}

/// An array: where, what, its name, type, components, and bytes.
pub(super) struct Array {
    place: Place,
    pub(super) content: Content,
    name: &'static str,
    kind: &'static str,
    components: u64,
    pub(super) bytes: u64,
}

/// The arrays of a file, in the order of its header.
pub(super) fn arrays(counts: &Counts<'_>, with: SurfaceFigures<'_>) -> Vec<Array> {
    use Content as C;
    use Place as P;
    let mesh = counts.outline;
    let (points, cells) = (counts.points, counts.triangles());
    let texts = [C::Unit, C::PanelNames, C::PatchNames].map(|c| text(mesh, c).len() as u64);
    let (int, real, byte) = (("Int32", 4), ("Float64", 8), ("UInt8", 1));
    let mut all = vec![
        (P::Field, C::Unit, "unit", byte, 1, texts[0]),
        (P::Field, C::PanelNames, "panel_names", byte, 1, texts[1]),
        (P::Field, C::PatchNames, "patch_names", byte, 1, texts[2]),
        (P::PointData, C::Normals, "normal", real, 3, points),
        (P::PointData, C::NodePanels, "panel", int, 1, points),
        (P::PointData, C::NodeNumbers, "node", int, 1, points),
    ];
    if with.nodes.is_some() {
        all.extend([
            (P::PointData, C::NodePatches, "patch", int, 1, points),
            (P::PointData, C::NodePlaces, "parameters", real, 2, points),
            (
                P::PointData,
                C::Curvatures,
                "principal_curvatures",
                real,
                2,
                points,
            ),
        ]);
    }
    all.extend([
        (P::CellData, C::Panels, "panel", int, 1, cells),
        (P::CellData, C::Patches, "patch", int, 1, cells),
        (P::CellData, C::Elements, "element", int, 1, cells),
    ]);
    if with.deviations.is_some() {
        let name = "proved_deviation";
        all.push((P::CellData, C::Deviations, name, real, 1, cells));
    }
    let measures = Measure::OF_TRIANGLES.iter();
    all.extend(measures.map(|m| (P::CellData, C::Measure(*m), m.name(), real, 1, cells)));
    if mesh.evidence.is_some() {
        let name = "corner_parameters";
        all.push((P::CellData, C::Evidence, name, real, 6, cells));
        if mesh.corner_parts.is_some() {
            let name = "corner_patches";
            all.push((P::CellData, C::EvidencePatches, name, int, 3, cells));
        }
    }
    all.extend([
        (P::Points, C::Coordinates, "points", real, 3, points),
        (P::Cells, C::Connectivity, "connectivity", int, 1, 3 * cells),
        (P::Cells, C::Offsets, "offsets", int, 1, cells),
        (P::Cells, C::Types, "types", byte, 1, cells),
    ]);
    all.into_iter()
        .map(
            |(place, content, name, (kind, size), components, tuples)| Array {
                place,
                content,
                name,
                kind,
                components,
                bytes: size * components * tuples,
            },
        )
        .collect()
}

/// The text that a field's bytes are.
pub(super) fn text(mesh: &Mesh, content: Content) -> String {
    let lines = |names: &mut dyn Iterator<Item = &str>| {
        names
            .map(|name| format!("{}\n", Encoded::line(name)))
            .collect()
    };
    match content {
        Content::PanelNames => lines(&mut mesh.panels.iter().map(String::as_str)),
        Content::PatchNames => lines(&mut mesh.parts.iter().map(|p| p.name.as_str())),
        _ => format!("{}\n", mesh.unit),
    }
}

pub(super) fn header(
    arrays: &[Array],
    [points, cells]: [u64; 2],
    sink: &mut Sink<'_>,
) -> std::io::Result<()> {
    writeln!(sink, "<?xml version=\"1.0\"?>")?;
    writeln!(
        sink,
        "<VTKFile type=\"UnstructuredGrid\" version=\"1.0\" byte_order=\"LittleEndian\" header_type=\"UInt64\">"
    )?;
    writeln!(sink, "<!-- chordwise {} -->", env!("CARGO_PKG_VERSION"))?;
    writeln!(sink, "<UnstructuredGrid>")?;
    let list = |sink: &mut Sink<'_>, tag: &str, place: Place| {
        writeln!(sink, "<{tag}>")?;
        // The data stand in the reverse order: see `write`.
        let mut offset = 0;
        let mut lines = Vec::new();
        for array in arrays.iter().rev() {
            if array.place == place {
                let tuples = if place == Place::Field {
                    format!(" NumberOfTuples=\"{}\"", array.bytes)
                } else {
                    format!(" NumberOfComponents=\"{}\"", array.components)
                };
                // Readers take lists of one component and many for two things.
                let tuples = if array.components == 1 && place != Place::Field {
                    ""
                } else {
                    &tuples
                };
                lines.push(format!(
                    "<DataArray type=\"{}\" Name=\"{}\"{tuples} format=\"appended\" offset=\"{offset}\"/>",
                    array.kind, array.name
                ));
            }
            offset += 8 + array.bytes;
        }
        for line in lines.iter().rev() {
            writeln!(sink, "{line}")?;
        }
        writeln!(sink, "</{tag}>")
    };
    list(sink, "FieldData", Place::Field)?;
    writeln!(
        sink,
        "<Piece NumberOfPoints=\"{points}\" NumberOfCells=\"{cells}\">"
    )?;
    list(sink, "PointData", Place::PointData)?;
    list(sink, "CellData", Place::CellData)?;
    list(sink, "Points", Place::Points)?;
    list(sink, "Cells", Place::Cells)?;
    writeln!(sink, "</Piece>\n</UnstructuredGrid>")?;
    write!(sink, "<AppendedData encoding=\"raw\">\n_")
}
