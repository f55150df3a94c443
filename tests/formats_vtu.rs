//! VTU and STL as text: files for solvers. A reader in another language is in
//! `tests/judges`.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use std::collections::BTreeMap;
use std::fs;
use std::path::Path;

use approx::assert_relative_eq;
use assert_cmd::Command;
use chordwise::format::{
    Counts, Format, FormatError, SurfaceFigures, WriteOptions, bytes_of, write,
};
use chordwise::mesh::{Mesh, Meshed, Nodes};
use chordwise::patch_set::PatchSet;
use chordwise::quality::{Measure, Triangle};
use chordwise::sampling::Limits;
use chordwise::scalar::{Tolerance, Vector};
use serde_json::Value;

#[path = "formats/shapes.rs"]
mod shapes;

/// What an array of a file holds.
struct Array {
    kind: String,
    components: usize,
    bytes: Vec<u8>,
}

impl Array {
    fn doubles(&self) -> Vec<f64> {
        assert_eq!(self.kind, "Float64");
        let (all, rest) = self.bytes.as_chunks();
        assert!(rest.is_empty());
        all.iter().map(|b| f64::from_le_bytes(*b)).collect()
    }

    fn integers(&self) -> Vec<i32> {
        assert_eq!(self.kind, "Int32");
        let (all, rest) = self.bytes.as_chunks();
        assert!(rest.is_empty());
        all.iter().map(|b| i32::from_le_bytes(*b)).collect()
    }

    fn text(&self) -> &str {
        assert_eq!(self.kind, "UInt8");
        std::str::from_utf8(&self.bytes).unwrap()
    }
}

/// The arrays of a file by element and name, by the offsets of the header alone.
fn read(bytes: &[u8]) -> BTreeMap<(String, String), Array> {
    let mark = b"<AppendedData encoding=\"raw\">\n_";
    let at = bytes.windows(mark.len()).position(|w| w == mark).unwrap();
    let head = std::str::from_utf8(&bytes[..at]).unwrap();
    let data = &bytes[at + mark.len()..];
    let (mut found, mut within) = (BTreeMap::new(), String::new());
    let mut ends = 0;
    for line in head.lines() {
        let attribute = |name: &str| {
            let (_, after) = line.split_once(&format!(" {name}=\""))?;
            Some(after.split_once('"').unwrap().0.to_owned())
        };
        if line.starts_with("<DataArray") {
            let offset: usize = attribute("offset").unwrap().parse().unwrap();
            let length = u64::from_le_bytes(data[offset..offset + 8].try_into().unwrap());
            let start = offset + 8;
            let end = start + usize::try_from(length).unwrap();
            ends = ends.max(end);
            let array = Array {
                kind: attribute("type").unwrap(),
                components: attribute("NumberOfComponents").map_or(1, |n| n.parse().unwrap()),
                bytes: data[start..end].to_vec(),
            };
            found.insert((within.clone(), attribute("Name").unwrap()), array);
        } else if let Some(tag) = line.strip_prefix('<') {
            within = tag.split([' ', '>']).next().unwrap().to_owned();
        }
    }
    assert_eq!(&data[ends..], b"\n</AppendedData>\n</VTKFile>\n");
    found
}

fn options() -> WriteOptions<'static> {
    WriteOptions::new(Tolerance::new(0.05).unwrap())
}

fn get<'a>(arrays: &'a BTreeMap<(String, String), Array>, place: &str, name: &str) -> &'a Array {
    &arrays[&(place.to_owned(), name.to_owned())]
}

#[test]
fn a_mesh_comes_back_to_the_bit() {
    let mut odd = shapes::case(Vector::new(0.1, 0.2, 0.3));
    odd.panels[0] = "<front & \"tray\">\n%".to_owned();
    for mesh in [odd, shapes::sphere(12, 5, 40.0, Vector::zeros())] {
        let mut bytes = Vec::new();
        let written = write(&mesh, Format::Vtu, &options(), &mut bytes).unwrap();
        assert_eq!(written.bytes, bytes.len() as u64);
        assert_eq!(written.file_vertices, mesh.points.len() as u64);
        let read = read(&bytes);
        let points: Vec<u64> = get(&read, "Points", "points")
            .doubles()
            .into_iter()
            .map(f64::to_bits)
            .collect();
        let meant = mesh.points.iter().flat_map(|p| [p.x, p.y, p.z]);
        assert_eq!(points, meant.map(f64::to_bits).collect::<Vec<_>>());
        let corners = get(&read, "Cells", "connectivity").integers();
        let meant = (0..mesh.triangles.len()).flat_map(|t| mesh.triangle_points(t));
        assert!(corners.iter().map(|&c| u32::try_from(c).unwrap()).eq(meant));
        let offsets = get(&read, "Cells", "offsets").integers();
        assert!(offsets.iter().zip(1..).all(|(end, k)| *end == 3 * k));
        assert_eq!(offsets.len(), mesh.triangles.len());
        assert!(get(&read, "Cells", "types").bytes.iter().all(|t| *t == 5));
        let patches = get(&read, "CellData", "patch").integers();
        let panels = get(&read, "CellData", "panel").integers();
        for (number, part) in mesh.parts.iter().enumerate() {
            for t in part.triangles.clone() {
                assert_eq!(patches[t], i32::try_from(number).unwrap());
                assert_eq!(panels[t], i32::try_from(part.panel).unwrap());
            }
        }
        let names: Vec<&str> = get(&read, "FieldData", "patch_names")
            .text()
            .lines()
            .collect();
        assert!(names.iter().eq(mesh.parts.iter().map(|p| &p.name)));
        let names: Vec<&str> = get(&read, "FieldData", "panel_names")
            .text()
            .lines()
            .collect();
        assert_eq!(names.len(), mesh.panels.len());
        if mesh.parts.len() == 6 {
            assert_eq!(names[0], "<front & \"tray\">%0A%25");
        }
        assert_eq!(get(&read, "FieldData", "unit").text(), "mm\n");
        for measure in Measure::OF_TRIANGLES {
            let figures = get(&read, "CellData", measure.name()).doubles();
            for (t, figure) in figures.into_iter().enumerate() {
                let triangle = Triangle::new(mesh.triangle_corners(t)).unwrap();
                let meant = measure.of(&triangle).unwrap();
                assert_eq!(figure.to_bits(), meant.to_bits());
            }
        }
        // Nothing is said of the surface where nothing is known of it.
        assert!(
            !read
                .keys()
                .any(|(_, name)| name == "parameters" || name == "proved_deviation")
        );
    }
}

/// Flat triangles: finite figures, at the bad end.
#[test]
fn flat_triangles_have_finite_figures() {
    let mesh = shapes::loose(3, vec![[0, 0, 1], [0, 1, 2]]);
    let mut bytes = Vec::new();
    write(&mesh, Format::Vtu, &options(), &mut bytes).unwrap();
    let read = read(&bytes);
    let of = |name: &str| get(&read, "CellData", name).doubles()[0];
    let names = ["minimum_angle", "maximum_angle", "aspect_ratio", "shape"];
    let bits = names.map(|name| of(name).to_bits());
    assert_eq!(bits, [0.0, 180.0, 1e30, 0.0].map(f64::to_bits));
}

fn made(text: &str) -> (PatchSet, Mesh) {
    let set = PatchSet::from_ron(text, "x").unwrap().set;
    let limits = Limits::new(0.1, None, None);
    let made = Meshed::with_evidence(&set, &limits, |_| true, |_| ()).unwrap();
    (set, made.mesh)
}

/// Principal curvatures by the textbook (do Carmo): -1/R twice on a sphere, seen
/// from outside; 0 and -1/R on a cylinder; on a torus -1/r and
/// -cos(t) / (R + r cos(t)), t from the outer circle.
#[test]
fn nodes_know_the_curvature_of_known_surfaces() {
    let (set, mesh) = made(r#"(patches: [(name: "ball", surface: Sphere(radius: 10))])"#);
    let nodes = Nodes::of(&set, &mesh).unwrap();
    assert_eq!(nodes.curvatures.len(), mesh.points.len());
    for curvatures in &nodes.curvatures {
        // A root of what cancels: half the digits.
        assert_relative_eq!(curvatures[0], -0.1, max_relative = 1e-5);
        assert_relative_eq!(curvatures[1], -0.1, max_relative = 1e-5);
    }
    let (set, mesh) =
        made(r#"(patches: [(name: "pipe", surface: Cylinder(radius: 20, height: 50))])"#);
    for [high, low] in Nodes::of(&set, &mesh).unwrap().curvatures {
        assert_relative_eq!(high, 0.0, epsilon = 1e-9);
        assert_relative_eq!(low, -0.05, max_relative = 1e-9);
    }
    let (set, mesh) = made(r#"(patches: [(name: "ring", surface: Torus(major: 50, minor: 20))])"#);
    let nodes = Nodes::of(&set, &mesh).unwrap();
    for ([high, low], p) in nodes.curvatures.iter().zip(&mesh.points) {
        let outward = p.x.hypot(p.y) - 50.0;
        let other = -(outward / 20.0) / (50.0 + outward);
        assert_relative_eq!(*low, other.min(-0.05), max_relative = 1e-8);
        assert_relative_eq!(*high, other.max(-0.05), epsilon = 1e-9);
    }
    let mut bare = mesh;
    bare.evidence = None;
    assert!(Nodes::of(&set, &bare).is_none());
}

/// The point of a node is that of its patch at its parameters.
#[test]
fn nodes_know_their_place() {
    let text = fs::read_to_string(Path::new(env!("CARGO_MANIFEST_DIR")).join("patches/teapot.ron"));
    let (set, mesh) = made(&text.unwrap());
    let nodes = Nodes::of(&set, &mesh).unwrap();
    for (k, point) in mesh.points.iter().enumerate() {
        let part = &mesh.parts[nodes.parts[k] as usize];
        let patch = set.patches().iter().find(|p| p.name == part.name).unwrap();
        let piece = &set.pieces()[patch.piece_at(nodes.places[k])];
        let [u, v] = [0, 1].map(|i| {
            let [low, high] = [piece.u, piece.v][i];
            (nodes.places[k][i] - low) / (high - low)
        });
        let off = (piece.surface.eval(u, v) - point).norm();
        assert!(off < 1e-6, "{off} off at {k}");
        assert!(nodes.curvatures[k].iter().all(|c| c.is_finite()));
    }
}

#[test]
fn bytes_follow_from_the_counts() {
    let (set, mesh) = made(r#"(patches: [(name: "ball", surface: Sphere(radius: 10))])"#);
    let nodes = Nodes::of(&set, &mesh).unwrap();
    let deviations = vec![0.0; mesh.triangles.len()];
    let mut bare = mesh.clone();
    bare.evidence = None;
    for mesh in [&mesh, &bare] {
        for surface in [
            SurfaceFigures::default(),
            SurfaceFigures {
                nodes: Some(&nodes),
                deviations: Some(&deviations),
            },
        ] {
            let options = WriteOptions {
                surface,
                ..options()
            };
            let mut bytes = Vec::new();
            write(mesh, Format::Vtu, &options, &mut bytes).unwrap();
            let counts = Counts {
                outline: mesh,
                points: mesh.points.len() as u64,
                vertices: mesh.vertices.len() as u64,
            };
            let said = bytes_of(&counts, Format::Vtu, &options);
            assert_eq!(said, Some(bytes.len() as u64));
            // Three fields, three of points, three of cells, seven measures, the mesh.
            let more = if surface.nodes.is_some() { 4 } else { 0 };
            let count = 20 + more + usize::from(mesh.evidence.is_some());
            assert_eq!(read(&bytes).len(), count);
        }
    }
}

fn run(arguments: &[&str]) -> (i32, String, String) {
    let output = Command::cargo_bin("chordwise")
        .unwrap()
        .args(arguments)
        .output()
        .unwrap();
    (
        output.status.code().unwrap(),
        String::from_utf8(output.stdout).unwrap(),
        String::from_utf8(output.stderr).unwrap(),
    )
}

fn shipped(name: &str) -> String {
    format!("{}/patches/{name}.ron", env!("CARGO_MANIFEST_DIR"))
}

/// Whatever is proved of a triangle is within what is proved of the mesh's chord;
/// the normals of nodes are of unit length.
#[test]
fn the_program_tells_solvers_what_it_knows() {
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join("quarter.vtu");
    let file = file.to_str().unwrap();
    let set = shipped("front_quarter");
    let (code, out, err) = run(&["tessellate", &set, "-o", file, "--format", "json"]);
    assert_eq!(code, 0, "{err}");
    let told: Value = serde_json::from_str(&out).unwrap();
    let read = read(&fs::read(file).unwrap());
    let deviations = get(&read, "CellData", "proved_deviation").doubles();
    assert_eq!(deviations.len() as u64, told["triangles"].as_u64().unwrap());
    assert!(deviations.iter().all(|d| (0.0..=0.1).contains(d)));
    let normals = get(&read, "PointData", "normal");
    assert_eq!(normals.components, 3);
    for n in normals.doubles().as_chunks::<3>().0 {
        assert_relative_eq!(Vector::from(*n).norm(), 1.0, max_relative = 1e-12);
    }
    let places = get(&read, "PointData", "parameters").doubles();
    assert_eq!(places.len() as u64, 2 * told["vertices"].as_u64().unwrap());
    let names = get(&read, "FieldData", "panel_names")
        .text()
        .lines()
        .count();
    assert_eq!(names as u64, told["panels"].as_u64().unwrap());
    let most = get(&read, "CellData", "panel").integers().into_iter().max();
    assert_eq!(most, Some(i32::try_from(names).unwrap() - 1));
    assert!(!read.contains_key(&("CellData".to_owned(), "corner_parameters".to_owned())));
    let (code, out, _) = run(&[
        "tessellate",
        &set,
        "-o",
        file,
        "--dry-run",
        "--format",
        "json",
    ]);
    assert_eq!(code, 0);
    let said: Value = serde_json::from_str(&out).unwrap();
    let (said, was) = (&said["written"]["bytes"], &told["written"]["bytes"]);
    assert_relative_eq!(
        said.as_f64().unwrap(),
        was.as_f64().unwrap(),
        max_relative = 0.2
    );
}

/// A solid a panel, with the facets of its patches; the same points as binary STL.
#[test]
fn solids_are_named_after_panels() {
    let mesh = shapes::case(Vector::new(4000.3, -800.7, 1200.1));
    let options = WriteOptions {
        solids: true,
        ..options()
    };
    let mut text = Vec::new();
    let written = write(&mesh, Format::Stl, &options, &mut text).unwrap();
    assert_eq!(written.bytes, text.len() as u64);
    let text = String::from_utf8(text).unwrap();
    let begun: Vec<&str> = text.lines().filter(|l| l.starts_with("solid")).collect();
    assert_eq!(begun, ["solid front%20tray", "solid lid"]);
    let ended: Vec<&str> = text.lines().filter(|l| l.starts_with("endsolid")).collect();
    assert_eq!(ended, ["endsolid front%20tray", "endsolid lid"]);
    let tray = text.split("endsolid").next().unwrap();
    assert_eq!(tray.matches("facet normal").count(), 10);
    // By another reader, which takes one solid at a time, and the binary form.
    let mut binary = Vec::new();
    let plain = WriteOptions {
        solids: false,
        ..options
    };
    let other = write(&mesh, Format::Stl, &plain, &mut binary).unwrap();
    assert_eq!(other.rounding.to_bits(), written.rounding.to_bits());
    let binary = stl_io::read_stl(&mut std::io::Cursor::new(&binary)).unwrap();
    let meant: Vec<_> = binary
        .faces
        .iter()
        .flat_map(|f| f.vertices.map(|v| binary.vertices[v].0.map(f32::to_bits)))
        .collect();
    let mut found = Vec::new();
    let (tray, lid) = text.split_once("solid lid\n").unwrap();
    for solid in [tray.to_owned(), format!("solid lid\n{lid}")] {
        let read = stl_io::read_stl(&mut std::io::Cursor::new(solid.as_bytes())).unwrap();
        let corners =
            |f: &stl_io::IndexedTriangle| f.vertices.map(|v| read.vertices[v].0.map(f32::to_bits));
        found.extend(read.faces.iter().flat_map(corners));
    }
    assert_eq!(found, meant);
    let far = shapes::case(Vector::new(2e7 + 0.1, 0.3, -2e7));
    let mut bytes = Vec::new();
    let error = write(&far, Format::Stl, &options, &mut bytes).unwrap_err();
    assert!(matches!(error, FormatError::Rounding { .. }) && bytes.is_empty());
}

#[test]
fn the_program_writes_solids_and_predicts_their_size() {
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join("quarter.stl");
    let file = file.to_str().unwrap();
    let set = shipped("front_quarter");
    let arguments = [
        "tessellate",
        &set,
        "-o",
        file,
        "--solids",
        "--format",
        "json",
    ];
    let (code, out, _) = run(&arguments);
    assert_eq!(code, 0);
    let told: Value = serde_json::from_str(&out).unwrap();
    let text = fs::read_to_string(file).unwrap();
    assert_eq!(text.lines().filter(|l| l.starts_with("solid ")).count(), 12);
    assert_eq!(
        text.len() as u64,
        told["written"]["bytes"].as_u64().unwrap()
    );
    let (_, out, _) = run(&[&arguments[..], &["--dry-run"]].concat());
    let said: Value = serde_json::from_str(&out).unwrap();
    let said = said["written"]["bytes"].as_f64().unwrap();
    assert_relative_eq!(said, text.len() as f64, max_relative = 0.2);
    let (code, _, err) = run(&["tessellate", &set, "-o", "x.ply", "--solids"]);
    assert_eq!(
        (
            code,
            err.contains("--solids: only stl has solids; write stl")
        ),
        (2, true)
    );
}

/// A closed set says its volume, and that it is inside out where it is.
#[test]
fn what_faces_inwards_is_told() {
    let folder = tempfile::tempdir().unwrap();
    let set = folder.path().join("ball.ron");
    let text = r#"(patches: [(name: "ball", flip: true, surface: Sphere(radius: 10))])"#;
    fs::write(&set, text).unwrap();
    let (set, file) = (set.to_str().unwrap(), folder.path().join("b.stl"));
    let file = file.to_str().unwrap();
    let (_, out, _) = run(&["tessellate", set, "-o", file]);
    assert!(
        out.contains("mm^3: it faces inwards, --orient turns it outwards"),
        "{out}"
    );
    let (_, out, _) = run(&["tessellate", set, "-o", file, "--orient"]);
    assert!(
        out.contains(", volume 4") && !out.contains("inwards"),
        "{out}"
    );
}
