//! What is drawn: a mesh that knows the place of every corner on its patch.

use std::collections::BTreeMap;

use rayon::prelude::*;
use thiserror::Error;

use super::camera::Camera;
use crate::mesh::Mesh;
use crate::patch_set::{Patch, PatchSet, Piece};
use crate::scalar::{Point, Vector};

/// A mesh that cannot be drawn.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Error)]
#[error("mesh: no evidence of patch, u and v; pictures need a mesh made with evidence")]
pub struct NoEvidence;

/// A mesh with its set.
#[derive(Debug)]
pub struct Scene<'a> {
    /// The set.
    pub set: &'a PatchSet,
    /// The mesh.
    pub mesh: &'a Mesh,
    /// The piece of every triangle, by number.
    pieces: Vec<u32>,
    /// The patch's own (u, v) of the corners, by triangle.
    places: &'a [[[f64; 2]; 3]],
}

/// The surface at a place of the picture.
#[derive(Debug, Clone, Copy)]
pub struct Sight {
    /// Parameters on the piece.
    pub place: [f64; 2],
    /// Place and derivatives.
    pub jet: crate::bezier::SurfaceJet,
    /// The outward unit normal; `None` where the surface has none.
    pub normal: Option<Vector>,
    /// 1, or -1 where S_u x S_v points inward.
    pub outward: f64,
}

impl<'a> Scene<'a> {
    /// A mesh that carries evidence, made from this set.
    ///
    /// # Errors
    /// [`NoEvidence`] where the mesh carries none.
    pub fn new(set: &'a PatchSet, mesh: &'a Mesh) -> Result<Self, NoEvidence> {
        let places = mesh.evidence.as_deref().ok_or(NoEvidence)?;
        let named: BTreeMap<&str, &Patch> =
            set.patches().iter().map(|p| (p.name.as_str(), p)).collect();
        let mut pieces = vec![0; mesh.triangles.len()];
        for part in &mesh.parts {
            let patch = named.get(part.name.as_str()).ok_or(NoEvidence)?;
            pieces[part.triangles.clone()]
                .par_iter_mut()
                .zip(&places[part.triangles.clone()])
                .for_each(|(piece, corners)| *piece = number(patch.piece_at(middle(corners))));
        }
        Ok(Self {
            set,
            mesh,
            pieces,
            places,
        })
    }

    /// The number of the piece a triangle lies on.
    #[must_use]
    pub fn piece(&self, triangle: usize) -> usize {
        self.pieces[triangle] as usize
    }

    /// The panel a triangle belongs to.
    #[must_use]
    pub fn panel(&self, triangle: usize) -> usize {
        let piece = &self.set.pieces()[self.piece(triangle)];
        self.set.patches()[piece.patch.index()].panel.index()
    }

    /// The surface over a triangle at these barycentric coordinates, as `camera`
    /// sees it: the parameters are moved until the surface point stands where the
    /// triangle's point does, to a fiftieth of a pixel: narrow stripes show less.
    #[must_use]
    pub fn sight(&self, triangle: usize, weights: [f64; 3], camera: &Camera) -> Sight {
        let piece = &self.set.pieces()[self.piece(triangle)];
        let corners = self.mesh.triangle_corners(triangle);
        let at = (0..3).fold(Vector::zeros(), |sum, k| {
            sum + corners[k].coords * weights[k]
        });
        let mut place = local(piece, &self.places[triangle], weights);
        let mut jet = piece.surface.jet(place[0], place[1]);
        for _ in 0..3 {
            let off = at - jet.point.coords;
            let Some(step) = tangent_step(&jet, &off) else {
                break;
            };
            let moved = (jet.du * step[0] + jet.dv * step[1]).norm();
            if moved < 0.02 * camera.pixel {
                break;
            }
            place = [0, 1].map(|i| (place[i] + step[i]).clamp(0.0, 1.0));
            jet = piece.surface.jet(place[0], place[1]);
        }
        let flipped = self.set.patches()[piece.patch.index()].flipped;
        let outward = if flipped { -1.0 } else { 1.0 };
        let normal = jet
            .normal()
            .or_else(|| piece.surface.normal(place[0], place[1]))
            .map(|n| n * outward);
        Sight {
            place,
            jet,
            normal,
            outward,
        }
    }

    /// The normals stored at a triangle's corners, weighted: near to the surface's
    /// and quick to find.
    #[must_use]
    pub fn mesh_normal(&self, triangle: usize, weights: [f64; 3]) -> Vector {
        let corners = self.mesh.triangles[triangle];
        (0..3).fold(Vector::zeros(), |sum, k| {
            sum + self.mesh.vertices[corners[k] as usize].normal * weights[k]
        })
    }

    /// The patch's own (u, v) of corner `k` of a triangle.
    #[must_use]
    pub fn corner(&self, triangle: usize, k: usize) -> [f64; 2] {
        self.places[triangle][k]
    }

    /// The parameters of corner `k` of a triangle on its piece's unit square.
    #[must_use]
    pub fn local_corner(&self, triangle: usize, k: usize) -> [f64; 2] {
        let mut weights = [0.0; 3];
        weights[k] = 1.0;
        let piece = &self.set.pieces()[self.piece(triangle)];
        local(piece, &self.places[triangle], weights)
    }

    /// Gaussian and mean curvature at corner `k` of a triangle.
    #[must_use]
    pub fn corner_curvatures(&self, triangle: usize, k: usize) -> Option<(f64, f64)> {
        let mut weights = [0.0; 3];
        weights[k] = 1.0;
        self.curvatures(triangle, weights)
    }

    /// Gaussian and mean curvature at the middle of a triangle's parameters.
    #[must_use]
    pub fn middle_curvatures(&self, triangle: usize) -> Option<(f64, f64)> {
        self.curvatures(triangle, [1.0 / 3.0; 3])
    }

    fn curvatures(&self, triangle: usize, weights: [f64; 3]) -> Option<(f64, f64)> {
        let piece = &self.set.pieces()[self.piece(triangle)];
        let [u, v] = local(piece, &self.places[triangle], weights);
        let (gaussian, mean) = piece.surface.jet(u, v).gaussian_and_mean()?;
        let flipped = self.set.patches()[piece.patch.index()].flipped;
        Some((gaussian, if flipped { -mean } else { mean }))
    }

    /// The points of all triangles of a panel, or of all panels.
    pub fn points(&self, panel: Option<usize>) -> impl Iterator<Item = &Point> + '_ {
        let parts = self.mesh.parts.iter();
        parts
            .filter(move |part| panel.is_none_or(|p| part.panel == p))
            .flat_map(|part| part.triangles.clone())
            .flat_map(|t| self.mesh.triangle_points(t))
            .map(|p| &self.mesh.points[p as usize])
    }
}

impl Sight {
    /// Gaussian and mean curvature, the mean positive where the surface bends
    /// towards its outward side.
    #[must_use]
    pub fn gaussian_and_mean(&self) -> Option<(f64, f64)> {
        let (gaussian, mean) = self.jet.gaussian_and_mean()?;
        Some((gaussian, mean * self.outward))
    }

    /// The outward normal a small tangent step away: S_u and S_v change by the
    /// second derivatives.
    #[must_use]
    pub fn normal_beside(&self, step: &Vector) -> Option<Vector> {
        let [a, b] = tangent_step(&self.jet, step)?;
        let du = self.jet.du + self.jet.duu * a + self.jet.duv * b;
        let dv = self.jet.dv + self.jet.duv * a + self.jet.dvv * b;
        (du.cross(&dv) * self.outward).try_normalize(0.0)
    }
}

/// The principal curvature of larger size from Gaussian and mean curvature.
#[must_use]
pub fn largest_principal(gaussian: f64, mean: f64) -> f64 {
    let root = (mean * mean - gaussian).max(0.0).sqrt();
    if mean < 0.0 { mean - root } else { mean + root }
}

/// Steps of the parameters towards `off`; `None` where the tangent plane is not
/// defined.
fn tangent_step(jet: &crate::bezier::SurfaceJet, off: &Vector) -> Option<[f64; 2]> {
    let step = jet.steps_along(off, 1e-12)?;
    step.iter().all(|s| s.is_finite()).then_some(step)
}

fn number(piece: usize) -> u32 {
    u32::try_from(piece).expect("pieces are numbered in 32 bits")
}

fn middle(corners: &[[f64; 2]; 3]) -> [f64; 2] {
    [0, 1].map(|i| (corners[0][i] + corners[1][i] + corners[2][i]) / 3.0)
}

/// The weighted parameters on the unit square of the piece.
fn local(piece: &Piece, corners: &[[f64; 2]; 3], weights: [f64; 3]) -> [f64; 2] {
    let place = [0, 1].map(|i| (0..3).fold(0.0, |sum, k| sum + corners[k][i] * weights[k]));
    piece.unit_parameters(place)
}
