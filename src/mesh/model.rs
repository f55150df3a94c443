//! The mesh in memory.

use std::ops::Range;

use crate::scalar::{LengthUnit, Point, Vector};

/// A corner as a renderer stores it: a geometric point with one normal. Where
/// normals differ (a crease, a cone's tip) several vertices share a point.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Vertex {
    /// Index into [`Mesh::points`].
    pub point: u32,
    /// Exact unit normal of the surface, outward; zero only where the surface
    /// has none.
    pub normal: Vector,
}

/// The triangles of one patch.
#[derive(Debug, Clone)]
pub struct Part {
    /// The patch's full name.
    pub name: String,
    /// Index into [`Mesh::panels`].
    pub panel: usize,
    /// Its triangles in [`Mesh::triangles`].
    pub triangles: Range<usize>,
}

/// An indexed triangle mesh: every geometric point once, shared by all that
/// meet there.
#[derive(Debug, Clone)]
pub struct Mesh {
    /// The set's name.
    pub name: String,
    /// The unit of all coordinates.
    pub unit: LengthUnit,
    /// Panel names, in order of first appearance.
    pub panels: Vec<String>,
    /// Geometric points.
    pub points: Vec<Point>,
    /// Points with normals.
    pub vertices: Vec<Vertex>,
    /// Indices into [`Mesh::vertices`], counterclockwise seen from outside.
    pub triangles: Vec<[u32; 3]>,
    /// One part a patch, in file order; together they cover all triangles.
    pub parts: Vec<Part>,
    /// Where asked for, the patch's own (u, v) of the corners of every
    /// triangle, by triangle: with the part's name all that is needed to prove
    /// the mesh anew. At a pole u (or v) is one of many that would do.
    pub evidence: Option<Vec<[[f64; 2]; 3]>>,
    /// Where triangles may cross seams and evidence is kept: the parts (indices
    /// into [`Mesh::parts`]) that the corners of every triangle lie on. A part may
    /// then have corners and no triangle of its own.
    pub corner_parts: Option<Vec<[u32; 3]>>,
}

impl Mesh {
    /// The three points of a triangle.
    #[must_use]
    pub fn triangle_points(&self, triangle: usize) -> [u32; 3] {
        self.triangles[triangle].map(|v| self.vertices[v as usize].point)
    }

    /// The three corners of a triangle in space.
    #[must_use]
    pub fn triangle_corners(&self, triangle: usize) -> [Point; 3] {
        self.triangle_points(triangle)
            .map(|p| self.points[p as usize])
    }
}
