//! What the surface is like at the points of a mesh.

use std::collections::BTreeMap;

use rayon::prelude::*;

use super::Mesh;
use crate::patch_set::{Patch, PatchSet};

/// Places towards the middle of a triangle where curvature is looked at instead,
/// where the corner has none, as fractions of the way.
const BESIDE: [f64; 4] = [0.0, 1e-4, 1e-3, 1e-2];

/// For every point of a mesh its place on a patch and the curvature there. Where
/// several patches meet in a point, the first of them counts, in the mesh's order
/// of parts; of several places on it (a seam of a closed patch with itself) that of
/// the first triangle.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Nodes {
    /// Index into [`Mesh::parts`].
    pub parts: Vec<u32>,
    /// The patch's own (u, v).
    pub places: Vec<[f64; 2]>,
    /// Principal curvatures, the larger first, in 1 / the mesh's unit; seen from
    /// outside, negative where the surface is crowned and positive where it is
    /// hollow. At a pole those beside it; zeros where there are none, as at a
    /// cone's tip.
    pub curvatures: Vec<[f64; 2]>,
}

impl Nodes {
    /// The places of the points of a mesh that carries evidence and was made from
    /// this set; `None` for any other. A point without triangles is at (0, 0) of the
    /// first part.
    #[must_use]
    pub fn of(set: &PatchSet, mesh: &Mesh) -> Option<Self> {
        let evidence = mesh.evidence.as_ref()?;
        let named: BTreeMap<&str, &Patch> =
            set.patches().iter().map(|p| (p.name.as_str(), p)).collect();
        let patches: Vec<&Patch> = mesh
            .parts
            .iter()
            .map(|part| named.get(part.name.as_str()).copied())
            .collect::<Option<_>>()?;
        // The part, the triangle and the corner where each point is met first.
        let mut met: Vec<Option<(u32, usize, usize)>> = vec![None; mesh.points.len()];
        for (part, number) in mesh.parts.iter().zip(0..) {
            for t in part.triangles.clone() {
                let own = mesh
                    .corner_parts
                    .as_ref()
                    .map_or([number; 3], |parts| parts[t]);
                for (corner, point) in mesh.triangle_points(t).into_iter().enumerate() {
                    met[point as usize].get_or_insert((own[corner], t, corner));
                }
            }
        }
        let curvatures = met.par_iter().map(|met| {
            met.and_then(|(part, t, corner)| {
                let mut corners = evidence[t];
                if let Some(parts) = &mesh.corner_parts {
                    // Places on other patches say nothing here.
                    for k in (0..3).filter(|&k| parts[t][k] != part) {
                        corners[k] = evidence[t][corner];
                    }
                }
                curvatures(set, patches[part as usize], &corners, corner)
            })
            .unwrap_or_default()
        });
        Some(Self {
            curvatures: curvatures.collect(),
            parts: met.iter().map(|m| m.map_or(0, |m| m.0)).collect(),
            places: met
                .iter()
                .map(|m| m.map_or([0.0; 2], |(_, t, corner)| evidence[t][corner]))
                .collect(),
        })
    }
}

/// The principal curvatures at a corner, or beside it inside the triangle.
fn curvatures(
    set: &PatchSet,
    patch: &Patch,
    corners: &[[f64; 2]; 3],
    corner: usize,
) -> Option<[f64; 2]> {
    let middle = [0, 1].map(|i| (corners[0][i] + corners[1][i] + corners[2][i]) / 3.0);
    let piece = &set.pieces()[patch.piece_at(middle)];
    let (gaussian, mean) = BESIDE.iter().find_map(|part| {
        let beside = [0, 1].map(|i| corners[corner][i] * (1.0 - part) + middle[i] * part);
        let [u, v] = piece.unit_parameters(beside);
        let found = piece.surface.jet(u, v).gaussian_and_mean()?;
        (found.0.is_finite() && found.1.is_finite()).then_some(found)
    })?;
    let mean = if patch.flipped { -mean } else { mean };
    let root = (mean * mean - gaussian).max(0.0).sqrt();
    Some([mean + root, mean - root])
}
