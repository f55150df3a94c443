//! The JSON chunk.

use std::ops::Range;

use serde_json::{Value, json};

use super::overlays;
use super::panel::{Panel, Streams};
use super::{INDEX, TRIPLE};
use crate::format::rounding::{Rounding, single};
use crate::format::{Layout, Overlay};
use crate::mesh::Mesh;

// Numbers that the standard gives a meaning.
const TRIANGLES: u32 = 4;
const TRIANGLE_STRIP: u32 = 5;
const UNSIGNED_INT: u32 = 5125;
pub(super) const FLOAT: u32 = 5126;
pub(super) const ARRAY_BUFFER: u32 = 34962;
const ELEMENT_ARRAY_BUFFER: u32 = 34963;

/// The JSON chunk under construction.
pub(super) struct Document(Value);

impl Document {
    pub(super) fn of(
        mesh: &Mesh,
        layout: Layout,
        streams: &Streams<'_>,
        rounding: &Rounding,
        [meshed, binary]: [u64; 2],
        overlays: &[Overlay],
    ) -> Self {
        let indexed = layout != Layout::Triangles;
        let triples = TRIPLE * streams.vertices.len() as u64;
        let mut views = vec![
            json!({"buffer": 0, "byteOffset": 0, "byteLength": triples, "byteStride": TRIPLE, "target": ARRAY_BUFFER}),
            json!({"buffer": 0, "byteOffset": triples, "byteLength": triples, "byteStride": TRIPLE, "target": ARRAY_BUFFER}),
        ];
        if indexed {
            views.push(json!({"buffer": 0, "byteOffset": 2 * triples, "byteLength": meshed - 2 * triples, "target": ELEMENT_ARRAY_BUFFER}));
        }
        let mut accessors = Vec::new();
        let mut meshes = Vec::new();
        let mut nodes = Vec::new();
        for panel in &streams.panels {
            let first = accessors.len();
            accessors.extend(vertex_accessors(mesh, streams, panel, rounding));
            let mut primitive = json!({
                "attributes": {"POSITION": first, "NORMAL": first + 1},
                "material": 0,
                "mode": if layout == Layout::Strips { TRIANGLE_STRIP } else { TRIANGLES },
            });
            if indexed {
                accessors.push(accessor(2, INDEX, &panel.indices, UNSIGNED_INT, "SCALAR"));
                primitive["indices"] = json!(first + 2);
            }
            let patches: Vec<Value> = panel
                .patches
                .iter()
                .map(|(name, range)| json!({"name": name, "first": range.start, "count": range.len()}))
                .collect();
            nodes.push(json!({"name": panel.name, "mesh": meshes.len()}));
            meshes.push(json!({
                "name": panel.name,
                "primitives": [primitive],
                "extras": {"patches": patches},
            }));
        }
        let mut materials = vec![json!({
            "name": "body",
            "doubleSided": true,
            "pbrMetallicRoughness": {
                "baseColorFactor": [0.6, 0.6, 0.6, 1.0],
                "metallicFactor": 0.0,
                "roughnessFactor": 0.5,
            },
        })];
        let mut children: Vec<usize> = (0..nodes.len()).collect();
        children.extend(overlays::add(
            overlays,
            rounding,
            meshed,
            &mut overlays::Lists {
                nodes: &mut nodes,
                meshes: &mut meshes,
                materials: &mut materials,
                accessors: &mut accessors,
                views: &mut views,
            },
        ));
        let root = place(mesh, &mut nodes, children, rounding);
        Self(json!({
            "asset": {
                "version": "2.0",
                "generator": format!("chordwise {}", env!("CARGO_PKG_VERSION")),
            },
            "scene": 0,
            "scenes": [{"name": mesh.name, "nodes": [root]}],
            "nodes": nodes,
            "meshes": meshes,
            "materials": materials,
            "accessors": accessors,
            "bufferViews": views,
            "buffers": [{"byteLength": binary}],
        }))
    }

    /// The text, filled with spaces to a multiple of four bytes.
    pub(super) fn padded(self) -> Vec<u8> {
        let mut text = self.0.to_string().into_bytes();
        text.resize(text.len().next_multiple_of(4), b' ');
        text
    }
}

/// Adds the nodes above the panels and returns the root.
fn place(
    mesh: &Mesh,
    nodes: &mut Vec<Value>,
    mut children: Vec<usize>,
    rounding: &Rounding,
) -> usize {
    let origin = rounding.origin;
    if origin.iter().any(|c| c.abs() > 0.0) {
        let node = json!({
            "name": "origin",
            "translation": [single(origin.x), single(origin.y), single(origin.z)],
            "children": children,
        });
        children = vec![nodes.len()];
        nodes.push(node);
    }
    let scale = mesh.unit.in_mm() / 1000.0;
    // By columns: the images of x, y and z.
    let matrix = [
        [scale, 0.0, 0.0, 0.0],
        [0.0, 0.0, -scale, 0.0],
        [0.0, scale, 0.0, 0.0],
        [0.0, 0.0, 0.0, 1.0],
    ];
    nodes.push(json!({
        "name": mesh.name,
        "matrix": matrix.as_flattened(),
        "children": children,
        "extras": {"unit": mesh.unit.symbol()},
    }));
    nodes.len() - 1
}

/// A stretch of a buffer view.
pub(super) fn accessor(
    view: usize,
    size: u64,
    range: &Range<usize>,
    component: u32,
    kind: &str,
) -> Value {
    json!({
        "bufferView": view,
        "byteOffset": size * range.start as u64,
        "componentType": component,
        "count": range.len(),
        "type": kind,
    })
}

/// Positions, with their box as the standard demands, and normals.
fn vertex_accessors(
    mesh: &Mesh,
    streams: &Streams<'_>,
    panel: &Panel<'_>,
    rounding: &Rounding,
) -> [Value; 2] {
    let mut low = [f32::INFINITY; 3];
    let mut high = [f32::NEG_INFINITY; 3];
    for &v in &streams.vertices[panel.vertices.clone()] {
        let point = mesh.vertices[v as usize].point as usize;
        for (i, c) in rounding
            .singles(&mesh.points[point])
            .into_iter()
            .enumerate()
        {
            low[i] = low[i].min(c);
            high[i] = high[i].max(c);
        }
    }
    let mut positions = accessor(0, TRIPLE, &panel.vertices, FLOAT, "VEC3");
    positions["min"] = json!(low);
    positions["max"] = json!(high);
    [
        positions,
        accessor(1, TRIPLE, &panel.vertices, FLOAT, "VEC3"),
    ]
}
