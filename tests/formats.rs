//! Every format read back by a reader that is not ours.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use std::collections::BTreeMap;

use approx::assert_relative_eq;
use chordwise::format::{Format, FormatError, Layout, WriteOptions, Written, write};
use chordwise::mesh::{Measures, Mesh, Part, Vertex};
use chordwise::scalar::{LengthUnit, Point, Tolerance, Vector};

#[path = "formats/shapes.rs"]
mod shapes;

fn options(layout: Option<Layout>) -> WriteOptions<'static> {
    WriteOptions {
        layout,
        ..WriteOptions::new(Tolerance::new(0.05).unwrap())
    }
}

fn written(mesh: &Mesh, format: Format, layout: Option<Layout>) -> (Vec<u8>, Written) {
    let mut bytes = Vec::new();
    let summary = write(mesh, format, &options(layout), &mut bytes).unwrap();
    assert_eq!(summary.bytes, bytes.len() as u64);
    (bytes, summary)
}

/// A mesh from corners, points merged only where all bits are equal.
fn merged(corners: &[[f64; 3]]) -> Mesh {
    let mut points = Vec::new();
    let mut numbers = BTreeMap::new();
    let indices: Vec<u32> = corners
        .iter()
        .map(|c| {
            *numbers.entry(c.map(f64::to_bits)).or_insert_with(|| {
                points.push(Point::from(*c));
                u32::try_from(points.len() - 1).unwrap()
            })
        })
        .collect();
    let triangles = indices.as_chunks().0.to_vec();
    let mut mesh = shapes::loose(0, triangles);
    mesh.vertices = (0_u32..)
        .zip(&points)
        .map(|(point, _)| Vertex {
            point,
            normal: Vector::z(),
        })
        .collect();
    mesh.points = points;
    mesh
}

/// Meshes with what they are known to be: points, area, volume.
fn cases() -> Vec<Mesh> {
    vec![
        shapes::sphere(36, 17, 40.0, Vector::new(-3.0, 500.0, 0.1)),
        shapes::case(Vector::new(0.1, 0.2, 0.3)),
        // A car's length away, as body coordinates are.
        shapes::case(Vector::new(4000.3, -800.7, 1200.1)),
    ]
}

fn compare(read: &[[f64; 3]], meant: &Mesh, scale: f64) {
    let (read, meant) = (Measures::of(&merged(read)), Measures::of(meant));
    assert!(read.closed && meant.closed);
    assert_eq!(
        [read.euler, read.components as i64],
        [meant.euler, meant.components as i64]
    );
    let relative = 2e-5;
    assert_relative_eq!(
        read.area,
        meant.area * scale.powi(2),
        max_relative = relative
    );
    assert_relative_eq!(
        read.volume.unwrap(),
        meant.volume.unwrap() * scale.powi(3),
        max_relative = relative
    );
}

#[test]
fn stl() {
    for mesh in cases() {
        let (bytes, summary) = written(&mesh, Format::Stl, None);
        // Binary STL takes 84 + 50 T bytes.
        assert_eq!(summary.bytes, 84 + 50 * mesh.triangles.len() as u64);
        let read = stl_io::read_stl(&mut std::io::Cursor::new(&bytes)).unwrap();
        assert_eq!(read.faces.len(), mesh.triangles.len());
        // This reader merges equal corners itself.
        assert_eq!(read.vertices.len(), mesh.points.len());
        read.validate().unwrap();
        let corners: Vec<_> = read
            .faces
            .iter()
            .flat_map(|face| face.vertices.map(|v| read.vertices[v].0.map(f64::from)))
            .collect();
        compare(&corners, &mesh, 1.0);
        for (face, t) in read.faces.iter().zip(0..) {
            let [a, b, c] = mesh.triangle_corners(t);
            let normal = Vector::from(face.normal.0.map(f64::from));
            assert!(normal.dot(&(b - a).cross(&(c - a)).normalize()) > 0.999_999);
        }
    }
}

#[test]
fn obj() {
    for (mesh, layout) in cases()
        .into_iter()
        .flat_map(|mesh| [(mesh.clone(), None), (mesh, Some(Layout::Triangles))])
    {
        let (bytes, summary) = written(&mesh, Format::Obj, layout);
        let shared = layout.is_none();
        assert_eq!(
            summary.file_vertices,
            if shared {
                mesh.points.len()
            } else {
                3 * mesh.triangles.len()
            } as u64
        );
        let text = String::from_utf8(bytes.clone()).unwrap();
        let points: Vec<[f64; 3]> = text
            .lines()
            .filter_map(|line| line.strip_prefix("v "))
            .map(|line| {
                let numbers: Vec<f64> = line.split(' ').map(|n| n.parse().unwrap()).collect();
                numbers.try_into().unwrap()
            })
            .collect();
        assert_eq!(points.len() as u64, summary.file_vertices);
        if shared {
            // Doubles come back to the last bit.
            for (read, meant) in points.iter().zip(&mesh.points) {
                assert_eq!(
                    read.map(f64::to_bits),
                    [meant.x, meant.y, meant.z].map(f64::to_bits)
                );
            }
        }
        let (models, _) =
            tobj::load_obj_buf(&mut bytes.as_slice(), &tobj::LoadOptions::default(), |_| {
                Err(tobj::LoadError::OpenFileFailed)
            })
            .unwrap();
        let names: Vec<&str> = models.iter().map(|model| model.name.as_str()).collect();
        let meant: Vec<String> = mesh
            .parts
            .iter()
            .map(|part| part.name.replace(' ', "%20"))
            .collect();
        assert_eq!(names, meant);
        for panel in &mesh.panels {
            assert!(text.contains(&format!("o {}\n", panel.replace(' ', "%20"))));
        }
        let mut corners = Vec::new();
        for (model, part) in models.iter().zip(&mesh.parts) {
            assert_eq!(model.mesh.indices.len(), 3 * part.triangles.len());
            let corner_ids = mesh.triangles[part.triangles.clone()].as_flattened();
            for ((&p, &n), &v) in model
                .mesh
                .indices
                .iter()
                .zip(&model.mesh.normal_indices)
                .zip(corner_ids)
            {
                let triple = |from: &[f32], i: u32| {
                    let at = 3 * i as usize;
                    [from[at], from[at + 1], from[at + 2]].map(f64::from)
                };
                corners.push(triple(&model.mesh.positions, p));
                let normal = Vector::from(triple(&model.mesh.normals, n));
                assert!(normal.dot(&mesh.vertices[v as usize].normal) > 0.999_999);
            }
        }
        compare(&corners, &mesh, 1.0);
    }
}

/// Positions of a GLB by node, in metres and y up, as the reader places them.
fn glb_corners(bytes: &[u8]) -> (Vec<[f64; 3]>, Vec<String>, u64) {
    let file = gltf::Gltf::from_slice(bytes).unwrap();
    let blob = file.blob.clone().unwrap();
    let mut corners = Vec::new();
    let mut names = Vec::new();
    let mut vertices = 0;
    let mut stack: Vec<(gltf::Node<'_>, Vec<gltf::scene::Transform>)> = file
        .default_scene()
        .unwrap_or_else(|| file.scenes().next().unwrap())
        .nodes()
        .map(|node| (node, Vec::new()))
        .collect();
    while let Some((node, mut above)) = stack.pop() {
        above.push(node.transform());
        let place = |p: [f32; 3]| {
            above.iter().rev().fold(p.map(f64::from), |p, transform| {
                let m = transform.clone().matrix();
                [0, 1, 2].map(|row| {
                    (0..3).map(|c| f64::from(m[c][row]) * p[c]).sum::<f64>() + f64::from(m[3][row])
                })
            })
        };
        if let Some(mesh) = node.mesh() {
            names.push(node.name().unwrap().to_owned());
            for primitive in mesh.primitives() {
                let reader = primitive.reader(|_| Some(&blob));
                let positions: Vec<_> = reader.read_positions().unwrap().map(place).collect();
                vertices += positions.len() as u64;
                for n in reader.read_normals().unwrap() {
                    let length = Vector::from(n.map(f64::from)).norm();
                    assert_relative_eq!(length, 1.0, max_relative = 1e-6);
                }
                let indices: Vec<usize> = match reader.read_indices() {
                    Some(indices) => indices.into_u32().map(|i| i as usize).collect(),
                    None => (0..positions.len()).collect(),
                };
                let triangles: Vec<[usize; 3]> = match primitive.mode() {
                    gltf::mesh::Mode::Triangles => indices.as_chunks().0.to_vec(),
                    gltf::mesh::Mode::TriangleStrip => indices
                        .windows(3)
                        .enumerate()
                        .map(|(i, c)| match i % 2 {
                            0 => [c[0], c[1], c[2]],
                            _ => [c[1], c[0], c[2]],
                        })
                        // What joins two strips has no area.
                        .filter(|[a, b, c]| a != b && b != c && c != a)
                        .collect(),
                    mode => panic!("mode {mode:?}"),
                };
                corners.extend(triangles.as_flattened().iter().map(|&i| positions[i]));
            }
        }
        let mut children: Vec<_> = node
            .children()
            .map(|child| (child, above.clone()))
            .collect();
        children.reverse();
        stack.extend(children);
    }
    (corners, names, vertices)
}

#[test]
fn glb() {
    for mesh in cases() {
        for layout in Layout::ALL {
            let (bytes, summary) = written(&mesh, Format::Glb, Some(layout));
            assert_eq!(bytes.len() % 4, 0);
            let (corners, names, vertices) = glb_corners(&bytes);
            assert_eq!(corners.len(), 3 * mesh.triangles.len());
            assert_eq!(names, mesh.panels);
            assert_eq!(vertices, summary.file_vertices);
            if layout == Layout::Triangles {
                assert_eq!(vertices, 3 * mesh.triangles.len() as u64);
            } else {
                assert_eq!(vertices, mesh.vertices.len() as u64);
            }
            compare(&corners, &mesh, 1e-3);
            // Millimetres become metres, and z becomes y.
            for axis in 0..3 {
                let meant = |p: &Point| [p.x, p.z, -p.y][axis] * 1e-3;
                let least = |all: &mut dyn Iterator<Item = f64>| all.fold(f64::INFINITY, f64::min);
                assert_relative_eq!(
                    least(&mut corners.iter().map(|c| c[axis])),
                    least(&mut mesh.points.iter().map(meant)),
                    epsilon = 1e-6
                );
            }
        }
    }
}

/// The ranges in `extras` hold each patch's own triangles.
#[test]
fn glb_patch_ranges() {
    for (mesh, layout) in cases()
        .into_iter()
        .flat_map(|mesh| Layout::ALL.map(|layout| (mesh.clone(), layout)))
    {
        let (bytes, _) = written(&mesh, Format::Glb, Some(layout));
        let length = u32::from_le_bytes(bytes[12..16].try_into().unwrap()) as usize;
        let json: serde_json::Value = serde_json::from_slice(&bytes[20..20 + length]).unwrap();
        let mut parts = mesh.parts.iter();
        for panel in json["meshes"].as_array().unwrap() {
            for patch in panel["extras"]["patches"].as_array().unwrap() {
                let part = parts.next().unwrap();
                assert_eq!(patch["name"], part.name);
                let count = patch["count"].as_u64().unwrap();
                let triangles = part.triangles.len() as u64;
                if layout == Layout::Strips {
                    assert!(count >= triangles + 2);
                    assert_eq!(patch["first"].as_u64().unwrap() % 2, 0);
                } else {
                    assert_eq!(count, 3 * triangles);
                }
            }
        }
        assert!(parts.next().is_none());
    }
}

/// Twenty kilometres from the origin a single is a millimetre coarse: STL must
/// refuse, GLB must use a local origin, PLY and OBJ do not mind.
#[test]
fn far_from_the_origin() {
    let mesh = shapes::case(Vector::new(2e7 + 0.1, 0.3, -2e7));
    let error = write(&mesh, Format::Stl, &options(None), &mut Vec::new()).unwrap_err();
    assert!(matches!(error, FormatError::Rounding { .. }));
    let text = error.to_string();
    assert!(text.starts_with("stl: rounding to single precision moves a point by up to "));
    assert!(text.contains("write ply or obj"), "{text}");
    let (bytes, summary) = written(&mesh, Format::Glb, None);
    assert!(summary.rounding > 0.0 && summary.rounding < 1e-3 * 0.05);
    let file = gltf::Gltf::from_slice(&bytes).unwrap();
    let origin = file.nodes().find(|n| n.name() == Some("origin")).unwrap();
    let (shift, _, _) = origin.transform().decomposed();
    let blob = file.blob.as_deref().unwrap();
    for panel in file.meshes() {
        let primitive = panel.primitives().next().unwrap();
        for p in primitive.reader(|_| Some(blob)).read_positions().unwrap() {
            let place = Vector::from(p.map(f64::from)) + Vector::from(shift.map(f64::from));
            let nearest = mesh
                .points
                .iter()
                .map(|q| (q.coords - place).norm())
                .fold(f64::INFINITY, f64::min);
            assert!(nearest <= summary.rounding, "{nearest}");
        }
    }
    for format in [Format::Obj, Format::Ply] {
        let (_, summary) = written(&mesh, format, None);
        assert!(summary.rounding.abs() < f64::MIN_POSITIVE);
    }
}

/// The figure returned bounds what single precision does to every point.
#[test]
fn stl_rounding_is_bounded() {
    for mesh in cases() {
        let (bytes, summary) = written(&mesh, Format::Stl, None);
        let read = stl_io::read_stl(&mut std::io::Cursor::new(&bytes)).unwrap();
        let mut largest = 0.0_f64;
        for (t, face) in read.faces.iter().enumerate() {
            for (v, meant) in face.vertices.iter().zip(mesh.triangle_corners(t)) {
                let stored = Vector::from(read.vertices[*v].0.map(f64::from));
                largest = largest.max((stored - meant.coords).norm());
            }
        }
        assert!(largest <= summary.rounding && summary.rounding <= largest * (1.0 + 1e-14));
    }
}

/// A pole that has no normal, an unused point, names that would break a line.
#[test]
fn awkward_meshes() {
    let mut mesh = shapes::sphere(8, 3, 1.0, Vector::zeros());
    mesh.vertices[0].normal = Vector::zeros();
    mesh.points.push(Point::new(0.0, 0.0, 0.0));
    mesh.name = "a\nset".to_owned();
    mesh.panels = vec!["empty".to_owned(), "b\u{201c}\n#all".to_owned()];
    for part in &mut mesh.parts {
        part.panel = 1;
    }
    mesh.parts.push(Part {
        name: "empty/1".to_owned(),
        panel: 0,
        triangles: mesh.triangles.len()..mesh.triangles.len(),
    });
    mesh.unit = LengthUnit::Inch;
    for layout in Layout::ALL {
        let (bytes, _) = written(&mesh, Format::Glb, Some(layout));
        let (corners, names, _) = glb_corners(&bytes);
        assert_eq!(names, ["b\u{201c}\n#all"]);
        compare(&corners, &mesh, 0.0254);
    }
    let (bytes, _) = written(&mesh, Format::Obj, None);
    let (models, _) =
        tobj::load_obj_buf(&mut bytes.as_slice(), &tobj::LoadOptions::default(), |_| {
            Err(tobj::LoadError::OpenFileFailed)
        })
        .unwrap();
    assert_eq!(models.len(), 2);
    let (bytes, _) = written(&mesh, Format::Ply, None);
    assert_eq!(
        String::from_utf8_lossy(&bytes)
            .lines()
            .filter(|line| line.starts_with("comment"))
            .count(),
        8
    );
}

#[test]
fn nothing_is_not_written() {
    let mesh = shapes::loose(3, vec![]);
    for format in Format::ALL {
        let error = write(&mesh, format, &options(None), &mut Vec::new()).unwrap_err();
        assert!(matches!(error, FormatError::Empty));
    }
}

/// A full disk is an error, not a short file.
#[test]
fn a_failing_writer_is_reported() {
    let mesh = shapes::sphere(36, 17, 40.0, Vector::zeros());
    for format in Format::ALL {
        let (bytes, _) = written(&mesh, format, None);
        for room in [0, 100, bytes.len() - 1] {
            let mut place = vec![0; room];
            let error = write(&mesh, format, &options(None), &mut place.as_mut_slice());
            assert!(matches!(error, Err(FormatError::Io(_))), "{format} {room}");
        }
    }
}

/// Leaves files with a summary beside each for readers in other languages
/// (`tests/judges`), and checks that they are the same bytes each time.
#[test]
fn files_for_the_judges() {
    let folder = std::path::Path::new(env!("CARGO_TARGET_TMPDIR")).join("judges");
    if folder.exists() {
        std::fs::remove_dir_all(&folder).unwrap();
    }
    std::fs::create_dir_all(&folder).unwrap();
    let mut open = shapes::case(Vector::zeros());
    let lid = open.parts.pop().unwrap();
    open.triangles.truncate(lid.triangles.start);
    open.panels.pop();
    open.name = "tray".to_owned();
    open.unit = LengthUnit::Inch;
    let far = shapes::case(Vector::new(2e7 + 0.1, 0.3, -2e7));
    let named =
        [("sphere", 0), ("case", 1), ("away", 2)].map(|(name, i)| (name, cases()[i].clone()));
    for (name, mesh) in named.into_iter().chain([("tray", open), ("far", far)]) {
        let measures = Measures::of(&mesh);
        for format in Format::ALL {
            if name == "far" && format == Format::Stl {
                continue;
            }
            let plain = format.layouts().iter();
            let plain = plain.map(|layout| (*layout, layout.name()));
            let more = match format {
                Format::Ply => Some((Layout::Indexed, "normals")),
                Format::Stl => Some((Layout::Triangles, "solids")),
                _ => None,
            };
            for (layout, kind) in plain.chain(more) {
                let options = WriteOptions {
                    normals: kind == "normals",
                    solids: kind == "solids",
                    ..options(Some(layout))
                };
                let (mut bytes, mut again) = (Vec::new(), Vec::new());
                let summary = write(&mesh, format, &options, &mut bytes).unwrap();
                write(&mesh, format, &options, &mut again).unwrap();
                assert_eq!(bytes, again);
                let json = serde_json::json!({
                    "triangles": mesh.triangles.len(),
                    "vertices": mesh.points.len(),
                    "file_vertices": summary.file_vertices,
                    "area": measures.area,
                    "volume": measures.volume,
                    "closed": measures.closed,
                    "unit": mesh.unit.symbol(),
                    "panels": mesh.panels,
                    "euler": measures.euler,
                    "components": measures.components,
                });
                let file = folder.join(format!("{name}-{kind}.{format}"));
                std::fs::write(&file, bytes).unwrap();
                std::fs::write(format!("{}.json", file.display()), json.to_string()).unwrap();
            }
        }
    }
}
