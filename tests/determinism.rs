//! The same set gives the same bytes: at any number of threads, again, and
//! along seams whatever else is in the file and in whatever order.
#![allow(clippy::unwrap_used, reason = "a panic is how a test fails")]
#![allow(
    clippy::cast_precision_loss,
    clippy::cast_possible_truncation,
    reason = "counts far below 2^52"
)]

use std::collections::BTreeSet;

use chordwise::demo::write_panels;
use chordwise::format::{Format, Layout, WriteOptions, write};
use chordwise::mesh::{Mesh, Meshed};
use chordwise::patch_set::{PatchSet, SetFile};
use chordwise::sampling::{Limits, Samples};
use chordwise::scalar::{Point, Tolerance};
use chordwise::topology::Topology;

mod refute;
use refute::{meshed, shipped, shipped_set};

type Bits = [u64; 3];

fn bits(p: &Point) -> Bits {
    [p.x, p.y, p.z].map(f64::to_bits)
}

/// Every format in its own layout, and strips where there are any.
fn files(mesh: &Mesh, chord: f64) -> Vec<Vec<u8>> {
    let mut files = Vec::new();
    for (format, layout) in [
        (Format::Stl, None),
        (Format::Obj, None),
        (Format::Ply, None),
        (Format::Glb, None),
        (Format::Glb, Some(Layout::Strips)),
        (Format::Vtu, None),
    ] {
        let options = WriteOptions {
            layout,
            ..WriteOptions::new(Tolerance::new(chord).unwrap())
        };
        let mut bytes = Vec::new();
        write(mesh, format, &options, &mut bytes).unwrap();
        files.push(bytes);
    }
    files
}

fn at_threads(threads: usize, set: &PatchSet, chord: f64) -> (Vec<Vec<u8>>, String) {
    let pool = rayon::ThreadPoolBuilder::new()
        .num_threads(threads)
        .build()
        .unwrap();
    pool.install(|| {
        let made = meshed(set, chord);
        (files(&made.mesh, chord), format!("{:?}", made.deviation))
    })
}

#[test]
fn the_same_bytes_at_any_number_of_threads() {
    for (name, set) in shipped() {
        let chord = set.tolerances().chord.get() * if name == "front_quarter" { 10.0 } else { 2.0 };
        let first = at_threads(1, &set, chord);
        assert!(first.0.iter().all(|bytes| bytes.len() > 100));
        for threads in [2, 8] {
            let again = at_threads(threads, &set, chord);
            assert!(first == again, "{name}: {threads} threads give other bytes");
        }
    }
}

/// Places on the seams of a set, whichever patch they belong to.
fn border(set: &PatchSet, limits: &Limits) -> BTreeSet<Bits> {
    let topology = Topology::build(set).unwrap();
    let samples = Samples::new(set, &topology, limits).unwrap();
    samples.points().iter().map(bits).collect()
}

#[test]
fn seams_do_not_depend_on_the_order_in_the_file() {
    let folder = concat!(env!("CARGO_MANIFEST_DIR"), "/patches");
    for name in [
        "teapot",
        "front_quarter",
        "box",
        "t_junction",
        "degree_mismatch",
    ] {
        let text = std::fs::read_to_string(format!("{folder}/{name}.ron")).unwrap();
        let file = SetFile::from_ron(&text, name).unwrap();
        let set = PatchSet::build(file.clone()).unwrap().set;
        let limits = Limits::new(set.tolerances().chord.get(), None, None);
        let before = border(&set, &limits);
        assert!(before.len() >= 8);
        let mut backwards = file.clone();
        backwards.patches.reverse();
        let mut dealt = file.clone();
        let (mut left, mut right) = (Vec::new(), Vec::new());
        for (k, patch) in dealt.patches.drain(..).enumerate() {
            if k % 3 == 0 { &mut left } else { &mut right }.push(patch);
        }
        right.append(&mut left);
        dealt.patches = right;
        for (order, file) in [("backwards", backwards), ("dealt", dealt)] {
            let set = PatchSet::build(file).unwrap().set;
            let after = border(&set, &limits);
            let lost = before.difference(&after).count();
            let new = after.difference(&before).count();
            assert_eq!(
                (lost, new),
                (0, 0),
                "{name} {order}: {} places",
                before.len()
            );
        }
    }
}

/// The mesh's whole points, and not only the seams', are the same patch by
/// patch in another order.
#[test]
fn patches_do_not_depend_on_the_order_in_the_file() {
    let folder = concat!(env!("CARGO_MANIFEST_DIR"), "/patches");
    let text = std::fs::read_to_string(format!("{folder}/teapot.ron")).unwrap();
    let file = SetFile::from_ron(&text, "teapot").unwrap();
    let mut backwards = file.clone();
    backwards.patches.reverse();
    let triangles = |file: SetFile| {
        let set = PatchSet::build(file).unwrap().set;
        let made = meshed(&set, 0.01);
        let corners = |t| made.mesh.triangle_corners(t).map(|p| bits(&p));
        (0..made.mesh.triangles.len())
            .map(corners)
            .collect::<BTreeSet<_>>()
    };
    assert!(triangles(file) == triangles(backwards));
}

/// Panels made alone fit together: on the seams they have the very vertices of
/// the whole.
#[test]
fn panels_made_alone_have_the_vertices_of_the_whole() {
    for name in ["teapot", "front_quarter", "box"] {
        let set = shipped_set(name);
        let chord = set.tolerances().chord.get();
        let limits = Limits::new(chord, None, None);
        let whole = meshed(&set, chord);
        let mut alone_triangles = 0;
        for (index, panel) in set.panels().iter().enumerate() {
            let wanted = |piece: chordwise::patch_set::PieceId| {
                set.patches()[set.pieces()[piece.index()].patch.index()]
                    .panel
                    .index()
                    == index
            };
            let alone = Meshed::new(&set, &limits, wanted, |_| ()).unwrap();
            let corners = |made: &Meshed, t| made.mesh.triangle_corners(t).map(|p| bits(&p));
            let of_whole: Vec<[Bits; 3]> = whole
                .mesh
                .parts
                .iter()
                .filter(|part| part.panel == index)
                .flat_map(|part| part.triangles.clone())
                .map(|t| corners(&whole, t))
                .collect();
            let own: Vec<[Bits; 3]> = (0..alone.mesh.triangles.len())
                .map(|t| corners(&alone, t))
                .collect();
            assert!(own == of_whole, "{name}: panel {} differs", panel.name);
            alone_triangles += own.len();
        }
        assert_eq!(alone_triangles, whole.mesh.triangles.len());
    }
}

/// A set with one patch left out keeps the vertices of every seam the patch
/// does not touch.
#[test]
fn a_patch_left_out_changes_only_its_own_seams() {
    let folder = concat!(env!("CARGO_MANIFEST_DIR"), "/patches");
    let text = std::fs::read_to_string(format!("{folder}/teapot.ron")).unwrap();
    let file = SetFile::from_ron(&text, "teapot").unwrap();
    let whole = PatchSet::build(file.clone()).unwrap().set;
    let limits = Limits::new(0.01, None, None);
    let before = border(&whole, &limits);
    for left_out in [0, 7, 19, 31] {
        let mut file = file.clone();
        let gone = file.patches.remove(left_out).name;
        let set = PatchSet::build(file).unwrap().set;
        let after = border(&set, &limits);
        let new = after.difference(&before).count();
        // What it shared may be sampled for one side now, at places of its own.
        let topology = Topology::build(&set).unwrap();
        let samples = Samples::new(&set, &topology, &limits).unwrap();
        let open: usize = topology
            .seams()
            .iter()
            .zip(samples.runs())
            .filter(|(seam, _)| seam.spans.len() == 1)
            .map(|(_, run)| run.points.len())
            .sum();
        assert!(
            new <= open,
            "without {gone}: {new} new places, {open} on open seams"
        );
        assert!(before.intersection(&after).count() * 10 > before.len() * 8);
    }
}

#[test]
fn twice_is_once() {
    let mut text = Vec::new();
    write_panels(100, &mut text).unwrap();
    let text = String::from_utf8(text).unwrap();
    let run = || {
        let set = PatchSet::from_ron(&text, "panels").unwrap().set;
        let made = meshed(&set, 0.1);
        files(&made.mesh, 0.1)
    };
    assert!(run() == run());
}
