//! How few triangles would do for a whole set.

use rayon::prelude::*;

use crate::patch_set::{PatchSet, PieceId};
use crate::sampling::Limits;
use crate::tessellation::floor;
use crate::topology::Topology;

/// The floor of all pieces for which `wanted` holds.
pub(crate) fn whole_floor(
    set: &PatchSet,
    topology: &Topology,
    limits: &Limits,
    wanted: &(impl Fn(PieceId) -> bool + Sync),
) -> f64 {
    let pieces = set.pieces().par_iter().enumerate();
    let floors: Vec<f64> = pieces
        .filter(|(index, _)| wanted(PieceId::new(*index)))
        .map(|(index, piece)| {
            let collapsed = [0, 1, 2, 3].map(|side| topology.edges()[index * 4 + side].collapsed);
            floor(&piece.surface, collapsed, limits.chord)
        })
        .collect();
    // Added in order, whatever the threads did.
    floors.iter().sum()
}

/// How few triangles would do for the largest edge and the normal angle, where
/// these are asked for: areas on the surfaces and on the sphere of normals, over
/// that of the equilateral triangle with such edges. Sampled.
pub(super) fn least(set: &PatchSet, limits: &Limits, wanted: &impl Fn(PieceId) -> bool) -> f64 {
    const PLACES: [f64; 4] = [0.125, 0.375, 0.625, 0.875];
    let largest = |edge: Option<f64>| edge.map(|e| 3.0_f64.sqrt() / 4.0 * e * e);
    let (flat, turned) = (largest(limits.max_edge), largest(limits.normal_rad));
    if flat.is_none() && turned.is_none() {
        return 0.0;
    }
    let (mut area, mut image) = (0.0, 0.0);
    for (index, piece) in set.pieces().iter().enumerate() {
        if !wanted(PieceId::new(index)) {
            continue;
        }
        for (u, v) in PLACES.iter().flat_map(|u| PLACES.map(|v| (*u, v))) {
            let jet = piece.surface.jet(u, v);
            let part = jet.cross().norm() / 16.0;
            area += part;
            image += part * jet.gaussian_and_mean().map_or(0.0, |(k, _)| k.abs());
        }
    }
    flat.map_or(0.0, |most| area / most)
        .max(turned.map_or(0.0, |most| image / most))
}
