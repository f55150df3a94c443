//! Whether every corner lies where its patch is at its (u, v).
//!
//! Inside a piece a vertex is a point of the surface, so nothing but rounding
//! may part them: that of evaluation, `2 (m + n + 2)` ulp of the largest
//! coordinate, and that of (u, v), a few ulp of their range times the speed of
//! the surface. On the border of a piece a vertex is shared with its
//! neighbours, which may lie apart by the gap tolerance, or by more where a
//! tolerance class or a length up to which gaps are closed allows for it: never
//! by more than the widest gap the set's edges are joined over.

use rayon::prelude::*;

use super::cell::Cell;
use super::evidence::Evidence;
use super::finding::{Fault, Finding};
use super::rounding::scale;
use crate::patch_set::{PatchSet, PieceId};
use crate::topology::Topology;

/// Whether a place is on the border of the unit square.
pub(super) fn on_border([u, v]: [f64; 2]) -> bool {
    [u, v].iter().any(|&t| t <= 0.0 || t >= 1.0)
}

/// Finds the vertices that are off their patches, each once a patch.
pub(super) fn check(
    set: &PatchSet,
    topology: &Topology,
    evidence: &Evidence,
    cells: &[Cell],
    findings: &mut Vec<Finding>,
) {
    let joined = topology.contacts().iter().filter(|c| c.joined);
    let gap = joined
        .map(|contact| contact.gap.proved)
        .fold(set.tolerances().gap.get(), f64::max);
    let scales: Vec<f64> = set
        .pieces()
        .par_iter()
        .map(|piece| scale(&piece.surface))
        .collect();
    let mut off: Vec<(usize, u32, usize, usize, f64, f64)> = cells
        .par_iter()
        .flat_map_iter(|cell| (0..3).map(move |k| (cell, k)))
        .filter_map(|(cell, k)| {
            let piece = &set.pieces()[cell.piece];
            let [u, v] = cell.places[k];
            let jet = piece.surface.jet(u, v);
            let point = evidence.points[cell.points[k] as usize];
            let distance = (jet.point - point).norm();
            let (m, n) = piece.surface.degree();
            #[allow(clippy::cast_precision_loss, reason = "degrees are at most 15")]
            let steps = 4.0 * (m + n + 2) as f64;
            let ulps =
                |range: [f64; 2]| 8.0 * (range[0].abs() + range[1].abs()) / (range[1] - range[0]);
            let speed = jet.du.norm() * ulps(piece.u) + jet.dv.norm() * ulps(piece.v);
            let rounding = f64::EPSILON * (steps * scales[cell.piece] + speed);
            let allowed = rounding + if on_border([u, v]) { gap } else { 0.0 };
            (distance > allowed).then_some((
                cell.piece,
                cell.points[k],
                cell.face,
                k,
                distance,
                allowed,
            ))
        })
        .collect();
    off.sort_unstable_by_key(|o| (o.0, o.1, o.2, o.3));
    for group in off.chunk_by(|a, b| (a.0, a.1) == (b.0, b.1)) {
        let worst = group
            .iter()
            .fold(&group[0], |worst, o| if o.4 > worst.4 { o } else { worst });
        let &(piece, vertex, face, _, distance, allowed) = worst;
        let own = &evidence.faces[face];
        let corner = own.points.iter().position(|&p| p == vertex);
        findings.push(Finding {
            fault: Fault::OffSurface {
                distance,
                allowed,
                triangles: group.len(),
            },
            triangle: Some(face),
            patch: set.patch_of(PieceId::new(piece)).name.clone(),
            place: corner.map(|k| own.places[k]),
            point: Some(evidence.points[vertex as usize]),
        });
    }
}
