//! A changed panel leaves the others alone: whatever shares no changed seam
//! with it is meshed to the same vertices, the same indices and the same bytes.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]

use std::collections::{BTreeMap, BTreeSet};
use std::path::Path;
use std::process::Command;

use chordwise::mesh::{Mesh, Meshed};
use chordwise::patch_set::PatchSet;
use chordwise::sampling::Limits;
use chordwise::sizing::{SizedMesh, Sizing};

/// A patch's part of a mesh, from its own point of view: the points of its
/// triangles to the bit, in the order they are met, and its triangles by them.
type Part = (Vec<[u64; 3]>, Vec<[usize; 3]>);

fn parts(mesh: &Mesh) -> BTreeMap<String, Part> {
    let part = |range: std::ops::Range<usize>| {
        let (mut points, mut known) = (Vec::new(), BTreeMap::new());
        let triangles = range.map(|t| {
            mesh.triangle_points(t).map(|p| {
                *known.entry(p).or_insert_with(|| {
                    let place = mesh.points[p as usize];
                    points.push([place.x, place.y, place.z].map(f64::to_bits));
                    points.len() - 1
                })
            })
        });
        let triangles = triangles.collect();
        (points, triangles)
    };
    let named = mesh.parts.iter();
    named
        .map(|p| (p.name.clone(), part(p.triangles.clone())))
        .collect()
}

fn meshed(text: &str) -> BTreeMap<String, Part> {
    let set = PatchSet::from_ron(text, "x").unwrap().set;
    let made = Meshed::new(&set, &Limits::new(0.1, None, None), |_| true, |_| ()).unwrap();
    parts(&made.mesh)
}

/// The text with one control point of a patch moved: the `index`-th after the
/// patch's name.
fn moved(text: &str, patch: &str, index: usize, by: [f64; 3]) -> String {
    let at = text.find(&format!("(name: \"{patch}\"")).unwrap();
    let net = at + text[at..].find("net: [").unwrap();
    let mut start = net;
    for _ in 0..=index {
        start += 1 + text[start + 1..].find('(').unwrap();
    }
    let end = start + text[start..].find(')').unwrap() + 1;
    let numbers: Vec<f64> = text[start + 1..end - 1]
        .split(',')
        .map(|x| x.trim().parse().unwrap())
        .collect();
    let [x, y, z]: [f64; 3] = std::array::from_fn(|k| numbers[k] + by[k]);
    format!("{}({x:?}, {y:?}, {z:?}){}", &text[..start], &text[end..])
}

/// Patches whose part is another.
fn changed(old: &BTreeMap<String, Part>, new: &BTreeMap<String, Part>) -> BTreeSet<String> {
    assert!(old.keys().eq(new.keys()));
    let other = old.keys().filter(|name| old[*name] != new[*name]);
    other.cloned().collect()
}

/// `sill/3` stands apart from `sill/2` by its gap: nothing else is touched. A
/// point inside a net touches its patch only.
#[test]
fn the_front_quarter_keeps_what_was_not_changed() {
    let path = concat!(env!("CARGO_MANIFEST_DIR"), "/patches/front_quarter.ron");
    let text = std::fs::read_to_string(path).unwrap();
    let old = meshed(&text);
    assert_eq!(old.len(), 119);
    // Twenty-one points: the ninth is of the second row, off the border.
    let new = meshed(&moved(&text, "sill/3", 9, [0.0, 1.5, 0.0]));
    assert_eq!(changed(&old, &new), BTreeSet::from(["sill/3".to_owned()]));
    // The same mesh again, and one of a patch in the midst of others: a point
    // in the middle of its net, which no seam has.
    assert!(changed(&old, &meshed(&text)).is_empty());
    let new = meshed(&moved(&text, "bumper/waist 1", 5, [1.0, 0.0, 0.0]));
    let touched = changed(&old, &new);
    assert!(touched.contains("bumper/waist 1"), "{touched:?}");
    for name in &touched {
        assert!(name.starts_with("bumper/"), "{touched:?}");
    }
    // A corner moved by less than the gap, so that it stays joined: the runs it
    // ends change, and with them who shares these, and nobody else.
    let new = meshed(&moved(&text, "bumper/lower 1", 3, [0.0, 0.0, 0.004]));
    let touched = changed(&old, &new);
    let all = old
        .keys()
        .filter(|name| name.starts_with("bumper/"))
        .count();
    assert!(touched.len() > 1 && touched.len() < all / 2, "{touched:?}");
    for name in &touched {
        assert!(name.starts_with("bumper/"), "{touched:?}");
    }
}

/// Sized meshes: a region is joined panel by panel, so a panel that shares no changed
/// seam keeps its nodes and elements too.
#[test]
fn sized_meshes_keep_panels_that_were_not_changed() {
    let path = concat!(env!("CARGO_MANIFEST_DIR"), "/patches/front_quarter.ron");
    let text = std::fs::read_to_string(path).unwrap();
    let meshed = |text: &str| {
        let set = PatchSet::from_ron(text, "x").unwrap().set;
        let made = SizedMesh::new(&set, &Sizing::new(25.0), |_| true, |_| ()).unwrap();
        parts(&made.meshed.mesh)
    };
    let old = meshed(&text);
    assert!(changed(&old, &meshed(&text)).is_empty());
    let new = meshed(&moved(&text, "sill/3", 9, [0.0, 1.5, 0.0]));
    let touched = changed(&old, &new);
    assert!(touched.contains("sill/3"), "{touched:?}");
    for name in &touched {
        assert!(name.starts_with("sill/"), "{touched:?}");
    }
}

/// The corners of every element of a panel, by the names of its nodes (panel and
/// number), with their points to the bit: what a file for solvers says.
fn elements(folder: &Path, text: &str, size: Option<&str>) -> BTreeMap<(String, i32), Vec<Node>> {
    std::fs::write(folder.join("set.ron"), text).unwrap();
    let mut arguments = vec!["tessellate", "set.ron", "-o", "set.vtu"];
    arguments.extend(size.iter().flat_map(|size| ["--size", *size]));
    chordwise(folder, &arguments);
    let bytes = std::fs::read(folder.join("set.vtu")).unwrap();
    let mark = b"<AppendedData encoding=\"raw\">\n_";
    let at = bytes.windows(mark.len()).position(|w| w == mark).unwrap();
    let head = std::str::from_utf8(&bytes[..at]).unwrap();
    let data = &bytes[at + mark.len()..];
    let array = |place: &str, name: &str| -> &[u8] {
        let (_, after) = head.split_once(&format!("<{place}>")).unwrap();
        let (_, after) = after.split_once(&format!("Name=\"{name}\"")).unwrap();
        let (_, after) = after.split_once("offset=\"").unwrap();
        let offset: usize = after.split('"').next().unwrap().parse().unwrap();
        let length = u64::from_le_bytes(data[offset..offset + 8].try_into().unwrap());
        &data[offset + 8..][..usize::try_from(length).unwrap()]
    };
    let numbers = |place: &str, name: &str| -> Vec<i32> {
        let (all, _) = array(place, name).as_chunks::<4>();
        all.iter().map(|b| i32::from_le_bytes(*b)).collect()
    };
    let index = |number: i32| usize::try_from(number).unwrap();
    let names = std::str::from_utf8(array("FieldData", "panel_names")).unwrap();
    let names: Vec<&str> = names.lines().collect();
    let (panels, nodes) = (numbers("PointData", "panel"), numbers("PointData", "node"));
    let places = array("Points", "points");
    let node = |point: &i32| {
        let point = index(*point);
        let place = places[24 * point..24 * point + 24].to_vec();
        (names[index(panels[point])].to_owned(), nodes[point], place)
    };
    let corners = numbers("Cells", "connectivity");
    let own = numbers("CellData", "panel").into_iter();
    let own = own.zip(numbers("CellData", "element"));
    own.zip(corners.as_chunks::<3>().0)
        .map(|((panel, element), corners)| {
            let name = names[index(panel)].to_owned();
            ((name, element), corners.iter().map(node).collect())
        })
        .collect()
}

/// A node by its panel and number, and where it stands.
type Node = (String, i32, Vec<u8>);

/// A changed patch in the fourth panel: elements and nodes of others keep the names
/// they had, though most are elsewhere in the file.
#[test]
fn elements_and_nodes_keep_their_numbers_in_panels_that_were_not_changed() {
    let path = concat!(env!("CARGO_MANIFEST_DIR"), "/patches/front_quarter.ron");
    let text = std::fs::read_to_string(path).unwrap();
    let other = moved(&text, "sill/3", 9, [0.0, 1.5, 0.0]);
    let folder = tempfile::tempdir().unwrap();
    for size in [None, Some("25")] {
        let old = elements(folder.path(), &text, size);
        let new = elements(folder.path(), &other, size);
        let mut kept = 0;
        for (name, corners) in &old {
            if name.0 != "sill" {
                assert!(new.get(name) == Some(corners), "{name:?}");
                kept += 1;
            }
        }
        assert!(kept > 1000, "{kept}");
        let sill = |all: &BTreeMap<(String, i32), Vec<Node>>| {
            let own = all.iter().filter(|((panel, _), _)| panel == "sill");
            own.map(|(_, corners)| corners.clone()).collect::<Vec<_>>()
        };
        assert!(sill(&old) != sill(&new));
    }
}

fn chordwise(folder: &Path, arguments: &[&str]) {
    let run = Command::new(env!("CARGO_BIN_EXE_chordwise"))
        .current_dir(folder)
        .args(arguments)
        .output()
        .unwrap();
    assert!(
        run.status.success(),
        "{}",
        String::from_utf8_lossy(&run.stderr)
    );
}

/// Ten thousand patches, one panel of them changed: others, meshed one by one,
/// have the bytes they had.
#[test]
fn panels_of_ten_thousand_patches_keep_their_bytes() {
    let folder = tempfile::tempdir().unwrap();
    let folder = folder.path();
    chordwise(folder, &["demo", "--panels", "10000", "-o", "old.ron"]);
    let text = std::fs::read_to_string(folder.join("old.ron")).unwrap();
    let set = PatchSet::from_ron(&text, "old").unwrap().set;
    // A patch in the midst of its panel, a point in the midst of its net.
    let panel = &set.panels()[set.panels().len() / 2];
    let patch = &set.patches()[panel.patches[panel.patches.len() / 2].index()];
    let new = moved(&text, &patch.name, 5, [0.0, 0.0, 0.02]);
    assert_ne!(new, text);
    std::fs::write(folder.join("new.ron"), &new).unwrap();
    let others = set.panels().iter().map(|p| p.name.as_str());
    let near: Vec<&str> = {
        let all: Vec<&str> = others.collect();
        let at = all.iter().position(|name| *name == panel.name).unwrap();
        // Its neighbours in the file, and one from afar.
        [at - 1, at + 1, 0].map(|k| all[k]).to_vec()
    };
    for name in near {
        for format in ["obj", "glb", "vtu"] {
            let bytes = ["old", "new"].map(|which| {
                let (set, mesh) = (format!("{which}.ron"), format!("{which}.{format}"));
                chordwise(folder, &["tessellate", &set, "-o", &mesh, "--panel", name]);
                std::fs::read(folder.join(mesh)).unwrap()
            });
            assert!(bytes[0] == bytes[1], "{name} {format}");
        }
    }
}
