//! The whole way to a sized mesh.

use rayon::prelude::*;

use super::Sizing;
use super::atlas::{Atlas, Place};
use super::border::Border;
use super::field::{Field, Source};
use super::parts::{Part, parts};
use super::region::{NONE, previous};
use super::remesh::Remesher;
use super::request::SizingError;
use super::start::Start;
use crate::mesh::{Budget, MeshError};
use crate::patch_set::{PatchSet, PieceId};

/// Kept edges that see each other across a region at less than this part of the
/// size ask for smaller edges there.
const NARROW: f64 = 0.75;

/// How often sizes are asked for anew because of what lies close together.
const LOOKS: usize = 3;

/// Regions remeshed, with what they stand on.
#[derive(Debug)]
pub(super) struct Made {
    pub(super) parts: Vec<Part>,
    pub(super) border: Border,
    pub(super) field: Field,
    /// Border vertices that should have gone and could not.
    pub(super) left: Vec<u32>,
}

/// Everything before the remeshing: starts joined to regions, under a field that
/// knows what lies close together.
fn ready(
    atlas: &Atlas,
    sizing: &Sizing,
    budget: &Budget,
    sources: &mut Vec<Source>,
    wanted: &(impl Fn(PieceId) -> bool + Sync),
) -> Result<(Field, Border, Vec<Part>), SizingError> {
    let Atlas {
        set,
        topology,
        seams,
    } = *atlas;
    let mut look = 0;
    loop {
        look += 1;
        let field = Field::new(set, topology, sizing, sources);
        afford(set, &field, budget, wanted)?;
        let border = Border::new(set, topology, seams, &field);
        let starts: Vec<Option<Start>> = (0..set.pieces().len())
            .into_par_iter()
            .map(|piece| {
                wanted(PieceId::new(piece))
                    .then(|| Start::new(set, topology, &border, &field, piece))
                    .flatten()
            })
            .collect();
        let unfilled = |piece: usize| SizingError::Unfilled {
            patch: set.patch_of(PieceId::new(piece)).name.clone(),
        };
        // All sides are points, and yet it has an inside.
        let balloon = |piece: usize| {
            let surface = &set.pieces()[piece].surface;
            let [a, b] = super::field::lengths(surface);
            wanted(PieceId::new(piece)) && starts[piece].is_none() && a.min(b) > 0.0
        };
        if let Some(piece) = (0..starts.len()).find(|&piece| balloon(piece)) {
            return Err(unfilled(piece));
        }
        let parts = parts(atlas, &field, &border, &starts).map_err(unfilled)?;
        if look >= LOOKS {
            return Ok((field, border, parts));
        }
        let before = sources.len();
        for &(place, h) in &border.short {
            if h < NARROW * field.at(place) {
                sources.push(Source { place, h });
            }
        }
        for part in &parts {
            narrow_places(part, sources);
        }
        if sources.len() == before {
            return Ok((field, border, parts));
        }
    }
}

/// Bytes a triangle takes while it is remeshed, beside those of the finished mesh.
const PER_TRIANGLE: f64 = 250.0;

/// Whether the triangles of the field are within the budget: the area over that of
/// the equilateral triangle, sampled.
fn afford(
    set: &PatchSet,
    field: &Field,
    budget: &Budget,
    wanted: &(impl Fn(PieceId) -> bool + Sync),
) -> Result<(), SizingError> {
    const PLACES: u32 = 8;
    let mut triangles = 0.0;
    for (index, piece) in (0_u32..).zip(set.pieces()) {
        if !wanted(PieceId::new(index as usize)) {
            continue;
        }
        for k in 0..PLACES * PLACES {
            let at = |k: u32| (f64::from(k) + 0.5) / f64::from(PLACES);
            let uv = [at(k / PLACES), at(k % PLACES)];
            let (_, du, dv) = piece.surface.frame(uv[0], uv[1]);
            let h = field.at(Place { piece: index, uv });
            let each = 0.25 * 3.0_f64.sqrt() * h * h;
            triangles += du.cross(&dv).norm() / (each * f64::from(PLACES * PLACES));
        }
    }
    let most = budget.triangles_allowed();
    if triangles.is_nan() || triangles > most {
        return Err(SizingError::Mesh(MeshError::TooMany {
            predicted: triangles,
            least: false,
            most,
        }));
    }
    let bytes =
        Budget::predicted_bytes(triangles, set.pieces().len(), true) + PER_TRIANGLE * triangles;
    if bytes > budget.bytes_allowed() {
        return Err(SizingError::Mesh(MeshError::Memory {
            triangles,
            bytes,
            most: budget.bytes_allowed(),
        }));
    }
    Ok(())
}

/// Places where two kept edges see each other over a short edge of the start.
fn narrow_places(part: &Part, sources: &mut Vec<Source>) {
    let region = &part.region;
    for h in 0..region.half_edges() {
        let g = region.twin(h);
        if g == NONE || g < h {
            continue;
        }
        let (a, b) = (region.origin(h), region.end(h));
        if !region.on_border(a) || !region.on_border(b) {
            continue;
        }
        let of = [a, b].map(|v| &region.vertices[v as usize]);
        let length = (of[0].spot.point - of[1].spot.point).norm();
        let size = of[0].size.min(of[1].size);
        if length >= NARROW * size {
            continue;
        }
        // Beside one corner: as narrow as the corner is sharp.
        let beside = |v: u32| {
            let first = region.leaving[v as usize];
            let last = region.around(v).last().map_or(first, previous);
            [region.end(first), region.origin(last)]
        };
        let (p, q) = (beside(a), beside(b));
        if p.iter().any(|x| q.contains(x)) || p.contains(&b) {
            continue;
        }
        for at in of {
            sources.push(Source {
                place: at.spot.place,
                h: length,
            });
        }
    }
}

/// Meshes all pieces for which `wanted` holds.
pub(super) fn make(
    atlas: &Atlas,
    sizing: &Sizing,
    budget: &Budget,
    sources: &mut Vec<Source>,
    wanted: &(impl Fn(PieceId) -> bool + Sync),
) -> Result<Made, SizingError> {
    let (field, border, mut parts) = ready(atlas, sizing, budget, sources, wanted)?;
    let each = |parts: &mut Vec<Part>, work: &(dyn Fn(&mut Remesher) + Sync)| {
        parts.par_iter_mut().for_each(|part| {
            let mut remesher = Remesher {
                atlas,
                field: &field,
                region: std::mem::take(&mut part.region),
            };
            work(&mut remesher);
            part.region = remesher.region;
        });
    };
    each(&mut parts, &|r| {
        r.collapse_short();
        r.flip_all();
    });
    let mut left = border.transient.clone();
    for round in 0..3 {
        left = take_out(atlas, &field, &mut parts, &border, &left);
        if left.is_empty() {
            break;
        }
        if round < 2 {
            each(&mut parts, &|r| {
                r.smooth();
                r.collapse_short();
                r.flip_all();
            });
        }
    }
    each(&mut parts, &|r| {
        r.run();
        r.mend();
    });
    Ok(Made {
        parts,
        border,
        field,
        left: left.iter().map(|pair| pair[0]).collect(),
    })
}

/// Takes out the corners of patches that are no samples of their curves, on all
/// sides at once; returns those that could not be.
fn take_out(
    atlas: &Atlas,
    field: &Field,
    parts: &mut [Part],
    border: &Border,
    wanted: &[[u32; 2]],
) -> Vec<[u32; 2]> {
    let mut copies: Vec<Vec<(usize, u32)>> = vec![Vec::new(); border.points.len()];
    for (index, part) in parts.iter().enumerate() {
        for (v, of) in (0_u32..).zip(&part.region.vertices) {
            if of.border != NONE && part.region.leaving[v as usize] != NONE {
                copies[of.border as usize].push((index, v));
            }
        }
    }
    let mut left = Vec::new();
    for &[goes, to] in wanted {
        let found = &copies[goes as usize];
        let uses: Option<Vec<(usize, u32, u32)>> = found
            .iter()
            .map(|&(index, v)| {
                let (h, keep) = towards(&parts[index], v, to)?;
                may_go(atlas, field, &mut parts[index], (h, v, keep)).then_some((index, h, keep))
            })
            .collect();
        let Some(uses) = uses else {
            left.push([goes, to]);
            continue;
        };
        // Two copies in one region stand on the two sides of a slit: one change
        // may forbid the other.
        let twice = uses.windows(2).any(|p| p[0].0 == p[1].0);
        let backup = twice.then(|| parts[uses[0].0].region.clone());
        let mut done = true;
        for &(index, h, keep) in &uses {
            let part = &mut parts[index];
            if part.region.can_collapse(h) {
                part.region.collapse(h, keep);
            } else {
                done = false;
            }
        }
        if let Some(backup) = backup.filter(|_| !done) {
            parts[uses[0].0].region = backup;
            left.push([goes, to]);
        }
    }
    left
}

/// The kept half-edge between a copy and its neighbour on the curve, and that.
fn towards(part: &Part, v: u32, to: u32) -> Option<(u32, u32)> {
    let region = &part.region;
    let first = region.leaving[v as usize];
    let last = previous(region.around(v).last()?);
    let ends = [(first, region.end(first)), (last, region.origin(last))];
    ends.into_iter()
        .find(|&(h, w)| region.twin(h) == NONE && region.vertices[w as usize].border == to)
}

fn may_go(atlas: &Atlas, field: &Field, part: &mut Part, (h, goes, keep): (u32, u32, u32)) -> bool {
    let remesher = Remesher {
        atlas,
        field,
        region: std::mem::take(&mut part.region),
    };
    let may = remesher.may_collapse(goes, keep, f64::INFINITY) && remesher.region.can_collapse(h);
    part.region = remesher.region;
    may
}
