//! Patches in another order in the file: the same triangles with the same bits in
//! every format, the same seam report, the same pictures. Open loops begin with the
//! patch that stands first, and are listed in that order.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use std::collections::BTreeMap;
use std::fs;
use std::path::Path;
use std::process::Command;

use chordwise::patch_set::SetFile;

/// A set with its patches backwards, and with every third of them first.
fn orders(name: &str) -> Vec<(&'static str, SetFile)> {
    let path = format!("{}/patches/{name}.ron", env!("CARGO_MANIFEST_DIR"));
    let file = SetFile::from_ron(&fs::read_to_string(path).unwrap(), name).unwrap();
    let mut backwards = file.clone();
    backwards.patches.reverse();
    let mut dealt = file.clone();
    let numbered = dealt.patches.drain(..).enumerate();
    let (mut last, mut first): (Vec<_>, Vec<_>) = numbered.partition(|(k, _)| k % 3 == 0);
    first.append(&mut last);
    dealt.patches = first.into_iter().map(|(_, patch)| patch).collect();
    vec![
        ("as it is", file),
        ("backwards", backwards),
        ("dealt", dealt),
    ]
}

/// How the reader wants it.
fn written() -> ron::Options {
    use ron::extensions::Extensions;
    ron::Options::default()
        .with_default_extension(Extensions::IMPLICIT_SOME)
        .with_default_extension(Extensions::UNWRAP_VARIANT_NEWTYPES)
}

fn run(folder: &Path, line: &str) -> String {
    let output = Command::new(assert_cmd::cargo::cargo_bin!("chordwise"))
        .current_dir(folder)
        .args(line.split(' '))
        .output()
        .unwrap();
    let said = String::from_utf8_lossy(&output.stderr);
    assert_ne!(output.status.code(), Some(2), "{line}: {said}");
    String::from_utf8(output.stdout).unwrap()
}

/// The records of an STL file, sorted.
fn stl(bytes: &[u8]) -> Vec<Vec<u8>> {
    let mut records: Vec<Vec<u8>> = bytes[84..].chunks(50).map(<[u8]>::to_vec).collect();
    records.sort();
    records
}

/// The triangles of an OBJ file by patch, corners as they are written.
fn obj(bytes: &[u8]) -> BTreeMap<String, Vec<Vec<String>>> {
    let text = str::from_utf8(bytes).unwrap();
    let (mut points, mut patch, mut found) = (Vec::new(), String::new(), BTreeMap::new());
    for line in text.lines() {
        match line.split_once(' ') {
            Some(("v", point)) => points.push(point.to_owned()),
            Some(("g", name)) => name.clone_into(&mut patch),
            Some(("f", corners)) => {
                let corners = corners.split(' ').map(|corner| {
                    let index: usize = corner.split('/').next().unwrap().parse().unwrap();
                    points[index - 1].clone()
                });
                let of: &mut Vec<Vec<String>> = found.entry(patch.clone()).or_default();
                of.push(corners.collect());
            }
            _ => {}
        }
    }
    found
}

/// The corners of all triangles of a PLY file with doubles and indexed faces, in
/// bits, sorted.
fn ply(bytes: &[u8]) -> Vec<Vec<u8>> {
    let mark = b"end_header\n";
    let at = bytes.windows(mark.len()).position(|w| w == mark).unwrap() + mark.len();
    let head = str::from_utf8(&bytes[..at]).unwrap();
    let count = |what: &str| -> usize {
        let line = head.lines().find_map(|l| l.strip_prefix(what)).unwrap();
        line.trim().parse().unwrap()
    };
    let (vertices, faces) = (count("element vertex"), count("element face"));
    let body = &bytes[at..];
    let mut found: Vec<Vec<u8>> = (body[24 * vertices..].chunks(13).take(faces))
        .map(|face| {
            let index = |k: usize| {
                let four = face[1 + 4 * k..5 + 4 * k].try_into().unwrap();
                usize::try_from(u32::from_le_bytes(four)).unwrap()
            };
            (0..3)
                .flat_map(|k| &body[24 * index(k)..24 * index(k) + 24])
                .copied()
                .collect()
        })
        .collect();
    found.sort();
    found
}

/// The corners of all triangles of a GLB file, in bits, sorted.
fn glb(bytes: &[u8]) -> Vec<[[u32; 3]; 3]> {
    let file = gltf::Gltf::from_slice(bytes).unwrap();
    let blob = file.blob.as_deref();
    let mut found = Vec::new();
    for primitive in file
        .meshes()
        .flat_map(|m| m.primitives().collect::<Vec<_>>())
    {
        let reader = primitive.reader(|_| blob);
        let points: Vec<[f32; 3]> = reader.read_positions().unwrap().collect();
        let indices: Vec<u32> = reader.read_indices().unwrap().into_u32().collect();
        for three in indices.chunks(3) {
            found.push(
                [0, 1, 2].map(|k| points[usize::try_from(three[k]).unwrap()].map(f32::to_bits)),
            );
        }
    }
    found.sort_unstable();
    found
}

/// A seam report and its open loops as sets of edges with their lengths.
fn report(text: &str) -> (serde_json::Value, BTreeMap<Vec<String>, f64>) {
    let mut all: serde_json::Value = serde_json::from_str(text).unwrap();
    let loops = all["open_loops"].take();
    let found = loops.as_array().unwrap().iter().map(|one| {
        let edges = one["edges"].as_array().unwrap().iter();
        let mut edges: Vec<String> = edges.map(ToString::to_string).collect();
        edges.sort();
        (edges, one["length"].as_f64().unwrap())
    });
    let found = found.collect();
    // A sum in another order.
    all["summary"]["open_length"].take();
    (all, found)
}

#[test]
fn files_reports_and_pictures_keep_to_the_patches_and_not_to_their_order() {
    let folder = tempfile::tempdir().unwrap();
    let path = |name: &str| folder.path().join(name);
    for name in ["teapot", "front_quarter", "t_junction"] {
        let mut first: Option<(_, _, Vec<image::RgbImage>)> = None;
        for (order, file) in orders(name) {
            let text = written().to_string(&file).unwrap();
            fs::write(path("set.ron"), text).unwrap();
            let mesh = |file: &str, more: &str| {
                let chord = if name == "teapot" { "0.02" } else { "0.5" };
                run(
                    folder.path(),
                    &format!("tessellate set.ron -o {file} --chord {chord}{more}"),
                );
                fs::read(path(file)).unwrap()
            };
            let files = (
                stl(&mesh("a.stl", "")),
                obj(&mesh("a.obj", "")),
                ply(&mesh("a.ply", "")),
                glb(&mesh("a.glb", " --layout indexed")),
            );
            assert!(files.0.len() > 2);
            let seams = report(&run(folder.path(), "seams set.ron --format json"));
            let pictures = ["reflection", "mean", "plain"].map(|shading| {
                let line =
                    format!("draw set.ron -o a.png --shading {shading} --size 400x250 --seams");
                run(folder.path(), &line);
                image::open(path("a.png")).unwrap().to_rgb8()
            });
            let now = (files, seams, pictures.to_vec());
            let Some(first) = &first else {
                first = Some(now);
                continue;
            };
            assert!(now.0 == first.0, "{name} {order}: other triangles");
            assert!(now.1.0 == first.1.0, "{name} {order}: another seam report");
            assert!(now.1.1.keys().eq(first.1.1.keys()), "{name} {order}: loops");
            for (a, b) in now.1.1.values().zip(first.1.1.values()) {
                assert!((a - b).abs() <= 1e-12 * b, "{name} {order}: {a} {b}");
            }
            for (k, (a, b)) in now.2.iter().zip(&first.2).enumerate() {
                // Of two normals at a seam within the tangent tolerance the first
                // patch's is kept, by which plain material is lit.
                let most = if k == 2 { 2 } else { 0 };
                let worst = a.iter().zip(b.iter()).map(|(a, b)| a.abs_diff(*b)).max();
                assert!(
                    worst.unwrap() <= most,
                    "{name} {order}: picture {k}, {worst:?}"
                );
            }
        }
    }
}
