//! VTU: VTK's XML file of an unstructured grid, with raw appended data, doubles,
//! little endian. Points are shared by index, also across creases, as solvers
//! want their nodes; cells are triangles in the mesh's order.
//!
//! | where | name | what |
//! |---|---|---|
//! | points | `normal` | unit normal of the surface, outward; at a crease that of the first patch |
//! | points | `panel`, `node` | the first panel that has the point, its number there |
//! | points | `patch`, `parameters` | number of the patch, its own (u, v) |
//! | points | `principal_curvatures` | the larger first, in 1 / unit, see [`Nodes`] |
//! | cells | `panel`, `patch` | numbers, counted from 0 in the order of the names |
//! | cells | `element` | number in its panel |
//! | cells | `proved_deviation` | the larger of both directions |
//! | cells | names of [`Measure::OF_TRIANGLES`] | shape |
//! | cells | `corner_parameters` | with evidence: the patch's own u, v of the three corners |
//! | cells | `corner_patches` | with evidence of a mesh that crosses seams: the patches of the three corners |
//! | field | `unit`, `panel_names`, `patch_names` | bytes of UTF-8, a line break after each name; in names control characters and `%` percent-encoded |
//!
//! Nodes and elements count from 0 in every panel, in the order of its triangles and
//! their corners: with the panel's name they stay the same between revisions that leave
//! the panel alone, whatever happens to others. Patch, parameters, curvatures and deviation are there if the writer is given
//! them. A triangle without an area has angles of 0 and 180 degrees, a shape and
//! scaled Jacobian of 0, and ratios of 1e30, as the Verdict report caps them (that
//! figure is from memory).

mod arrays;

use std::io::Write;

use super::normals::Normals;
use super::sink::Sink;
use super::{Counts, Format, FormatError, Layout, SurfaceFigures, Written};
use crate::mesh::Mesh;
use crate::quality::{Measure, Triangle};
use arrays::{Content, arrays, header, text};

/// A ratio that has no bound.
const UNBOUNDED: f64 = 1e30;

/// The number of VTK's linear triangle.
const TRIANGLE: u8 = 5;

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
        Content::NodePanels | Content::NodeNumbers => {
            for [panel, number] in nodes(mesh) {
                let value = match content {
                    Content::NodePanels => panel,
                    _ => number,
                };
                sink.put(&value.to_le_bytes())?;
            }
        }
        Content::Elements => {
            let mut count = vec![0_u32; mesh.panels.len()];
            for part in &mesh.parts {
                for _ in part.triangles.clone() {
                    sink.put(&count[part.panel].to_le_bytes())?;
                    count[part.panel] += 1;
                }
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
        Content::EvidencePatches => {
            for part in mesh.corner_parts.iter().flatten().flatten() {
                sink.put(&part.to_le_bytes())?;
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

/// For every point the first panel that has it and its number there; what no
/// triangle has counts to the first panel, as its first.
fn nodes(mesh: &Mesh) -> Vec<[u32; 2]> {
    let index = |at: usize| u32::try_from(at).expect("counts are limited before the run");
    let mut found = vec![None; mesh.points.len()];
    // The panel that has met the point last, so that it counts once a panel.
    let mut last = vec![None; mesh.points.len()];
    let mut count = vec![0; mesh.panels.len()];
    let mut order: Vec<usize> = (0..mesh.parts.len()).collect();
    order.sort_by_key(|&part| mesh.parts[part].panel);
    for part in order.into_iter().map(|part| &mesh.parts[part]) {
        let panel = part.panel;
        for point in part.triangles.clone().flat_map(|t| mesh.triangle_points(t)) {
            let point = point as usize;
            if last[point] != Some(panel) {
                last[point] = Some(panel);
                found[point].get_or_insert([index(panel), count[panel]]);
                count[panel] += 1;
            }
        }
    }
    found.into_iter().map(Option::unwrap_or_default).collect()
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
