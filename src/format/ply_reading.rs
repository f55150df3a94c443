//! Reads back the PLY files with evidence that this project writes: binary,
//! little endian, doubles (see the writer beside this). Other PLY files are
//! refused with a reason. Sizes are checked against the length of the file
//! before anything is stored.

use thiserror::Error;

use super::names::decoded;
use super::ply::{CORNERS, EVIDENCE};
use crate::mesh::{Evidence, Face};
use crate::scalar::{LengthUnit, Point};

/// A file that is no mesh with evidence.
#[derive(Debug, Clone, PartialEq, Eq, Error)]
pub enum EvidenceError {
    /// The header is not one of ours.
    #[error("header line {line}: {fault}")]
    Header {
        /// The line, from 1.
        line: usize,
        /// What is wrong, and the rule.
        fault: String,
    },
    /// The header has no end.
    #[error("header: no line `end_header`; the file is cut short or no PLY file")]
    NoEnd,
    /// The mesh was written without evidence.
    #[error(
        "header: faces carry no patch, u and v; write the mesh with `chordwise tessellate SET.ron -o MESH.ply --evidence`"
    )]
    NoEvidence,
    /// The file is not as long as its header says.
    #[error(
        "byte {found}: the file ends; its header tells of {vertices} vertices and {faces} faces, which take {expected} bytes"
    )]
    Length {
        /// The file's length.
        found: u64,
        /// What it should be.
        expected: u64,
        /// Vertices by the header.
        vertices: u64,
        /// Faces by the header.
        faces: u64,
    },
    /// A number that cannot be.
    #[error("{element} {index}, byte {byte}: {fault}")]
    Value {
        /// `vertex` or `face`.
        element: &'static str,
        /// Its number, from 0.
        index: usize,
        /// Where it begins in the file.
        byte: usize,
        /// What is wrong, and the rule.
        fault: &'static str,
    },
}

/// Bytes of a face: a count, three indices, a patch, six doubles.
const FACE: usize = 1 + 3 * 4 + 4 + 6 * 8;

/// Bytes more where each corner has a patch of its own.
const OWN: usize = 3 * 4;

/// Reads a mesh with evidence from the bytes of a PLY file. Points that the
/// file repeats (separate triangles, or normals) are made one again.
///
/// # Errors
/// [`EvidenceError`] with its place in the file.
pub fn read_evidence(bytes: &[u8]) -> Result<Evidence, EvidenceError> {
    let header = Header::read(bytes)?;
    let stride = 8 * header.vertex_properties.len();
    let size = FACE + if header.wide { OWN } else { 0 };
    let expected = (header.vertices.checked_mul(stride as u64))
        .and_then(|v| v.checked_add(header.faces.checked_mul(size as u64)?))
        .and_then(|n| n.checked_add(header.length as u64))
        .unwrap_or(u64::MAX);
    let found = bytes.len() as u64;
    let (Ok(vertices), true) = (usize::try_from(header.vertices), found == expected) else {
        return Err(EvidenceError::Length {
            found,
            expected,
            vertices: header.vertices,
            faces: header.faces,
        });
    };
    let (points, faces) = bytes[header.length..].split_at(vertices * stride);
    let mut evidence = Evidence {
        set: header.set,
        unit: header.unit,
        patches: header.patches,
        points: Vec::with_capacity(vertices),
        faces: Vec::with_capacity(faces.len() / size),
    };
    for (index, vertex) in points.chunks_exact(stride.max(1)).enumerate() {
        let [x, y, z] = header.xyz.map(|at| double(&vertex[8 * at..]));
        if ![x, y, z].iter().all(|c| c.is_finite()) {
            return Err(EvidenceError::Value {
                element: "vertex",
                index,
                byte: header.length + index * stride,
                fault: "a coordinate is not finite; coordinates must be finite",
            });
        }
        evidence.points.push(Point::new(x, y, z));
    }
    for (index, bytes) in faces.chunks_exact(size).enumerate() {
        let face = face(bytes, vertices, evidence.patches.len()).map_err(|fault| {
            EvidenceError::Value {
                element: "face",
                index,
                byte: header.length + vertices * stride + index * size,
                fault,
            }
        })?;
        evidence.faces.push(face);
    }
    let repeated = vertices > 3 && vertices == 3 * evidence.faces.len();
    if repeated || header.vertex_properties.len() > 3 {
        evidence.merge_repeated();
    }
    Ok(evidence)
}

fn face(bytes: &[u8], vertices: usize, patches: usize) -> Result<Face, &'static str> {
    if bytes[0] != 3 {
        return Err("it does not have three corners; faces must be triangles");
    }
    let [a, b, c, patch] = [0, 1, 2, 3].map(|k| index(&bytes[1 + 4 * k..]));
    if [a, b, c].iter().any(|&i| i as usize >= vertices) {
        return Err("an index names no vertex; indices must be below the number of vertices");
    }
    if patch as usize >= patches {
        return Err("its patch is not in the header; patches count from 0 in the header's order");
    }
    let places = [0, 1, 2].map(|k| [0, 1].map(|axis| double(&bytes[17 + 16 * k + 8 * axis..])));
    if !places.as_flattened().iter().all(|p| p.is_finite()) {
        return Err("a parameter is not finite; u and v must be finite");
    }
    let corner_patches = match bytes.get(FACE..FACE + OWN) {
        None => None,
        Some(own) => {
            let own = [0, 1, 2].map(|k| index(&own[4 * k..]));
            if own.iter().any(|&p| p as usize >= patches) {
                return Err(
                    "a corner's patch is not in the header; patches count from 0 in the header's order",
                );
            }
            Some(own)
        }
    };
    Ok(Face {
        points: [a, b, c],
        patch,
        places,
        corner_patches,
    })
}

/// A signed index; a negative one becomes too large for any table.
fn index(bytes: &[u8]) -> u32 {
    let mut four = [0; 4];
    four.copy_from_slice(&bytes[..4]);
    u32::from_le_bytes(four)
}

fn double(bytes: &[u8]) -> f64 {
    let mut eight = [0; 8];
    eight.copy_from_slice(&bytes[..8]);
    f64::from_le_bytes(eight)
}

struct Header {
    length: usize,
    set: String,
    unit: LengthUnit,
    patches: Vec<String>,
    vertices: u64,
    faces: u64,
    vertex_properties: Vec<String>,
    /// Which of the properties are x, y, z.
    xyz: [usize; 3],
    /// Whether each corner has a patch of its own.
    wide: bool,
}

#[derive(Clone, Copy, PartialEq)]
enum Element {
    None,
    Vertex,
    Face,
}

impl Header {
    fn read(bytes: &[u8]) -> Result<Self, EvidenceError> {
        let mut header = Self {
            length: 0,
            set: String::new(),
            unit: LengthUnit::default(),
            patches: Vec::new(),
            vertices: 0,
            faces: 0,
            vertex_properties: Vec::new(),
            xyz: [0, 1, 2],
            wide: false,
        };
        let mut element = Element::None;
        let mut face_properties: Vec<String> = Vec::new();
        let mut line = 0;
        loop {
            line += 1;
            let fault = |fault: String| EvidenceError::Header { line, fault };
            let rest = &bytes[header.length..];
            let end = rest.iter().position(|&b| b == b'\n');
            let ((1, None) | (_, Some(_))) = (line, end) else {
                return Err(EvidenceError::NoEnd);
            };
            let text = &rest[..end.unwrap_or(0)];
            if line == 1 && text != b"ply" {
                return Err(fault("not `ply`; only PLY files can be audited".to_owned()));
            }
            header.length += text.len() + 1;
            let text = std::str::from_utf8(text)
                .map_err(|_| fault("not UTF-8; names must be UTF-8".to_owned()))?;
            let (word, tail) = text.split_once(' ').unwrap_or((text, ""));
            match word {
                "ply" if line == 1 => {}
                "format" if tail == "binary_little_endian 1.0" => {}
                "comment" => header.comment(tail).map_err(fault)?,
                "element" => element = header.element(tail, element).map_err(fault)?,
                "property" if element == Element::Vertex => {
                    let name = tail.strip_prefix("double ").ok_or_else(|| {
                        fault(format!("`{tail}`; vertices must have doubles only"))
                    })?;
                    header.vertex_properties.push(name.to_owned());
                }
                "property" if element == Element::Face => face_properties.push(tail.to_owned()),
                "end_header" if tail.is_empty() => break,
                _ => {
                    let rule = "only binary little-endian files of this program can be audited";
                    return Err(fault(format!("`{text}`; {rule}")));
                }
            }
        }
        let list = std::iter::once("list uchar int vertex_indices".to_owned());
        let corners = EVIDENCE.iter().map(|name| format!("double {name}"));
        let wanted = list.chain(["int patch".to_owned()]).chain(corners);
        let wanted: Vec<String> = wanted.collect();
        let own: Vec<String> = CORNERS.iter().map(|name| format!("int {name}")).collect();
        match face_properties.strip_prefix(&wanted[..]) {
            Some([]) => {}
            Some(more) if more == own => header.wide = true,
            _ => return Err(EvidenceError::NoEvidence),
        }
        for (slot, name) in header.xyz.iter_mut().zip(["x", "y", "z"]) {
            let found = header.vertex_properties.iter().position(|p| p == name);
            *slot = found.ok_or_else(|| EvidenceError::Header {
                line,
                fault: format!("no vertex property `{name}`; vertices must have x, y and z"),
            })?;
        }
        Ok(header)
    }

    fn comment(&mut self, text: &str) -> Result<(), String> {
        let (word, tail) = text.split_once(' ').unwrap_or((text, ""));
        match word {
            "set" => self.set = decoded(tail),
            "unit" => {
                self.unit = [
                    LengthUnit::Metre,
                    LengthUnit::Centimetre,
                    LengthUnit::Millimetre,
                    LengthUnit::Inch,
                ]
                .into_iter()
                .find(|unit| unit.symbol() == tail)
                .ok_or_else(|| format!("unit `{tail}`; it must be m, cm, mm or in"))?;
            }
            "patch" => {
                let mut fields = tail.splitn(4, ' ');
                let numbers = fields.by_ref().take(3).filter(|f| f.parse::<u64>().is_ok());
                let (3, Some(name)) = (numbers.count(), fields.next()) else {
                    return Err(format!(
                        "patch `{tail}`; it must be panel, first face, faces and name"
                    ));
                };
                self.patches.push(decoded(name));
            }
            _ => {}
        }
        Ok(())
    }

    fn element(&mut self, text: &str, before: Element) -> Result<Element, String> {
        let (name, count) = text.split_once(' ').unwrap_or((text, ""));
        let next = match (before, name) {
            (Element::None, "vertex") => Element::Vertex,
            (Element::Vertex, "face") => Element::Face,
            _ => {
                return Err(format!(
                    "element `{name}`; there must be vertices, then faces, and nothing else"
                ));
            }
        };
        let count = count
            .parse()
            .map_err(|_| format!("count `{count}`; it must be a whole number"))?;
        *(if next == Element::Face {
            &mut self.faces
        } else {
            &mut self.vertices
        }) = count;
        Ok(next)
    }
}
