//! Who shares an edge: the sides of all triangles, grouped by the unordered
//! pair of their end points.
//!
//! Sides are put into one bucket for each lesser end point by counting, then
//! each bucket is sorted by the other end point and the side: the time is
//! linear in the triangles but for the logarithm of a point's valence, the
//! memory eight bytes a side, and the order a function of the triangles alone.

/// Stands for no side.
pub(super) const NO_SIDE: u32 = u32::MAX;

/// The sides of some triangles, edge by edge. Side `3 t + c` of triangle `t`
/// runs from its corner `c` to its corner `(c + 1) mod 3`.
pub(crate) struct EdgeTable {
    /// Bucket of each lesser end point in `entries`.
    starts: Vec<usize>,
    /// Greater end point in the upper half, side in the lower half.
    entries: Vec<u64>,
}

/// All sides that lie on one edge.
pub(crate) struct EdgeUses<'a> {
    /// The lesser end point.
    pub(crate) low: u32,
    entries: &'a [u64],
}

/// The side after another one in its triangle.
pub(super) fn next_side(side: u32) -> u32 {
    if side % 3 == 2 { side - 2 } else { side + 1 }
}

/// The side before another one in its triangle.
pub(super) fn previous_side(side: u32) -> u32 {
    if side.is_multiple_of(3) {
        side + 2
    } else {
        side - 1
    }
}

/// The corner of its triangle at which a side begins.
pub(super) fn origin(triangles: &[[u32; 3]], side: u32) -> u32 {
    triangles[(side / 3) as usize][(side % 3) as usize]
}

/// Whether two corners of a triangle are one.
pub(super) fn is_degenerate([a, b, c]: [u32; 3]) -> bool {
    a == b || b == c || c == a
}

impl EdgeTable {
    /// Groups the sides of triangles whose corners count below `points`.
    /// Triangles with a repeated corner have no sides.
    pub(crate) fn new(triangles: &[[u32; 3]], points: usize) -> Self {
        let sides = || {
            triangles
                .iter()
                .zip(0_u32..)
                .filter(|(corners, _)| !is_degenerate(**corners))
                .flat_map(|(&[a, b, c], t)| [(a, b, 3 * t), (b, c, 3 * t + 1), (c, a, 3 * t + 2)])
        };
        assert!(
            triangles.len() < (u32::MAX / 3) as usize,
            "sides are counted in 32 bits, which no mesh that fits in memory exceeds"
        );
        let mut starts = vec![0_usize; points + 1];
        for (a, b, _) in sides() {
            starts[a.min(b) as usize + 1] += 1;
        }
        for i in 0..points {
            starts[i + 1] += starts[i];
        }
        let mut entries = vec![0_u64; starts[points]];
        // While filling, a bucket's start runs to its end, which is the start
        // of the next one; shifting by one place afterwards restores it.
        for (a, b, side) in sides() {
            let slot = &mut starts[a.min(b) as usize];
            entries[*slot] = u64::from(a.max(b)) << 32 | u64::from(side);
            *slot += 1;
        }
        starts.rotate_right(1);
        starts[0] = 0;
        for bucket in starts.windows(2) {
            entries[bucket[0]..bucket[1]].sort_unstable();
        }
        Self { starts, entries }
    }

    /// The edges, ordered by their end points.
    pub(crate) fn edges(&self) -> impl Iterator<Item = EdgeUses<'_>> {
        self.starts
            .windows(2)
            .zip(0_u32..)
            .flat_map(move |(bucket, low)| {
                self.entries[bucket[0]..bucket[1]]
                    .chunk_by(|a, b| a >> 32 == b >> 32)
                    .map(move |entries| EdgeUses { low, entries })
            })
    }

    /// For every side the side of the neighbour across its edge, or
    /// [`NO_SIDE`] where the edge is open or is not shared by exactly two
    /// triangles that run it in opposite directions.
    pub(super) fn twins(&self, triangles: &[[u32; 3]]) -> Vec<u32> {
        let mut twins = vec![NO_SIDE; triangles.len() * 3];
        for edge in self.edges() {
            if let Some([a, b]) = edge.pair(triangles) {
                twins[a as usize] = b;
                twins[b as usize] = a;
            }
        }
        twins
    }
}

impl EdgeUses<'_> {
    /// The greater end point.
    pub(crate) fn high(&self) -> u32 {
        u32::try_from(self.entries[0] >> 32).expect("the shift leaves 32 bits")
    }

    /// How many triangles lie on the edge.
    pub(crate) fn len(&self) -> usize {
        self.entries.len()
    }

    /// The sides, ascending.
    pub(crate) fn sides(&self) -> impl Iterator<Item = u32> {
        self.entries
            .iter()
            .map(|entry| u32::try_from(entry & 0xFFFF_FFFF).expect("the mask leaves 32 bits"))
    }

    /// The two sides of an ordinary inner edge: exactly two, in opposite
    /// directions.
    pub(super) fn pair(&self, triangles: &[[u32; 3]]) -> Option<[u32; 2]> {
        let mut sides = self.sides();
        let pair = [sides.next()?, sides.next()?];
        let forward = pair.map(|side| origin(triangles, side) == self.low);
        (self.len() == 2 && forward[0] != forward[1]).then_some(pair)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn edges_of_a_tetrahedron_are_six_pairs() {
        let triangles = [[0, 2, 1], [0, 1, 3], [1, 2, 3], [2, 0, 3]];
        let table = EdgeTable::new(&triangles, 4);
        assert_eq!(table.edges().count(), 6);
        assert!(table.edges().all(|edge| edge.pair(&triangles).is_some()));
        let twins = table.twins(&triangles);
        for (&twin, side) in twins.iter().zip(0_u32..) {
            assert_eq!(
                origin(&triangles, side),
                origin(&triangles, next_side(twin))
            );
            assert_eq!(previous_side(next_side(side)), side);
        }
    }

    #[test]
    fn what_is_not_a_pair_has_no_twin() {
        // Three sheets on the edge 0-1, and two triangles that run 5-6 the same way.
        let triangles = [[0, 1, 2], [1, 0, 3], [0, 1, 4], [5, 6, 7], [5, 6, 8]];
        let table = EdgeTable::new(&triangles, 9);
        assert!(table.twins(&triangles).iter().all(|&twin| twin == NO_SIDE));
        assert_eq!(table.edges().map(|edge| edge.len()).max(), Some(3));
    }
}
