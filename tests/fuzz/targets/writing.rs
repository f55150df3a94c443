//! Meshes made of bytes, however odd: written in every format and layout, and
//! read back. What a writer refuses it has to refuse before the first byte.
#![no_main]

use chordwise::format::{Format, Layout, WriteOptions, read_evidence, write};
use chordwise::mesh::{Mesh, Part, Vertex};
use chordwise::scalar::{LengthUnit, Point, Tolerance, Vector};
use libfuzzer_sys::arbitrary::{Result, Unstructured};
use libfuzzer_sys::fuzz_target;

fn coordinate(u: &mut Unstructured) -> Result<f64> {
    let value = match u.int_in_range(0..=7)? {
        0 => f64::from_bits(u.arbitrary()?),
        1 => 1e9 * f64::from(u.arbitrary::<i8>()?) / 128.0,
        _ => f64::from(u.arbitrary::<i16>()?) / 64.0,
    };
    Ok(if value.is_finite() { value } else { 0.0 })
}

fn mesh(u: &mut Unstructured) -> Result<Mesh> {
    let count = u.int_in_range(1..=12_u32)?;
    let mut points = Vec::new();
    for _ in 0..count {
        points.push(Point::new(coordinate(u)?, coordinate(u)?, coordinate(u)?));
    }
    let mut vertices = Vec::new();
    for _ in 0..u.int_in_range(1..=16_u32)? {
        let raw = Vector::new(coordinate(u)?, coordinate(u)?, coordinate(u)?);
        vertices.push(Vertex {
            point: u.int_in_range(0..=count - 1)?,
            normal: raw.try_normalize(1e-3).filter(|n| n.norm().is_finite()).unwrap_or_default(),
        });
    }
    let last = u32::try_from(vertices.len()).unwrap_or(1) - 1;
    let mut triangles = Vec::new();
    for _ in 0..u.int_in_range(1..=24)? {
        let mut corner = || u.int_in_range(0..=last);
        triangles.push([corner()?, corner()?, corner()?]);
    }
    let panels: Vec<String> = vec![u.arbitrary()?, "second".to_owned()];
    let mut parts = Vec::new();
    let mut start = 0;
    while start < triangles.len() {
        let end = u.int_in_range(start + 1..=triangles.len())?;
        parts.push(Part {
            name: u.arbitrary()?,
            panel: u.int_in_range(0..=1)?,
            triangles: start..end,
        });
        start = end;
    }
    let evidence = u.ratio(1, 2)?.then(|| vec![[[0.25, 0.5]; 3]; triangles.len()]);
    Ok(Mesh {
        name: u.arbitrary()?,
        unit: LengthUnit::Millimetre,
        panels,
        points,
        vertices,
        triangles,
        parts,
        evidence,
        corner_parts: None,
    })
}

/// Corners of all triangles in the order of the parts.
fn corners(mesh: &Mesh) -> Vec<[f64; 3]> {
    let all = mesh.parts.iter().flat_map(|part| part.triangles.clone());
    all.flat_map(|t| mesh.triangle_corners(t)).map(|p| [p.x, p.y, p.z]).collect()
}

fuzz_target!(|bytes: &[u8]| {
    let mut u = Unstructured::new(bytes);
    let Ok(mesh) = mesh(&mut u) else { return };
    let Some(chord) = u.int_in_range(0..=9).ok().and_then(|k| Tolerance::new(0.1_f64.powi(k)).ok())
    else {
        return;
    };
    for format in Format::ALL {
        for layout in Layout::ALL {
            for normals in [false, true] {
                let options = WriteOptions {
                    layout: Some(layout),
                    normals,
                    ..WriteOptions::new(chord)
                };
                let mut out = Vec::new();
                let mut mesh = mesh.clone();
                if !format.holds_evidence() {
                    mesh.evidence = None;
                }
                match write(&mesh, format, &options, &mut out) {
                    // Refused before the first byte, or not at all.
                    Err(error) => assert!(out.is_empty(), "{error} after {} bytes", out.len()),
                    Ok(written) => {
                        assert_eq!(written.bytes, out.len() as u64);
                        assert!(written.rounding <= 0.1 * chord.get());
                        read_back(&mesh, format, layout, written.rounding, &out);
                    }
                }
            }
        }
    }
});

fn read_back(mesh: &Mesh, format: Format, layout: Layout, rounding: f64, bytes: &[u8]) {
    match format {
        Format::Stl => {
            let read = stl_io::read_stl(&mut std::io::Cursor::new(bytes)).expect("STL");
            assert_eq!(read.faces.len(), mesh.triangles.len());
            let found = read.faces.iter().flat_map(|face| face.vertices);
            let found: Vec<[f64; 3]> = found.map(|v| read.vertices[v].0.map(f64::from)).collect();
            let meant = (0..mesh.triangles.len()).flat_map(|t| mesh.triangle_corners(t));
            let meant: Vec<[f64; 3]> = meant.map(|p| [p.x, p.y, p.z]).collect();
            near(&found, &meant, rounding);
        }
        Format::Obj => {
            let text = std::str::from_utf8(bytes).expect("OBJ is text");
            let triple = |line: &str| -> [f64; 3] {
                let numbers: Vec<f64> =
                    line.split(' ').map(|n| n.parse().expect("a number")).collect();
                numbers.try_into().expect("three numbers")
            };
            let points: Vec<_> = text.lines().filter_map(|l| l.strip_prefix("v ")).map(triple).collect();
            let mut found = Vec::new();
            for line in text.lines().filter_map(|l| l.strip_prefix("f ")) {
                for corner in line.split(' ') {
                    let index = corner.split('/').next().expect("an index");
                    found.push(points[index.parse::<usize>().expect("a number") - 1]);
                }
            }
            let by_panel = in_panels(mesh);
            assert_eq!(bits(&found), bits(&by_panel));
            let mut reader = std::io::Cursor::new(bytes);
            let options = tobj::LoadOptions::default();
            let nothing = |_: &std::path::Path| Err(tobj::LoadError::GenericFailure);
            let (models, _) = tobj::load_obj_buf(&mut reader, &options, nothing).expect("OBJ");
            let faces: usize = models.iter().map(|m| m.mesh.indices.len()).sum();
            assert_eq!(faces, 3 * mesh.triangles.len());
        }
        Format::Ply => ply(mesh, bytes),
        Format::Vtu => {
            let mark = b"<AppendedData encoding=\"raw\">\n_";
            let at = bytes.windows(mark.len()).position(|w| w == mark).expect("appended data");
            let head = std::str::from_utf8(&bytes[..at]).expect("a header of text");
            let data = &bytes[at + mark.len()..];
            let array = |name: &str| -> &[u8] {
                let line = head.lines().find(|l| l.contains(&format!("Name=\"{name}\"")));
                let (_, offset) = line.expect("an array").split_once("offset=\"").expect("an offset");
                let offset = offset.split('"').next().expect("its end").parse::<usize>();
                let offset = offset.expect("a number");
                let length = u64::from_le_bytes(data[offset..offset + 8].try_into().expect("eight bytes"));
                &data[offset + 8..][..usize::try_from(length).expect("a length")]
            };
            let double = |b: &[u8]| f64::from_le_bytes(b.try_into().expect("eight bytes"));
            let points: Vec<f64> = array("points").chunks(8).map(double).collect();
            let index = |b: &[u8]| u32::from_le_bytes(b.try_into().expect("four bytes")) as usize;
            let found: Vec<[f64; 3]> = array("connectivity")
                .chunks(4)
                .map(|b| [0, 1, 2].map(|k| points[3 * index(b) + k]))
                .collect();
            assert_eq!(bits(&found), bits(&corners(mesh)));
            for name in ["minimum_angle", "aspect_ratio", "radius_ratio", "shape", "normal"] {
                assert!(array(name).chunks(8).map(double).all(f64::is_finite), "{name}");
            }
        }
        Format::Glb => {
            let file = gltf::Gltf::from_slice(bytes).expect("GLB");
            let blob = file.blob.clone().expect("a buffer");
            let mut triangles = 0;
            for primitive in file.meshes().flat_map(|m| m.primitives().collect::<Vec<_>>()) {
                let reader = primitive.reader(|_| Some(&blob));
                let count = reader.read_positions().expect("positions").count();
                let lengths = reader.read_normals().expect("normals").map(|n| Vector::from(n.map(f64::from)).norm());
                assert!(lengths.into_iter().all(|l| (l - 1.0).abs() < 1e-5));
                let indices: Vec<usize> = match reader.read_indices() {
                    Some(indices) => indices.into_u32().map(|i| i as usize).collect(),
                    None => (0..count).collect(),
                };
                assert!(indices.iter().all(|&i| i < count));
                triangles += match layout {
                    Layout::Strips => indices.windows(3).filter(|c| c[0] != c[1] && c[1] != c[2] && c[2] != c[0]).count(),
                    _ => indices.len() / 3,
                };
            }
            let whole = mesh.triangles.iter().filter(|c| c[0] != c[1] && c[1] != c[2] && c[2] != c[0]);
            match layout {
                // Triangles that repeat a vertex look like what joins strips.
                Layout::Strips => assert_eq!(triangles, whole.count()),
                _ => assert_eq!(triangles, mesh.triangles.len()),
            }
        }
    }
}

/// Corners in the order of a file that goes by panels.
fn in_panels(mesh: &Mesh) -> Vec<[f64; 3]> {
    let mut ordered = mesh.clone();
    ordered.parts.sort_by_key(|part| part.panel);
    corners(&ordered)
}

fn bits(corners: &[[f64; 3]]) -> Vec<[u64; 3]> {
    corners.iter().map(|c| c.map(f64::to_bits)).collect()
}

fn near(found: &[[f64; 3]], meant: &[[f64; 3]], rounding: f64) {
    assert_eq!(found.len(), meant.len());
    for (f, m) in found.iter().zip(meant) {
        // Squares of what is below 1e-154 would lose places.
        let [x, y, z] = [0, 1, 2].map(|k| f[k] - m[k]);
        let off = x.hypot(y).hypot(z);
        assert!(off <= rounding * (1.0 + 1e-12), "{off:e} off, {rounding:e} stated");
    }
}

/// A reader of binary PLY for what we write, by the header alone.
fn ply(mesh: &Mesh, bytes: &[u8]) {
    let end = b"end_header\n";
    let start = bytes.windows(end.len()).position(|w| w == end).expect("an end") + end.len();
    let head = std::str::from_utf8(&bytes[..start]).expect("a header of text");
    let count = |name: &str| -> usize {
        let line = head.lines().find_map(|l| l.strip_prefix(name)).expect("a count");
        line.trim().parse().expect("a number")
    };
    let (vertices, faces) = (count("element vertex "), count("element face "));
    let (own, face) = head.split_once("element face").expect("faces come last");
    let width = 8 * own.lines().filter(|l| l.starts_with("property double ")).count();
    let more = 8 * face.lines().filter(|l| l.starts_with("property double ")).count();
    let more = if more > 0 { more + 4 } else { 0 };
    let body = &bytes[start..];
    assert_eq!(body.len(), vertices * width + faces * (13 + more));
    let double = |at: usize| f64::from_le_bytes(body[at..at + 8].try_into().expect("eight bytes"));
    let mut found = Vec::new();
    for k in 0..faces {
        let at = vertices * width + k * (13 + more);
        assert_eq!(body[at], 3);
        for corner in 0..3 {
            let at = at + 1 + 4 * corner;
            let index = i32::from_le_bytes(body[at..at + 4].try_into().expect("four bytes"));
            let at = usize::try_from(index).expect("not negative") * width;
            found.push([double(at), double(at + 8), double(at + 16)]);
        }
    }
    assert_eq!(bits(&found), bits(&corners(mesh)));
    if mesh.evidence.is_some() {
        let read = read_evidence(bytes);
        let names: Vec<&str> = mesh.parts.iter().map(|part| part.name.as_str()).collect();
        let read = read.unwrap_or_else(|error| panic!("{error} in {names:?}"));
        assert_eq!(read.patches, names);
    }
}
