//! What tries to refute the tool: distances and samples by code of its own,
//! which knows of a surface only how to evaluate it.
#![allow(dead_code, reason = "each test file uses a part of it")]

pub(crate) mod atlas;
pub(crate) mod chance;
pub(crate) mod patches;
pub(crate) mod soup;
pub(crate) mod verdict;

use chordwise::mesh::Meshed;
use chordwise::patch_set::PatchSet;
use chordwise::sampling::Limits;

/// Every shipped set: its file name and itself.
pub(crate) fn shipped() -> Vec<(String, PatchSet)> {
    let folder = concat!(env!("CARGO_MANIFEST_DIR"), "/patches");
    let mut paths: Vec<_> = std::fs::read_dir(folder)
        .unwrap()
        .map(|entry| entry.unwrap().path())
        .filter(|path| path.extension().is_some_and(|e| e == "ron"))
        .collect();
    paths.sort();
    assert!(paths.len() > 20, "the sets are there");
    paths
        .iter()
        .map(|path| {
            let name = path.file_stem().unwrap().to_string_lossy().into_owned();
            (name, PatchSet::read(path).unwrap().set)
        })
        .collect()
}

/// One shipped set by its file name.
pub(crate) fn shipped_set(name: &str) -> PatchSet {
    let folder = concat!(env!("CARGO_MANIFEST_DIR"), "/patches");
    PatchSet::read(format!("{folder}/{name}.ron")).unwrap().set
}

/// The whole set meshed at a chord.
pub(crate) fn meshed(set: &PatchSet, chord: f64) -> Meshed {
    Meshed::new(set, &Limits::new(chord, None, None), |_| true, |_| ()).unwrap()
}
