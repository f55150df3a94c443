//! Nodes for lines and points beside the mesh.
//!
//! A node a group, under it one a kind, with a primitive a run (modes 0, 1 and 3
//! of glTF 2.0). Their colour shines by itself, since lines have no normals. The
//! points stand in a buffer view of their own behind all others.

use serde_json::{Value, json};

use super::TRIPLE;
use super::document::{ARRAY_BUFFER, FLOAT, accessor};
use crate::format::rounding::Rounding;
use crate::format::{Overlay, Stroke};

/// The arrays of a document that overlays add to.
pub(super) struct Lists<'a> {
    pub(super) nodes: &'a mut Vec<Value>,
    pub(super) meshes: &'a mut Vec<Value>,
    pub(super) materials: &'a mut Vec<Value>,
    pub(super) accessors: &'a mut Vec<Value>,
    pub(super) views: &'a mut Vec<Value>,
}

/// All points of overlays in the order of the file.
pub(super) fn points(overlays: &[Overlay]) -> impl Iterator<Item = &crate::scalar::Point> {
    overlays.iter().flat_map(|o| o.runs.iter().flatten())
}

/// Adds the nodes; returns those of the groups. `start` is the byte at which the
/// points begin.
pub(super) fn add(
    overlays: &[Overlay],
    rounding: &Rounding,
    start: u64,
    lists: &mut Lists<'_>,
) -> Vec<usize> {
    let count = points(overlays).count() as u64;
    if count == 0 {
        return Vec::new();
    }
    let view = lists.views.len();
    lists.views.push(json!({
        "buffer": 0, "byteOffset": start, "byteLength": TRIPLE * count,
        "byteStride": TRIPLE, "target": ARRAY_BUFFER,
    }));
    let mut groups: Vec<(&str, Vec<usize>)> = Vec::new();
    let mut first = 0;
    for overlay in overlays {
        let mut primitives = Vec::new();
        for run in overlay.runs.iter().filter(|run| !run.is_empty()) {
            let range = first..first + run.len();
            first = range.end;
            let (mut low, mut high) = ([f32::INFINITY; 3], [f32::NEG_INFINITY; 3]);
            for point in run {
                for (i, c) in rounding.singles(point).into_iter().enumerate() {
                    low[i] = low[i].min(c);
                    high[i] = high[i].max(c);
                }
            }
            let mut positions = accessor(view, TRIPLE, &range, FLOAT, "VEC3");
            positions["min"] = json!(low);
            positions["max"] = json!(high);
            primitives.push(json!({
                "attributes": {"POSITION": lists.accessors.len()},
                "material": lists.materials.len(),
                "mode": match overlay.stroke {
                    Stroke::Points => 0,
                    Stroke::Segments => 1,
                    Stroke::Strip => 3,
                },
            }));
            lists.accessors.push(positions);
        }
        if primitives.is_empty() {
            continue;
        }
        lists.materials.push(json!({
            "name": format!("{} {}", overlay.group, overlay.name),
            "emissiveFactor": overlay.colour,
            "pbrMetallicRoughness": {
                "baseColorFactor": [0.0, 0.0, 0.0, 1.0],
                "metallicFactor": 0.0,
            },
        }));
        let node = lists.nodes.len();
        lists
            .nodes
            .push(json!({"name": overlay.name, "mesh": lists.meshes.len()}));
        lists
            .meshes
            .push(json!({"name": overlay.name, "primitives": primitives}));
        match groups.iter_mut().find(|g| g.0 == overlay.group) {
            Some(group) => group.1.push(node),
            None => groups.push((overlay.group, vec![node])),
        }
    }
    groups
        .into_iter()
        .map(|(name, children)| {
            lists
                .nodes
                .push(json!({"name": name, "children": children}));
            lists.nodes.len() - 1
        })
        .collect()
}
