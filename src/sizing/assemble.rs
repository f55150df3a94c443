//! From remeshed regions to one indexed mesh, patch by patch.

use super::atlas::{Atlas, Place};
use super::job::Made;
use super::region::NONE;
use crate::mesh::{Mesh, Part, Spot, Vertex};
use crate::patch_set::PieceId;
use crate::scalar::{Point, Vector};

/// The mesh with what is known of its corners.
pub(super) struct Assembled {
    pub(super) mesh: Mesh,
    /// Places of the corners, by triangle.
    pub(super) spots: Vec<[Spot; 3]>,
    /// By triangle: its region and its number there.
    pub(super) from: Vec<(u32, u32)>,
}

fn narrow(index: usize) -> u32 {
    u32::try_from(index).expect("counts are limited before the run")
}

fn spot(place: Place) -> Spot {
    Spot {
        piece: PieceId::new(place.piece as usize),
        uv: place.uv,
    }
}

/// Joins regions: vertices on kept curves are shared by identity, their normals
/// too where surfaces agree within the tangent tolerance.
pub(super) fn assemble(atlas: &Atlas, made: &Made, evidence: bool) -> Assembled {
    let set = atlas.set;
    let smooth = set.tolerances().tangent_deg.get().to_radians().cos();
    let mut mesh = Mesh {
        name: set.name().to_owned(),
        unit: set.unit(),
        panels: set.panels().iter().map(|p| p.name.clone()).collect(),
        points: Vec::new(),
        vertices: Vec::new(),
        triangles: Vec::new(),
        parts: Vec::new(),
        evidence: None,
        corner_parts: None,
    };
    // Points of kept curves, as far as they are used.
    let mut point_of = vec![NONE; made.border.points.len()];
    for part in &made.parts {
        for (v, of) in (0_u32..).zip(&part.region.vertices) {
            if of.border != NONE && part.region.leaving[v as usize] != NONE {
                point_of[of.border as usize] = 0;
            }
        }
    }
    for (point, place) in point_of.iter_mut().zip(&made.border.points) {
        if *point == 0 {
            *point = narrow(mesh.points.len());
            mesh.points.push(*place);
        }
    }
    // Vertices with the same point, by border vertex.
    let mut shared: Vec<Vec<u32>> = vec![Vec::new(); point_of.len()];
    let mut triangles: Vec<(usize, u32, u32, [u32; 3])> = Vec::new();
    for (index, part) in made.parts.iter().enumerate() {
        let region = &part.region;
        let own: Vec<u32> = region
            .vertices
            .iter()
            .enumerate()
            .map(|(v, of)| {
                if region.leaving[v] == NONE {
                    return NONE;
                }
                let normal = normal(atlas, of.spot.place, &of.normal);
                if of.border == NONE {
                    mesh.points.push(of.spot.point);
                    let point = narrow(mesh.points.len() - 1);
                    mesh.vertices.push(Vertex { point, normal });
                    return narrow(mesh.vertices.len() - 1);
                }
                let known = &mut shared[of.border as usize];
                let like = known
                    .iter()
                    .find(|&&v| mesh.vertices[v as usize].normal.dot(&normal) >= smooth);
                if let Some(&like) = like {
                    return like;
                }
                let point = point_of[of.border as usize];
                mesh.vertices.push(Vertex { point, normal });
                known.push(narrow(mesh.vertices.len() - 1));
                narrow(mesh.vertices.len() - 1)
            })
            .collect();
        for (t, corners) in (0_u32..).zip(&region.triangles) {
            if corners[0] == NONE {
                continue;
            }
            let places = corners.map(|v| region.vertices[v as usize].spot.place);
            let patches = places.map(|p| set.pieces()[p.piece as usize].patch);
            let patch = if patches[0] == patches[1] && patches[1] == patches[2] {
                patches[0]
            } else {
                let spot = &region.vertices[corners[0] as usize].spot;
                let sum: Vector = corners.iter().map(|&v| region.point(v).coords).sum();
                let centre = atlas.toward(spot, &Point::from(sum / 3.0), 2);
                set.pieces()[centre.place.piece as usize].patch
            };
            let corners = corners.map(|v| own[v as usize]);
            triangles.push((patch.index(), narrow(index), t, corners));
        }
    }
    triangles.sort_by_key(|t| t.0);
    let mut spots = Vec::with_capacity(triangles.len());
    for (_, part, t, corners) in &triangles {
        let region = &made.parts[*part as usize].region;
        let of = region.triangles[*t as usize];
        spots.push(of.map(|v| spot(region.vertices[v as usize].spot.place)));
        mesh.triangles.push(*corners);
    }
    parts(atlas, &triangles, &spots, evidence, &mut mesh);
    Assembled {
        from: triangles.iter().map(|t| (t.1, t.2)).collect(),
        mesh,
        spots,
    }
}

/// Splits triangles into parts by patch, and keeps places if asked to.
fn parts(
    atlas: &Atlas,
    triangles: &[(usize, u32, u32, [u32; 3])],
    spots: &[[Spot; 3]],
    evidence: bool,
    mesh: &mut Mesh,
) {
    let set = atlas.set;
    let patch_of = |spot: &Spot| set.pieces()[spot.piece.index()].patch.index();
    let mut used = vec![false; set.patches().len()];
    for of in triangles {
        used[of.0] = true;
    }
    for spot in spots.as_flattened() {
        used[patch_of(spot)] = true;
    }
    let mut part_of = vec![NONE; used.len()];
    for (index, patch) in set.patches().iter().enumerate() {
        if !used[index] {
            continue;
        }
        part_of[index] = narrow(mesh.parts.len());
        let start = triangles.partition_point(|t| t.0 < index);
        let end = triangles.partition_point(|t| t.0 <= index);
        mesh.parts.push(Part {
            name: patch.name.clone(),
            panel: patch.panel.index(),
            triangles: start..end,
        });
    }
    if evidence {
        let own = |spot: &Spot| set.pieces()[spot.piece.index()].patch_parameters(spot.uv);
        mesh.evidence = Some(
            spots
                .iter()
                .map(|c| [0, 1, 2].map(|k| own(&c[k])))
                .collect(),
        );
        let part = |spot: &Spot| part_of[patch_of(spot)];
        mesh.corner_parts = Some(
            spots
                .iter()
                .map(|c| [0, 1, 2].map(|k| part(&c[k])))
                .collect(),
        );
    }
}

fn normal(atlas: &Atlas, place: Place, known: &Vector) -> Vector {
    if known.norm_squared() > 0.0 {
        return *known;
    }
    let surface = &atlas.set.pieces()[place.piece as usize].surface;
    surface
        .normal(place.uv[0], place.uv[1])
        .map_or_else(Vector::zeros, |n| n * atlas.outward(place.piece))
}
