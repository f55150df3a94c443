//! How large a file will be, before there is a mesh.
//!
//! STL, PLY and VTU follow from the counts to the byte ([`bytes_of`]). OBJ and STL
//! as text have decimals, whose mean length is taken from a sample; GLB has strips, whose
//! indices a triangle are, and a JSON part that is guessed.

use std::io;

use super::normals::Normals;
use super::{Format, FormatError, Layout, WriteOptions, Written, ply, stl, stl_text, vtu, write};
use crate::mesh::{Mesh, Part, Prediction, Strips};
use crate::patch_set::PatchSet;

/// Bytes of JSON in GLB: of the whole, of a panel, of a patch beside its name.
const JSON: [f64; 3] = [1_000.0, 560.0, 44.0];

/// Points of a sample whose decimals are counted.
const DECIMALS: usize = 2_000;

/// What determines the size of a file, counted or predicted.
#[derive(Debug, Clone)]
pub struct Counts<'a> {
    /// A mesh with the names, unit, panels and parts; of its arrays only
    /// whether there is evidence.
    pub outline: &'a Mesh,
    /// Geometric points.
    pub points: u64,
    /// Points with one normal.
    pub vertices: u64,
}

impl Counts<'_> {
    /// Triangles of all parts.
    #[must_use]
    pub fn triangles(&self) -> u64 {
        self.outline
            .parts
            .iter()
            .map(|part| part.triangles.len() as u64)
            .sum()
    }
}

/// The bytes of a file with these counts, exactly; `None` for OBJ, GLB
/// and STL as text, whose sizes depend on more than counts.
#[must_use]
pub fn bytes_of(counts: &Counts<'_>, format: Format, options: &WriteOptions<'_>) -> Option<u64> {
    let layout = format.layout(options.layout).ok()?;
    match format {
        Format::Stl if options.solids => None,
        Format::Stl => Some(stl::bytes(counts.triangles())),
        Format::Vtu => Some(vtu::bytes(counts, options.surface)),
        Format::Ply => Some(ply::bytes(counts, layout, options.normals)),
        Format::Obj | Format::Glb => None,
    }
}

/// About how many bytes the file of a mesh has, without writing it; exact where
/// [`bytes_of`] is.
#[must_use]
pub fn about_bytes(mesh: &Mesh, format: Format, options: &WriteOptions<'_>) -> u64 {
    let counts = Counts {
        outline: mesh,
        points: mesh.points.len() as u64,
        vertices: mesh.vertices.len() as u64,
    };
    let layout = format.layout(options.layout).unwrap_or(Layout::Indexed);
    let file_vertices = match layout {
        Layout::Triangles => 3.0 * float(counts.triangles()),
        _ => float(counts.vertices),
    };
    match bytes_of(&counts, format, options) {
        Some(bytes) => bytes,
        None if format == Format::Obj => whole(obj(&counts, mesh, layout)),
        None if format == Format::Stl => whole(stl_text::bytes(&counts, mesh)),
        None => whole(glb(&counts, mesh, layout, file_vertices, options.strips)),
    }
}

/// The file that a predicted mesh would make.
///
/// # Errors
/// [`FormatError`] where it could not be written as asked, as far as that can be
/// told.
pub fn predict(
    prediction: &Prediction,
    set: &PatchSet,
    format: Format,
    options: &WriteOptions<'_>,
) -> Result<Written, FormatError> {
    let sample = &prediction.sample;
    // What is said of the surface is not at hand, and its bytes follow from counts.
    if prediction.exact && format != Format::Vtu {
        return write(sample, format, options, &mut io::sink());
    }
    let layout = format.layout(options.layout)?;
    let outline = outline(prediction, set);
    let counts = Counts {
        outline: &outline,
        points: whole(prediction.points),
        vertices: whole(prediction.vertices),
    };
    let triangles = prediction.triangles();
    let file_vertices = match (format, layout) {
        (_, Layout::Triangles) => 3.0 * triangles,
        (Format::Glb, _) => prediction.panel_vertices,
        (Format::Ply, _) if options.normals => prediction.vertices,
        _ => prediction.points,
    };
    let bytes = match bytes_of(&counts, format, options) {
        Some(bytes) => bytes,
        None if format == Format::Obj => whole(obj(&counts, sample, layout)),
        None if format == Format::Stl => whole(stl_text::bytes(&counts, sample)),
        None => whole(glb(&counts, sample, layout, file_vertices, None)),
    };
    let numbers = [
        ("triangles", counts.triangles(), format.most_triangles()),
        ("bytes", bytes, format.most_bytes()),
    ];
    for (what, count, limit) in numbers {
        if count > limit {
            return Err(FormatError::TooLarge {
                format,
                what,
                count: two_digits(count),
                limit,
            });
        }
    }
    Ok(Written {
        bytes,
        file_vertices: whole(file_vertices),
        layout,
        rounding: 0.0,
    })
}

/// The names of the wanted parts, with as many triangles as are predicted.
fn outline(prediction: &Prediction, set: &PatchSet) -> Mesh {
    let mut start = 0;
    let parts = (set.patches().iter().zip(&prediction.patches))
        .filter(|(_, triangles)| **triangles > 0.0)
        .map(|(patch, triangles)| {
            let end = start + usize::try_from(whole(*triangles)).unwrap_or(usize::MAX / 2);
            let triangles = start..end;
            start = end;
            Part {
                name: patch.name.clone(),
                panel: patch.panel.index(),
                triangles,
            }
        })
        .collect();
    let sample = &prediction.sample;
    Mesh {
        name: sample.name.clone(),
        unit: sample.unit,
        panels: sample.panels.clone(),
        points: Vec::new(),
        vertices: Vec::new(),
        triangles: Vec::new(),
        parts,
        evidence: sample.evidence.as_ref().map(|_| Vec::new()),
        corner_parts: None,
    }
}

fn obj(counts: &Counts<'_>, sample: &Mesh, layout: Layout) -> f64 {
    let triangles = float(counts.triangles());
    let mean = |lengths: &mut dyn Iterator<Item = usize>| {
        let (sum, count) = lengths
            .take(DECIMALS)
            .fold((0, 0), |(s, n), l| (s + l, n + 1));
        float(sum as u64) / float(count.max(1))
    };
    let triple = |a: f64, b: f64, c: f64| format!("v {a:?} {b:?} {c:?}\n").len();
    let step = |count: usize| (count / DECIMALS).max(1);
    let points = &mut sample.points.iter().step_by(step(sample.points.len()));
    let point = mean(&mut points.map(|p| triple(p.x, p.y, p.z)));
    let normals = Normals::of(sample);
    let vertices = (0_u32..)
        .take(sample.vertices.len())
        .step_by(step(sample.vertices.len()));
    let normal = 1.0
        + mean(
            &mut vertices
                .map(|v| normals.get(v))
                .map(|n| triple(n.x, n.y, n.z)),
        );
    let (points, vertices) = if layout == Layout::Triangles {
        (3.0 * triangles, 3.0 * triangles)
    } else {
        (float(counts.points), float(counts.vertices))
    };
    // `f a//n b//m c//o`, and the places where there is evidence.
    let mut face = 3.0 + 3.0 * (3.0 + digits(points) + digits(vertices)) - 1.0;
    if let Some(evidence) = &sample.evidence {
        let places = evidence
            .as_flattened()
            .iter()
            .step_by(step(3 * evidence.len()));
        let place = mean(&mut places.map(|[u, v]| format!("vt {u:?} {v:?}\n").len()));
        face += 3.0 * (place + digits(3.0 * triangles));
    }
    let names: usize = counts
        .outline
        .parts
        .iter()
        .map(|part| part.name.len() + 3)
        .sum();
    points * point + vertices * normal + triangles * face + float(names as u64)
}

fn glb(
    counts: &Counts<'_>,
    sample: &Mesh,
    layout: Layout,
    vertices: f64,
    known: Option<&Strips>,
) -> f64 {
    let triangles = float(counts.triangles());
    let indices = match layout {
        Layout::Triangles => 0.0,
        Layout::Indexed => 3.0 * triangles,
        Layout::Strips => {
            let mut found = None;
            let strips = known.unwrap_or_else(|| found.insert(Strips::of(sample)));
            // Two or three indices join strips, where a restart is one.
            let joins = 1.5 * float(strips.len() as u64);
            let found = float(strips.indices().len() as u64) + joins;
            triangles * found / float((sample.triangles.len() as u64).max(1))
        }
    };
    let parts = &counts.outline.parts;
    let mut panels: Vec<usize> = parts.iter().map(|part| part.panel).collect();
    panels.dedup();
    let names: usize = parts.iter().map(|part| part.name.len()).sum();
    let json = JSON[0]
        + JSON[1] * float(panels.len() as u64)
        + JSON[2] * float(parts.len() as u64)
        + float(names as u64);
    24.0 * vertices + 4.0 * indices + json
}

/// A predicted count in as many digits as it is good for.
fn two_digits(count: u64) -> u64 {
    let unit = 10_u64.pow(count.checked_ilog10().unwrap_or(0).saturating_sub(1));
    count / unit * unit
}

/// Mean number of decimal digits of the numbers up to `most`.
fn digits(most: f64) -> f64 {
    most.max(1.0).log10().floor() + 1.0 - 0.11
}

#[allow(
    clippy::cast_precision_loss,
    reason = "a prediction is good to a fifth"
)]
fn float(count: u64) -> f64 {
    count as f64
}

#[allow(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "rounded; the cast saturates"
)]
fn whole(value: f64) -> u64 {
    value.round() as u64
}
