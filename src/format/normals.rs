//! Vertex normals as formats want them: of unit length, always.

use std::collections::BTreeMap;

use crate::mesh::Mesh;
use crate::scalar::Vector;

/// The normals of a mesh, with a stand-in where the surface has none.
pub(super) struct Normals<'a> {
    mesh: &'a Mesh,
    /// For vertices without a normal: the area-weighted mean of the normals of
    /// the triangles that use the vertex, or z where that vanishes.
    replaced: BTreeMap<u32, Vector>,
}

impl<'a> Normals<'a> {
    pub(super) fn of(mesh: &'a Mesh) -> Self {
        let mut replaced: BTreeMap<u32, Vector> = (0_u32..)
            .zip(&mesh.vertices)
            .filter(|(_, vertex)| unit(vertex.normal).is_none())
            .map(|(v, _)| (v, Vector::zeros()))
            .collect();
        if !replaced.is_empty() {
            for (t, corners) in mesh.triangles.iter().enumerate() {
                for v in corners {
                    if let Some(sum) = replaced.get_mut(v) {
                        *sum += facet(mesh, t);
                    }
                }
            }
            for sum in replaced.values_mut() {
                *sum = unit(*sum).unwrap_or_else(Vector::z);
            }
        }
        Self { mesh, replaced }
    }

    /// The unit normal of a vertex.
    pub(super) fn get(&self, vertex: u32) -> Vector {
        if self.replaced.is_empty() {
            return self.mesh.vertices[vertex as usize].normal;
        }
        self.replaced
            .get(&vertex)
            .copied()
            .unwrap_or(self.mesh.vertices[vertex as usize].normal)
    }
}

/// Twice the area of a triangle as a vector along its normal.
pub(super) fn facet(mesh: &Mesh, triangle: usize) -> Vector {
    let [a, b, c] = mesh.triangle_corners(triangle);
    (b - a).cross(&(c - a))
}

/// A vector made to unit length, unless it is zero or not finite.
pub(super) fn unit(vector: Vector) -> Option<Vector> {
    let scale = vector.amax();
    (scale > 0.0 && scale.is_finite()).then(|| (vector / scale).normalize())
}
