//! Faces as cells: parameter triangles on one Bezier piece each.

use super::evidence::{Evidence, Face};
use super::finding::{Fault, Finding};
use crate::patch_set::{Patch, PatchSet};
use crate::scalar::Point;

/// Stands for "no mesh point".
pub(super) const NONE: u32 = u32::MAX;

/// A triangle of parameters on the unit square of a piece, and the corners the
/// mesh has over it.
#[derive(Debug, Clone, Copy)]
pub(super) struct Cell {
    /// The face it belongs to; for a fill-in at a pole a face beside it.
    pub(super) face: usize,
    /// The piece.
    pub(super) piece: usize,
    /// Corners on the unit square, counterclockwise.
    pub(super) places: [[f64; 2]; 3],
    /// The mesh points over them, or `NONE` where the pole's is not known.
    pub(super) points: [u32; 3],
    /// Whether it fills in between two faces at a pole: no triangle of the
    /// mesh has it, since two of its corners are the same point.
    pub(super) fill: bool,
}

/// The set's patches by the mesh's names; a name that is not known is a finding.
pub(super) fn known(
    set: &PatchSet,
    evidence: &Evidence,
    findings: &mut Vec<Finding>,
) -> Vec<Option<usize>> {
    let by_name: std::collections::BTreeMap<&str, usize> = set
        .patches()
        .iter()
        .enumerate()
        .map(|(index, patch)| (patch.name.as_str(), index))
        .collect();
    let patches: Vec<Option<usize>> = evidence
        .patches
        .iter()
        .map(|name| by_name.get(name.as_str()).copied())
        .collect();
    for (name, _) in evidence
        .patches
        .iter()
        .zip(&patches)
        .filter(|(_, found)| found.is_none())
    {
        findings.push(Finding {
            fault: Fault::UnknownPatch,
            triangle: None,
            patch: name.clone(),
            place: None,
            point: None,
        });
    }
    patches
}

/// Puts every face on its piece. Faces that cannot be placed, or are there
/// twice, are found and left out; turned ones are found and turned back, so
/// that one fault does not show as many.
pub(super) fn cells(set: &PatchSet, evidence: &Evidence, findings: &mut Vec<Finding>) -> Vec<Cell> {
    let patches = known(set, evidence, findings);
    let doubled = doubled(evidence);
    let mut cells = Vec::with_capacity(evidence.faces.len());
    for (index, face) in evidence.faces.iter().enumerate() {
        let Some(patch_index) = patches[face.patch as usize] else {
            continue;
        };
        let patch = &set.patches()[patch_index];
        let mut find = |fault: Fault| {
            let [a, b, c] = face.places;
            let [p, q, r] = evidence.corners(face).map(|p| p.coords);
            findings.push(Finding {
                fault,
                triangle: Some(index),
                patch: patch.name.clone(),
                place: Some([(a[0] + b[0] + c[0]) / 3.0, (a[1] + b[1] + c[1]) / 3.0]),
                point: Some(Point::from((p + q + r) / 3.0)),
            });
        };
        if let Some(first) = doubled[index] {
            find(Fault::Doubled { first });
            continue;
        }
        let placed = match placed(set, patch, face) {
            Ok(placed) => placed,
            Err(fault) => {
                find(fault);
                continue;
            }
        };
        let (mut places, mut points) = (placed.1, face.points);
        let area = signed_area(places);
        let turned = if area.abs() > AREA_ROUNDING {
            area < 0.0
        } else {
            patch.flipped
        };
        if turned != patch.flipped {
            find(Fault::TurnedOver);
        }
        if turned {
            places.swap(1, 2);
            points.swap(1, 2);
        }
        cells.push(Cell {
            face: index,
            piece: placed.0,
            places,
            points,
            fill: false,
        });
    }
    cells
}

/// Twice the signed area of a triangle on the unit square is known to within
/// this: three roundings of each of two products below 1.
pub(super) const AREA_ROUNDING: f64 = 8.0 * f64::EPSILON;

/// Twice the signed area of a triangle of parameters.
pub(super) fn signed_area([a, b, c]: [[f64; 2]; 3]) -> f64 {
    (b[0] - a[0]) * (c[1] - a[1]) - (c[0] - a[0]) * (b[1] - a[1])
}

/// For every face the first one that is the same: same patch, same points and
/// places, in any order.
fn doubled(evidence: &Evidence) -> Vec<Option<usize>> {
    let key = |face: &Face| {
        let mut corners = [0, 1, 2].map(|k| {
            let [u, v] = face.places[k];
            (face.points[k], (u + 0.0).to_bits(), (v + 0.0).to_bits())
        });
        corners.sort_unstable();
        (face.patch, corners)
    };
    let mut order: Vec<(_, usize)> = evidence.faces.iter().map(key).zip(0..).collect();
    order.sort_unstable();
    let mut first = vec![None; evidence.faces.len()];
    for group in order.chunk_by(|a, b| a.0 == b.0) {
        for &(_, face) in &group[1..] {
            first[face] = Some(group[0].1);
        }
    }
    first
}

/// The piece a face lies on, and its corners on that piece's unit square.
fn placed(set: &PatchSet, patch: &Patch, face: &Face) -> Result<(usize, [[f64; 2]; 3]), Fault> {
    let breaks = [&patch.breaks_u, &patch.breaks_v];
    let mut at = [0; 2];
    for axis in 0..2 {
        let values = face.places.map(|p| p[axis]);
        let least = values.iter().copied().fold(f64::INFINITY, f64::min);
        let most = values.iter().copied().fold(f64::NEG_INFINITY, f64::max);
        let last = breaks[axis].len() - 1;
        if least < breaks[axis][0] || most > breaks[axis][last] {
            return Err(Fault::OutsidePatch);
        }
        let after = breaks[axis].partition_point(|&b| b <= least);
        at[axis] = (after - 1).min(last - 1);
        if most > breaks[axis][at[axis] + 1] {
            return Err(Fault::AcrossPieces);
        }
    }
    let index = patch.pieces.start + at[0] * (patch.breaks_v.len() - 1) + at[1];
    let piece = &set.pieces()[index];
    Ok((index, face.places.map(|place| piece.unit_parameters(place))))
}

/// Which cell of the same piece each edge is shared with, by parameters.
pub(super) fn across(cells: &[Cell]) -> Vec<[u32; 3]> {
    let mut edges = Vec::with_capacity(3 * cells.len());
    for (index, cell) in cells.iter().enumerate() {
        for k in 0..3 {
            let mut ends = [cell.places[k], cell.places[(k + 1) % 3]].map(|p| p.map(f64::to_bits));
            ends.sort_unstable();
            edges.push((cell.piece, ends, index, k));
        }
    }
    edges.sort_unstable();
    let mut across = vec![[NONE; 3]; cells.len()];
    // An edge of more than two cells is none that can be crossed.
    let shared = edges.chunk_by(|a, b| (a.0, a.1) == (b.0, b.1));
    for pair in shared.filter(|group| group.len() == 2) {
        for (from, to) in [(pair[0], pair[1]), (pair[1], pair[0])] {
            across[from.2][from.3] = facet_index(to.2);
        }
    }
    across
}

/// A face's number as facets are numbered.
pub(super) fn facet_index(face: usize) -> u32 {
    u32::try_from(face).expect("files hold fewer than 2^31 faces")
}
