//! How many bytes a mesh takes as separate triangles, indexed and in strips.

use super::{Mesh, Strips};

/// Bytes of geometry alone, with a point of three 4-byte floats and indices
/// and restarts of 4 bytes; V points, T triangles, S strips of I indices in
/// all without restarts (T + 2 S, and the repeated ones):
///
/// ```text
/// triangles       36 T                        three points each
/// indexed         12 V + 12 T                 points, three indices each
/// strips          12 I + 4 (S - 1)            points in strip order, a restart between two strips
/// indexed_strips  12 V + 4 (I + S - 1)        points, strips of indices with restarts
/// ```
///
/// Normals, names and what a format adds are left out, so that the figures
/// compare the ways of storing and nothing else.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Storage {
    /// Every triangle with its own three points.
    pub triangles: u64,
    /// Points once, three indices a triangle.
    pub indexed: u64,
    /// Points in strip order.
    pub strips: u64,
    /// Points once, strips of indices.
    pub indexed_strips: u64,
}

impl Storage {
    const POINT: u64 = 12;
    const INDEX: u64 = 4;

    /// The sizes of a mesh with these strips.
    #[must_use]
    pub fn of(mesh: &Mesh, strips: &Strips) -> Self {
        let restarts = strips.len().saturating_sub(1);
        Self::of_counts(
            mesh.points.len() as u64,
            mesh.triangles.len() as u64,
            (strips.indices().len() - restarts) as u64,
            restarts as u64,
        )
    }

    /// The sizes from counts: `indices` of strips without their restarts.
    #[must_use]
    pub fn of_counts(points: u64, triangles: u64, indices: u64, restarts: u64) -> Self {
        Self {
            triangles: 3 * triangles * Self::POINT,
            indexed: points * Self::POINT + 3 * triangles * Self::INDEX,
            strips: indices * Self::POINT + restarts * Self::INDEX,
            indexed_strips: points * Self::POINT + (indices + restarts) * Self::INDEX,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// The longitude-latitude sphere of 36 meridians and 17 rings, by the
    /// arithmetic V = k r + 2, F = 2 k r: 614 points and 1,224 triangles take
    /// 44,064, 22,056 and, as one ideal strip, 14,712 bytes.
    #[test]
    fn longitude_latitude_sphere() {
        let (k, r) = (36, 17);
        let storage = Storage::of_counts(k * r + 2, 2 * k * r, 2 * k * r + 2, 0);
        assert_eq!(
            [storage.triangles, storage.indexed, storage.strips],
            [44_064, 22_056, 14_712]
        );
    }
}
