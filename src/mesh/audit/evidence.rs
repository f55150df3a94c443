//! What an audit reads: points, triangles, and where on which patch each
//! corner is said to lie.

use std::collections::BTreeMap;

use crate::mesh::Mesh;
use crate::scalar::{LengthUnit, Point};

/// A mesh that says where it comes from.
#[derive(Debug, Clone, PartialEq)]
pub struct Evidence {
    /// The name of the set it was made from.
    pub set: String,
    /// The unit of all coordinates.
    pub unit: LengthUnit,
    /// Full names of patches, in the order in which [`Face::patch`] counts.
    pub patches: Vec<String>,
    /// Geometric points.
    pub points: Vec<Point>,
    /// The triangles.
    pub faces: Vec<Face>,
}

/// One triangle of an [`Evidence`].
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Face {
    /// Indices into [`Evidence::points`], counterclockwise seen from outside.
    pub points: [u32; 3],
    /// Index into [`Evidence::patches`].
    pub patch: u32,
    /// The patch's own (u, v) of the corners.
    pub places: [[f64; 2]; 3],
    /// Where triangles may lie on several patches: the patch of each corner, to
    /// which its place belongs. Indices into [`Evidence::patches`].
    pub corner_patches: Option<[u32; 3]>,
}

impl Evidence {
    /// The evidence a mesh carries, if it was made to carry any.
    #[must_use]
    pub fn of(mesh: &Mesh) -> Option<Self> {
        let places = mesh.evidence.as_ref()?;
        let mut faces = Vec::with_capacity(mesh.triangles.len());
        for (number, part) in (0_u32..).zip(&mesh.parts) {
            faces.extend(part.triangles.clone().map(|t| Face {
                points: mesh.triangle_points(t),
                patch: number,
                places: places[t],
                corner_patches: mesh.corner_parts.as_ref().map(|parts| parts[t]),
            }));
        }
        Some(Self {
            set: mesh.name.clone(),
            unit: mesh.unit,
            patches: mesh.parts.iter().map(|part| part.name.clone()).collect(),
            points: mesh.points.clone(),
            faces,
        })
    }

    /// Makes points with bitwise equal coordinates one: files that repeat a
    /// point for every triangle or normal say by that which points are shared.
    pub fn merge_repeated(&mut self) {
        let mut first: BTreeMap<[u64; 3], u32> = BTreeMap::new();
        let mut points = Vec::new();
        let merged: Vec<u32> = self
            .points
            .iter()
            .map(|point| {
                let key = [point.x, point.y, point.z].map(f64::to_bits);
                *first.entry(key).or_insert_with(|| {
                    points.push(*point);
                    u32::try_from(points.len() - 1).expect("no more than there were")
                })
            })
            .collect();
        self.points = points;
        for face in &mut self.faces {
            face.points = face.points.map(|p| merged[p as usize]);
        }
    }

    /// Whether triangles may lie on several patches.
    #[must_use]
    pub fn is_wide(&self) -> bool {
        self.faces.iter().any(|face| face.corner_patches.is_some())
    }

    /// The three corners of a triangle in space.
    pub(super) fn corners(&self, face: &Face) -> [Point; 3] {
        face.points.map(|p| self.points[p as usize])
    }
}
