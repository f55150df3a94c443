//! The audit of a mesh whose triangles may lie on several patches.
//!
//! Such triangles have no parameter triangles that could cover their patches, so
//! the cover is not looked at. What takes its place: the whole surface of every
//! patch that the mesh says it has is within the chord of the mesh and the mesh of
//! the surface (`wide`), every corner is on its patch, triangles face outward, none
//! is doubled, and edges are open only along open edges of the set.

use rayon::prelude::*;

use super::cell::known;
use super::closed::is_open_at;
use super::evidence::Evidence;
use super::finding::{Fault, Finding};
use super::rounding::scale;
use super::{Audit, Worst};
use crate::mesh::edges::EdgeTable;
use crate::mesh::wide::{Spot, Wide};
use crate::patch_set::{PatchSet, PieceId};
use crate::scalar::Point;
use crate::topology::Topology;

/// Findings of the deviation that are listed at most.
const MOST: usize = 1000;

/// How many of the worst places are measured against the whole mesh.
const CANDIDATES: usize = 64;

/// Corners placed on pieces, as far as they can be.
struct Placed {
    /// Numbers of the faces that were placed.
    faces: Vec<usize>,
    triangles: Vec<[u32; 3]>,
    spots: Vec<[Spot; 3]>,
}

/// The piece of a patch and the place on it.
fn spot(set: &PatchSet, patch: usize, [u, v]: [f64; 2]) -> Option<Spot> {
    let of = &set.patches()[patch];
    let within = |breaks: &[f64], t: f64| breaks[0] <= t && t <= breaks[breaks.len() - 1];
    if !within(&of.breaks_u, u) || !within(&of.breaks_v, v) {
        return None;
    }
    let index = of.piece_at([u, v]);
    let piece = &set.pieces()[index];
    Some(Spot {
        piece: PieceId::new(index),
        uv: piece.unit_parameters([u, v]),
    })
}

fn placed(set: &PatchSet, evidence: &Evidence, findings: &mut Vec<Finding>) -> Placed {
    let patches = known(set, evidence, findings);
    let mut found = Placed {
        faces: Vec::new(),
        triangles: Vec::new(),
        spots: Vec::new(),
    };
    let mut seen: std::collections::BTreeMap<[u32; 3], usize> = std::collections::BTreeMap::new();
    for (index, face) in evidence.faces.iter().enumerate() {
        let own = face.corner_patches.unwrap_or([face.patch; 3]);
        let patch_of = own.map(|p| patches[p as usize]);
        let [Some(a), Some(b), Some(c)] = patch_of else {
            continue;
        };
        let middle = centre(evidence, index);
        let mut find = |fault: Fault| {
            findings.push(Finding {
                fault,
                triangle: Some(index),
                patch: evidence.patches[face.patch as usize].clone(),
                place: Some(face.places[0]),
                point: Some(middle),
            });
        };
        let mut key = face.points;
        key.sort_unstable();
        if let Some(&first) = seen.get(&key) {
            find(Fault::Doubled { first });
            continue;
        }
        seen.insert(key, index);
        let on = [a, b, c];
        let spots = [0, 1, 2].map(|k| spot(set, on[k], face.places[k]));
        let [Some(p), Some(q), Some(r)] = spots else {
            find(Fault::OutsidePatch);
            continue;
        };
        found.faces.push(index);
        found.triangles.push(face.points);
        found.spots.push([p, q, r]);
    }
    found
}

fn centre(evidence: &Evidence, face: usize) -> Point {
    let [p, q, r] = evidence.corners(&evidence.faces[face]).map(|p| p.coords);
    Point::from((p + q + r) / 3.0)
}

/// Corners off their patches, and facets turned against them.
fn corners(
    set: &PatchSet,
    topology: &Topology,
    evidence: &Evidence,
    placed: &Placed,
    findings: &mut Vec<Finding>,
) {
    let joined = topology.contacts().iter().filter(|c| c.joined);
    let gap = joined
        .map(|contact| contact.gap.proved)
        .fold(set.tolerances().gap.get(), f64::max);
    let scales: Vec<f64> = set.pieces().par_iter().map(|p| scale(&p.surface)).collect();
    let looked: Vec<Vec<Finding>> = (0..placed.faces.len())
        .into_par_iter()
        .map(|n| {
            let mut found = Vec::new();
            let index = placed.faces[n];
            let face = &evidence.faces[index];
            let points = evidence.corners(face);
            let facet = (points[1] - points[0]).cross(&(points[2] - points[0]));
            let mut against = 0;
            for (k, point) in points.into_iter().enumerate() {
                let Spot { piece, uv } = placed.spots[n][k];
                let of = &set.pieces()[piece.index()];
                let jet = of.surface.jet(uv[0], uv[1]);
                let patch = set.patch_of(piece);
                let outward = if patch.flipped { -1.0 } else { 1.0 };
                if facet.dot(&jet.cross()) * outward < 0.0 {
                    against += 1;
                }
                let distance = (jet.point - point).norm();
                let (m, l) = of.surface.degree();
                #[allow(clippy::cast_precision_loss, reason = "degrees are at most 15")]
                let steps = 4.0 * (m + l + 2) as f64;
                let ulps = |range: [f64; 2]| {
                    8.0 * (range[0].abs() + range[1].abs()) / (range[1] - range[0])
                };
                let speed = jet.du.norm() * ulps(of.u) + jet.dv.norm() * ulps(of.v);
                let rounding = f64::EPSILON * (steps * scales[piece.index()] + speed);
                let border = uv.iter().any(|&t| t <= 0.0 || t >= 1.0);
                let allowed = rounding + if border { gap } else { 0.0 };
                if distance > allowed {
                    found.push(Finding {
                        fault: Fault::OffSurface {
                            distance,
                            allowed,
                            triangles: 1,
                        },
                        triangle: Some(index),
                        patch: patch.name.clone(),
                        place: Some(face.places[k]),
                        point: Some(point),
                    });
                }
            }
            if against >= 2 {
                found.push(Finding {
                    fault: Fault::TurnedOver,
                    triangle: Some(index),
                    patch: evidence.patches[face.patch as usize].clone(),
                    place: Some(face.places[0]),
                    point: Some(centre(evidence, index)),
                });
            }
            found
        })
        .collect();
    findings.extend(looked.into_iter().flatten());
}

/// Open edges of the mesh that do not run along open edges of the set.
fn cracks(
    set: &PatchSet,
    topology: &Topology,
    evidence: &Evidence,
    placed: &Placed,
    present: &[bool],
    findings: &mut Vec<Finding>,
) {
    let table = EdgeTable::new(&placed.triangles, evidence.points.len());
    for edge in table.edges().filter(|edge| edge.len() == 1) {
        for side in edge.sides() {
            let (n, k) = (side as usize / 3, side as usize % 3);
            let ends = [k, (k + 1) % 3];
            let open = ends.iter().all(|&e| {
                let Spot { piece, uv } = placed.spots[n][e];
                is_open_at(topology, piece, uv, present)
            });
            if !open {
                let index = placed.faces[n];
                let face = &evidence.faces[index];
                let [p, q] = ends.map(|e| evidence.points[face.points[e] as usize].coords);
                findings.push(Finding {
                    fault: Fault::Crack { edges: 1 },
                    triangle: Some(index),
                    patch: set.patch_of(placed.spots[n][k].piece).name.clone(),
                    place: Some(face.places[k]),
                    point: Some(Point::from((p + q) / 2.0)),
                });
            }
        }
    }
}

/// Audits a mesh with corners on several patches.
pub(super) fn audit(set: &PatchSet, topology: &Topology, evidence: &Evidence, chord: f64) -> Audit {
    let mut findings = Vec::new();
    let placed = placed(set, evidence, &mut findings);
    let named: std::collections::BTreeSet<&str> =
        evidence.patches.iter().map(String::as_str).collect();
    // A patch without a corner of its own counts where its panel is there: narrow
    // patches may have none.
    let mut panels = vec![false; set.panels().len()];
    for patch in set
        .patches()
        .iter()
        .filter(|p| named.contains(p.name.as_str()))
    {
        panels[patch.panel.index()] = true;
    }
    let present: Vec<bool> = set
        .pieces()
        .iter()
        .enumerate()
        .map(|(index, piece)| {
            let point = topology.edges()[4 * index..4 * index + 4]
                .iter()
                .all(|edge| edge.collapsed);
            panels[set.patches()[piece.patch.index()].panel.index()] && !point
        })
        .collect();
    corners(set, topology, evidence, &placed, &mut findings);
    cracks(set, topology, evidence, &placed, &present, &mut findings);
    let wide = Wide::of(
        set,
        topology,
        (&evidence.points, &placed.triangles, &placed.spots),
        &present,
        chord,
    );
    let mut audit = Audit::found(set, evidence, &present, findings);
    audit.to_mesh.proved = wide.to_mesh;
    audit.to_surface = wide.to_surface;
    deviation(set, evidence, &placed, &wide, chord, &mut audit);
    audit
}

fn deviation(
    set: &PatchSet,
    evidence: &Evidence,
    placed: &Placed,
    wide: &Wide,
    chord: f64,
    audit: &mut Audit,
) {
    let measured = |point: &Point| {
        placed
            .triangles
            .par_iter()
            .map(|t| {
                let corners = t.map(|p| evidence.points[p as usize] - point);
                super::to_triangle(&crate::scalar::Vector::zeros(), &corners)
            })
            .reduce(|| f64::INFINITY, f64::min)
    };
    let own = |spot: Spot| set.pieces()[spot.piece.index()].patch_parameters(spot.uv);
    let mut peaks = wide.peaks.clone();
    peaks.sort_by(|a, b| {
        b.distance
            .total_cmp(&a.distance)
            .then(a.spot.piece.cmp(&b.spot.piece))
    });
    for peak in peaks.iter().take(CANDIDATES) {
        let beyond = peak.distance > chord;
        if audit.to_mesh.attained >= peak.distance && !beyond {
            break;
        }
        let distance = measured(&peak.point);
        let patch = set.patch_of(peak.spot.piece).name.clone();
        let triangle = placed.faces[peak.facet as usize];
        if audit.worst.is_none() || distance > audit.to_mesh.attained {
            audit.to_mesh.attained = distance;
            audit.worst = Some(Worst {
                triangle,
                patch: patch.clone(),
                place: own(peak.spot),
                point: peak.point,
            });
        }
        if distance > chord {
            audit.findings.push(Finding {
                fault: Fault::Deviates { attained: distance },
                triangle: Some(triangle),
                patch,
                place: Some(own(peak.spot)),
                point: Some(peak.point),
            });
        }
    }
    for &(spot, proved) in wide.over.iter().take(MOST) {
        let [u, v] = spot.uv;
        audit.findings.push(Finding {
            fault: Fault::Unproved { proved },
            triangle: None,
            patch: set.patch_of(spot.piece).name.clone(),
            place: Some(own(spot)),
            point: Some(set.pieces()[spot.piece.index()].surface.eval(u, v)),
        });
    }
}

/// The proved deviation of every triangle; infinite where it cannot be placed.
pub(super) fn by_triangle(
    set: &PatchSet,
    topology: &Topology,
    evidence: &Evidence,
    chord: f64,
) -> Vec<f64> {
    let placed = placed(set, evidence, &mut Vec::new());
    let mut present = vec![false; set.pieces().len()];
    for spot in placed.spots.as_flattened() {
        present[spot.piece.index()] = true;
    }
    let mesh = (
        &evidence.points[..],
        &placed.triangles[..],
        &placed.spots[..],
    );
    let wide = Wide::of(set, topology, mesh, &present, chord);
    let mut proved = vec![f64::INFINITY; evidence.faces.len()];
    for (face, bound) in placed.faces.iter().zip(&wide.by_triangle) {
        proved[*face] = *bound;
    }
    proved
}
