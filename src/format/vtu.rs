//! VTU: VTK's XML file of an unstructured grid, with raw appended data, doubles,
//! little endian. Points are shared by index, also across creases, as solvers
//! want their nodes; cells are triangles in the mesh's order.
//!
//! | where | name | what |
//! |---|---|---|
//! | points | `normal` | unit normal of the surface, outward; at a crease that of the first patch |
//! | points | `patch`, `parameters` | number of the patch, its own (u, v) |
//! | points | `principal_curvatures` | the larger first, in 1 / unit, see [`Nodes`] |
//! | cells | `panel`, `patch` | numbers, counted from 0 in the order of the names |
//! | cells | `proved_deviation` | the larger of both directions |
//! | cells | names of [`Measure::OF_TRIANGLES`] | shape |
//! | cells | `corner_parameters` | with evidence: the patch's own u, v of the three corners |
//! | field | `unit`, `panel_names`, `patch_names` | bytes of UTF-8, a line break after each name; in names control characters and `%` percent-encoded |
//!
//! Patch, parameters, curvatures and deviation are there if the writer is given
//! them. A triangle without an area has angles of 0 and 180 degrees, a shape and
//! scaled Jacobian of 0, and ratios of 1e30, as the Verdict report caps them (that
//! figure is from memory).

use std::io::Write;

use super::names::Encoded;
use super::normals::Normals;
use super::sink::Sink;
use super::{Counts, Format, FormatError, Layout, SurfaceFigures, Written};
use crate::mesh::Mesh;
use crate::quality::{Measure, Triangle};

/// A ratio that has no bound.
const UNBOUNDED: f64 = 1e30;

/// The number of VTK's linear triangle.
const TRIANGLE: u8 = 5;

/// Where an array belongs.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Place {
    Field,
    Points,
    PointData,
    CellData,
    Cells,
}

/// What an array holds.
#[derive(Debug, Clone, Copy)]
enum Content {
    Unit,
    PanelNames,
    PatchNames,
    Coordinates,
    Normals,
    NodePatches,
    NodePlaces,
    Curvatures,
    Panels,
    Patches,
    Deviations,
    Measure(Measure),
    Evidence,
    Connectivity,
    Offsets,
    Types,
}

/// An array: where, what, its name, type, components, and bytes.
struct Array {
    place: Place,
    content: Content,
    name: &'static str,
    kind: &'static str,
    components: u64,
    bytes: u64,
}

/// The arrays of a file, in the order of its header.
fn arrays(counts: &Counts<'_>, with: SurfaceFigures<'_>) -> Vec<Array> {
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
fn text(mesh: &Mesh, content: Content) -> String {
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

fn header(arrays: &[Array], [points, cells]: [u64; 2], sink: &mut Sink<'_>) -> std::io::Result<()> {
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

const FOOTER: &str = "\n</AppendedData>\n</VTKFile>\n";

/// Bytes of a file with these counts.
pub(super) fn bytes(counts: &Counts<'_>, with: SurfaceFigures<'_>) -> u64 {
    let arrays = arrays(counts, with);
    let mut nowhere = std::io::sink();
    let mut sink = Sink::new(&mut nowhere);
    let shape = [counts.points, counts.triangles()];
    let head = header(&arrays, shape, &mut sink).and_then(|()| sink.finish());
    let data: u64 = arrays.iter().map(|array| 8 + array.bytes).sum();
    head.expect("writing to nowhere cannot fail") + data + FOOTER.len() as u64
}

pub(super) fn write(
    mesh: &Mesh,
    with: SurfaceFigures<'_>,
    out: &mut dyn Write,
) -> Result<Written, FormatError> {
    let numbers = [
        ("vertices", mesh.points.len(), i32::MAX.unsigned_abs()),
        ("triangles", mesh.triangles.len(), MOST_TRIANGLES),
    ];
    for (what, count, limit) in numbers {
        if count as u64 > u64::from(limit) {
            return Err(FormatError::TooLarge {
                format: Format::Vtu,
                what,
                count: count as u64,
                limit: limit.into(),
            });
        }
    }
    let counts = Counts {
        outline: mesh,
        points: mesh.points.len() as u64,
        vertices: mesh.vertices.len() as u64,
    };
    let arrays = arrays(&counts, with);
    let mut sink = Sink::new(out);
    header(&arrays, [counts.points, counts.triangles()], &mut sink)?;
    // Last to first: some readers find an array by its offset while they give it
    // another one. So no array can be taken for one that was found before.
    for array in arrays.iter().rev() {
        sink.put(&array.bytes.to_le_bytes())?;
        data(mesh, with, array.content, &mut sink)?;
    }
    sink.put(FOOTER.as_bytes())?;
    Ok(Written {
        bytes: sink.finish()?,
        file_vertices: counts.points,
        layout: Layout::Indexed,
        rounding: 0.0,
    })
}

/// Corners are numbered in 31 bits.
pub(super) const MOST_TRIANGLES: u32 = i32::MAX.unsigned_abs() / 3;

fn data(
    mesh: &Mesh,
    with: SurfaceFigures<'_>,
    content: Content,
    sink: &mut Sink<'_>,
) -> std::io::Result<()> {
    let cells = || mesh.parts.iter().flat_map(|part| part.triangles.clone());
    let numbered = || (0_u32..).zip(&mesh.parts);
    let index = |at: usize| u32::try_from(at).expect("counts are limited before the run");
    match content {
        Content::Unit | Content::PanelNames | Content::PatchNames => {
            sink.put(text(mesh, content).as_bytes())?;
        }
        Content::Coordinates => {
            for point in &mesh.points {
                sink.doubles(point.coords.into())?;
            }
        }
        Content::Normals => {
            let normals = Normals::of(mesh);
            let mut first = vec![None; mesh.points.len()];
            for (vertex, number) in mesh.vertices.iter().zip(0..) {
                first[vertex.point as usize].get_or_insert(number);
            }
            for vertex in first {
                let normal = vertex.map_or([0.0, 0.0, 1.0], |v| normals.get(v).into());
                sink.doubles(normal)?;
            }
        }
        Content::NodePatches => {
            for part in with.nodes.iter().flat_map(|nodes| &nodes.parts) {
                sink.put(&part.to_le_bytes())?;
            }
        }
        Content::NodePlaces => pairs(with.nodes.map(|nodes| &nodes.places), sink)?,
        Content::Curvatures => pairs(with.nodes.map(|nodes| &nodes.curvatures), sink)?,
        Content::Panels | Content::Patches => {
            for (number, part) in numbered() {
                let number = match content {
                    Content::Panels => index(part.panel),
                    _ => number,
                };
                for _ in part.triangles.clone() {
                    sink.put(&number.to_le_bytes())?;
                }
            }
        }
        Content::Deviations => {
            let figures = with.deviations.unwrap_or_default();
            for t in cells() {
                sink.put(&figures[t].to_le_bytes())?;
            }
        }
        Content::Measure(measure) => {
            for t in cells() {
                sink.put(&shape(mesh, t, measure).to_le_bytes())?;
            }
        }
        Content::Evidence => {
            for [[a, b], [c, d], [e, f]] in mesh.evidence.iter().flatten() {
                sink.doubles([*a, *b, *c])?;
                sink.doubles([*d, *e, *f])?;
            }
        }
        Content::Connectivity => {
            for point in cells().flat_map(|t| mesh.triangle_points(t)) {
                sink.put(&point.to_le_bytes())?;
            }
        }
        Content::Offsets => {
            for (_, end) in cells().zip(1..) {
                sink.put(&index(3 * end).to_le_bytes())?;
            }
        }
        Content::Types => {
            for _ in cells() {
                sink.put(&[TRIANGLE])?;
            }
        }
    }
    Ok(())
}

fn pairs(values: Option<&Vec<[f64; 2]>>, sink: &mut Sink<'_>) -> std::io::Result<()> {
    for value in values.into_iter().flatten().flatten() {
        sink.put(&value.to_le_bytes())?;
    }
    Ok(())
}

/// A figure of a triangle, finite for a flat one too.
fn shape(mesh: &Mesh, triangle: usize, measure: Measure) -> f64 {
    let figure = Triangle::new(mesh.triangle_corners(triangle)).and_then(|t| measure.of(&t));
    figure.unwrap_or(match measure {
        Measure::MinimumAngle | Measure::ScaledJacobian | Measure::Shape => 0.0,
        Measure::MaximumAngle => 180.0,
        _ => UNBOUNDED,
    })
}
