//! From filled pieces to one indexed mesh.

use rayon::prelude::*;

use super::{Mesh, Part, Vertex};
use crate::pace;
use crate::patch_set::{PatchSet, Piece, PieceId};
use crate::sampling::Samples;
use crate::scalar::Vector;
use crate::tessellation::{Filled, Tessellation};

/// Stands for "no mesh point yet" in the tables here.
const NONE: u32 = u32::MAX;

impl Mesh {
    /// Joins filled pieces into one mesh. Border vertices are shared by
    /// identity; their normals too, where the surfaces that meet there agree
    /// within the set's tangent tolerance. Pieces that were left out leave out
    /// their patch. With `evidence` every triangle keeps the parameters of its
    /// corners.
    #[must_use]
    pub fn assemble(
        set: &PatchSet,
        samples: &Samples,
        tessellation: &Tessellation,
        evidence: bool,
    ) -> Self {
        let filled = tessellation.pieces.iter().flatten();
        pace::expect(filled.map(|f| f.triangles.len() as u64).sum(), "triangles");
        Self::assemble_telling(set, samples, tessellation, evidence, pace::step)
    }

    /// As [`Mesh::assemble`]; `done` is told how many triangles more are joined.
    pub(super) fn assemble_telling(
        set: &PatchSet,
        samples: &Samples,
        tessellation: &Tessellation,
        evidence: bool,
        done: impl Fn(u64),
    ) -> Self {
        let smooth = set.tolerances().tangent_deg.get().to_radians().cos();
        let normals: Vec<Option<Vec<Vector>>> = tessellation
            .pieces
            .par_iter()
            .enumerate()
            .map(|(index, filled)| {
                filled
                    .as_ref()
                    .map(|f| piece_normals(set, PieceId::new(index), f))
            })
            .collect();
        let mut joined = Joined::new(samples, tessellation);
        let mut mesh = Self {
            name: set.name().to_owned(),
            unit: set.unit(),
            panels: set.panels().iter().map(|p| p.name.clone()).collect(),
            points: joined.points.clone(),
            vertices: Vec::new(),
            triangles: Vec::new(),
            parts: Vec::new(),
            evidence: evidence.then(Vec::new),
            corner_parts: None,
        };
        for patch in set.patches() {
            let start = mesh.triangles.len();
            let mut any = false;
            for index in patch.pieces.clone() {
                if let (Some(filled), Some(normals)) =
                    (&tessellation.pieces[index], &normals[index])
                {
                    joined.add(&mut mesh, filled, normals, patch.flipped, smooth);
                    if let Some(evidence) = &mut mesh.evidence {
                        corners(&set.pieces()[index], filled, patch.flipped, evidence);
                    }
                    any = true;
                }
            }
            done((mesh.triangles.len() - start) as u64);
            if any {
                mesh.parts.push(Part {
                    name: patch.name.clone(),
                    panel: patch.panel.index(),
                    triangles: start..mesh.triangles.len(),
                });
            }
        }
        mesh
    }
}

/// Appends the patch's own parameters of the corners of a piece's triangles.
fn corners(piece: &Piece, filled: &Filled, flipped: bool, into: &mut Vec<[[f64; 2]; 3]>) {
    let at = |corner: u32| piece.patch_parameters(filled.places[corner as usize]);
    into.extend(filled.triangles.iter().map(|triangle| {
        let [a, b, c] = triangle.map(at);
        if flipped { [a, c, b] } else { [a, b, c] }
    }));
}

/// The outward unit normal at every vertex of a piece; where the surface has
/// none, that of the first triangle there.
fn piece_normals(set: &PatchSet, id: PieceId, filled: &Filled) -> Vec<Vector> {
    let surface = &set.pieces()[id.index()].surface;
    let outward = if set.patch_of(id).flipped { -1.0 } else { 1.0 };
    let facet = |vertex: usize| {
        let around = filled
            .triangles
            .iter()
            .find(|t| t.iter().any(|&v| v as usize == vertex))?;
        let [a, b, c] = around.map(|v| filled.points[v as usize]);
        (b - a).cross(&(c - a)).try_normalize(0.0)
    };
    filled
        .places
        .iter()
        .enumerate()
        .map(|(vertex, [u, v])| {
            let normal = surface.normal(*u, *v).or_else(|| facet(vertex));
            normal.map_or_else(Vector::zeros, |n| n * outward)
        })
        .collect()
}

/// Which mesh point and which normals a border vertex has so far.
struct Joined {
    /// Mesh point of every border vertex.
    point_of: Vec<u32>,
    points: Vec<crate::scalar::Point>,
    /// The first mesh vertex of every border vertex; further ones are chained.
    first: Vec<u32>,
    /// The next mesh vertex with the same point, by mesh vertex.
    next: Vec<u32>,
}

impl Joined {
    fn new(samples: &Samples, tessellation: &Tessellation) -> Self {
        let border = samples.points();
        let mut used = vec![false; border.len()];
        for filled in tessellation.pieces.iter().flatten() {
            for &corner in filled.triangles.as_flattened() {
                let vertex = filled.vertices[corner as usize];
                if vertex != NONE {
                    used[vertex as usize] = true;
                }
            }
        }
        let mut points = Vec::new();
        let point_of = used
            .iter()
            .zip(border)
            .map(|(&used, point)| {
                if used {
                    points.push(*point);
                    index(points.len() - 1)
                } else {
                    NONE
                }
            })
            .collect();
        Self {
            point_of,
            points,
            first: vec![NONE; border.len()],
            next: Vec::new(),
        }
    }

    fn push(&mut self, mesh: &mut Mesh, point: u32, normal: Vector) -> u32 {
        mesh.vertices.push(Vertex { point, normal });
        self.next.push(NONE);
        index(mesh.vertices.len() - 1)
    }

    /// The mesh vertex of a border vertex with this normal.
    fn border(&mut self, mesh: &mut Mesh, vertex: u32, normal: Vector, smooth: f64) -> u32 {
        let mut last = NONE;
        let mut at = self.first[vertex as usize];
        while at != NONE {
            if mesh.vertices[at as usize].normal.dot(&normal) >= smooth {
                return at;
            }
            last = at;
            at = self.next[at as usize];
        }
        let new = self.push(mesh, self.point_of[vertex as usize], normal);
        if last == NONE {
            self.first[vertex as usize] = new;
        } else {
            self.next[last as usize] = new;
        }
        new
    }

    fn add(
        &mut self,
        mesh: &mut Mesh,
        filled: &Filled,
        normals: &[Vector],
        flipped: bool,
        smooth: f64,
    ) {
        let mut local = vec![NONE; filled.places.len()];
        for corners in &filled.triangles {
            let triangle = corners.map(|corner| {
                let at = corner as usize;
                if local[at] == NONE {
                    local[at] = if filled.vertices[at] == NONE {
                        mesh.points.push(filled.points[at]);
                        let point = index(mesh.points.len() - 1);
                        self.push(mesh, point, normals[at])
                    } else {
                        self.border(mesh, filled.vertices[at], normals[at], smooth)
                    };
                }
                local[at]
            });
            let [a, b, c] = triangle;
            mesh.triangles
                .push(if flipped { [a, c, b] } else { [a, b, c] });
        }
    }
}

fn index(at: usize) -> u32 {
    u32::try_from(at).expect("counts are limited before the run")
}
