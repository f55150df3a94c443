//! How many bytes a mesh takes as separate triangles, indexed and in strips.

use super::{Mesh, Strips};

/// Bytes of geometry alone, with a point of three 4-byte floats and indices
/// and markers of 4 bytes; V points, T triangles, S strips:
///
/// ```text
/// triangles       36 T                                   three points each
/// indexed         12 V + 12 T                            points, three indices each
/// strips          12 (T + 2 S) + 4 (S - 1)               points in strip order, a marker between two strips
/// indexed_strips  12 V + 4 (T + 2 S + S - 1)             points, strips of indices with restarts
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
        Self::of_counts(
            mesh.points.len() as u64,
            mesh.triangles.len() as u64,
            strips.len() as u64,
        )
    }

    /// The sizes from the numbers of points, triangles and strips.
    #[must_use]
    pub fn of_counts(points: u64, triangles: u64, strips: u64) -> Self {
        let consumed = triangles + 2 * strips;
        let markers = strips.saturating_sub(1);
        Self {
            triangles: 3 * triangles * Self::POINT,
            indexed: points * Self::POINT + 3 * triangles * Self::INDEX,
            strips: consumed * Self::POINT + markers * Self::INDEX,
            indexed_strips: points * Self::POINT + (consumed + markers) * Self::INDEX,
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
        let storage = Storage::of_counts(k * r + 2, 2 * k * r, 1);
        assert_eq!(
            [storage.triangles, storage.indexed, storage.strips],
            [44_064, 22_056, 14_712]
        );
    }
}
