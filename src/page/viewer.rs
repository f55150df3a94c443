//! What the viewer of the page is given: the mesh in 16-bit steps of its box, the
//! surfaces' normals and curvatures at its vertices, the seams, and the control
//! nets for exact figures at a picked point.
#![allow(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "figures are clamped to the steps there are; the viewer draws in single precision"
)]

use std::collections::BTreeMap;

use serde_json::{Value, json};

use super::markup::base64;
use crate::patch_set::PatchSet;
use crate::picture::{Ramp, Scene, SeamCurve, finding_bytes, panel_colour, to_srgb};
use crate::scalar::{Cuboid, Point, Vector};

/// Control points that go into a page at most; above that picked figures are
/// interpolated.
const MOST_CONTROL_POINTS: usize = 30_000;

/// Steps of a coordinate.
const STEPS: f64 = 65_535.0;

/// The mesh of the viewer.
#[derive(Debug)]
pub(super) struct ViewerMesh {
    /// Everything, as JSON.
    pub(super) data: Value,
    /// The largest distance by which a vertex was moved.
    pub(super) moved: f64,
}

/// Bytes, little end first.
#[derive(Default)]
struct Stream(Vec<u8>);

impl Stream {
    fn word(&mut self, value: u16) {
        self.0.extend(value.to_le_bytes());
    }

    fn words(&mut self, values: [u16; 2]) {
        values.into_iter().for_each(|value| self.word(value));
    }

    fn single(&mut self, value: f64) {
        self.0.extend((value as f32).to_le_bytes());
    }
}

/// A place as 16-bit steps of a range.
fn steps(value: f64, [low, high]: [f64; 2]) -> u16 {
    let t = if high > low {
        (value - low) / (high - low)
    } else {
        0.0
    };
    (t * STEPS).round().clamp(0.0, STEPS) as u16
}

/// A direction as two steps on an octahedron laid flat (Meyer et al. 2010).
fn octahedral(n: &Vector) -> [u16; 2] {
    let sum = n.x.abs() + n.y.abs() + n.z.abs();
    if sum <= 0.0 {
        return [0; 2];
    }
    let (mut x, mut y) = (n.x / sum, n.y / sum);
    if n.z < 0.0 {
        (x, y) = ((1.0 - y.abs()).copysign(x), (1.0 - x.abs()).copysign(y));
    }
    [steps(x, [-1.0, 1.0]), steps(y, [-1.0, 1.0])]
}

impl ViewerMesh {
    /// Packs a scene with the proved deviations of its triangles and its chord
    /// tolerance. `ranges` are the ends of the scales of Gaussian, mean and
    /// principal curvature.
    pub(super) fn new(
        (scene, deviations, chord): (&Scene<'_>, &[f64], f64),
        ranges: [f64; 3],
        seams: &[SeamCurve],
    ) -> Self {
        let (set, mesh) = (scene.set, scene.mesh);
        let Cuboid { low, high } = Cuboid::around(mesh.points.iter().copied());
        let side = [0, 1, 2].map(|i| [low[i], high[i]]);
        let (mut places, mut normals, mut uv) = <(Stream, Stream, Stream)>::default();
        let (mut bends, mut corners, mut proved) = <(Stream, Stream, Stream)>::default();
        let mut parts = Vec::new();
        let mut count = 0_u32;
        for part in &mesh.parts {
            let Some(patch) = set.patches().iter().find(|p| p.name == part.name) else {
                continue;
            };
            let first = count;
            let ends = [&patch.breaks_u, &patch.breaks_v].map(|b| {
                [
                    b.first().copied().unwrap_or(0.0),
                    b.last().copied().unwrap_or(1.0),
                ]
            });
            // A vertex of the page: a vertex of the mesh at one (u, v).
            let mut known: BTreeMap<(u32, [u16; 2]), u32> = BTreeMap::new();
            for t in part.triangles.clone() {
                for k in 0..3 {
                    let vertex = mesh.triangles[t][k];
                    let at = scene.corner(t, k);
                    let own = [steps(at[0], ends[0]), steps(at[1], ends[1])];
                    let index = *known.entry((vertex, own)).or_insert_with(|| {
                        let stored = &mesh.vertices[vertex as usize];
                        let point = mesh.points[stored.point as usize];
                        (0..3).for_each(|i| places.word(steps(point[i], side[i])));
                        normals.words(octahedral(&stored.normal));
                        uv.words(own);
                        let bend = scene.corner_curvatures(t, k).unwrap_or((0.0, 0.0));
                        bends.single(bend.0);
                        bends.single(bend.1);
                        count += 1;
                        count - 1
                    });
                    corners.0.extend(index.to_le_bytes());
                }
                proved.single(deviations.get(t).copied().unwrap_or(0.0));
            }
            parts.push(json!({
                "name": part.name, "panel": part.panel, "triangles": part.triangles.len(),
                "u": ends[0], "v": ends[1], "first": first,
            }));
        }
        let panels: Vec<Value> = mesh
            .panels
            .iter()
            .enumerate()
            .map(|(k, name)| json!({"name": name, "colour": to_srgb(panel_colour(k))}))
            .collect();
        let most = (0..3).map(|i| high[i] - low[i]).fold(0.0, f64::max);
        Self {
            data: json!({
                "unit": set.unit().symbol(), "chord": chord, "ranges": ranges,
                "low": low.coords.as_slice(), "high": high.coords.as_slice(),
                "places": base64(&places.0), "normals": base64(&normals.0),
                "uv": base64(&uv.0), "bends": base64(&bends.0),
                "corners": base64(&corners.0), "proved": base64(&proved.0),
                "parts": parts, "panels": panels,
                "ramps": [ramp(Ramp::Rising), ramp(Ramp::Signed)],
                "seams": seams.iter().map(seam).collect::<Vec<_>>(),
                "nets": nets(set),
            }),
            moved: 0.5 * most / STEPS * 3.0_f64.sqrt(),
        }
    }
}

/// 256 colours from end to end.
fn ramp(ramp: Ramp) -> String {
    let bytes: Vec<u8> = (0..256)
        .flat_map(|k| to_srgb(ramp.colour(f64::from(k) / 255.0)))
        .collect();
    base64(&bytes)
}

fn seam(curve: &SeamCurve) -> Value {
    let single = |p: &Point| [p.x as f32, p.y as f32, p.z as f32];
    json!({
        "number": curve.number,
        "met": curve.verdict == crate::continuity::Verdict::Met,
        "colour": finding_bytes(curve.finding),
        "finding": curve.finding.to_string(),
        "worst": single(&curve.worst),
        "normal": curve.normal.map(|n| [n.x as f32, n.y as f32, n.z as f32]),
        "length": curve.length as f32,
        "lines": curve.stretches.iter()
            .map(|line| line.iter().flat_map(single).collect::<Vec<_>>())
            .collect::<Vec<_>>(),
    })
}

/// The Bezier pieces by patch, if they are few enough; null otherwise.
fn nets(set: &PatchSet) -> Value {
    let points = set.pieces().iter().map(|p| {
        let (m, n) = p.surface.degree();
        (m + 1) * (n + 1)
    });
    if points.sum::<usize>() > MOST_CONTROL_POINTS {
        return Value::Null;
    }
    let mut patches = serde_json::Map::new();
    for patch in set.patches() {
        let pieces: Vec<Value> = set.pieces()[patch.pieces.clone()]
            .iter()
            .map(|piece| {
                let (m, n) = piece.surface.degree();
                let net: Vec<f64> = (0..=m)
                    .flat_map(|i| (0..=n).map(move |j| (i, j)))
                    .flat_map(|(i, j)| {
                        let p = piece.surface.control_point(i, j);
                        [p.x, p.y, p.z, piece.surface.weight(i, j)]
                    })
                    .collect();
                json!({"degree": [m, n], "u": piece.u, "v": piece.v, "net": net})
            })
            .collect();
        patches.insert(
            patch.name.clone(),
            json!({"flipped": patch.flipped, "kind": patch.kind, "pieces": pieces}),
        );
    }
    Value::Object(patches)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// What the page's script does to read it back.
    fn from_octahedral(words: [u16; 2]) -> Vector {
        let [mut x, mut y] = words.map(|w| f64::from(w) / STEPS * 2.0 - 1.0);
        let z = 1.0 - x.abs() - y.abs();
        if z < 0.0 {
            (x, y) = ((1.0 - y.abs()).copysign(x), (1.0 - x.abs()).copysign(y));
        }
        Vector::new(x, y, z).normalize()
    }

    #[test]
    fn directions_survive_packing() {
        for k in 0..500_i32 {
            let t = f64::from(k);
            let n = Vector::new((t * 0.7).sin(), (t * 1.3).cos(), (t * 2.1).sin()).normalize();
            assert!((from_octahedral(octahedral(&n)) - n).norm() < 1e-4);
        }
    }
}
