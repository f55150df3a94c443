//! Holes in a triangulation: the triangles round a vertex replaced by others.

use super::triangulation::{BORDER, Triangulation};

/// Triangles and neighbours as they were before a hole was closed otherwise.
pub(super) type Before = Vec<([u32; 3], [u32; 3])>;

impl Triangulation {
    /// The triangles round `vertex`, counterclockwise from `t`; none if the
    /// border cuts the fan.
    pub(super) fn star(&self, t: u32, vertex: u32) -> Vec<u32> {
        let mut star = vec![t];
        let mut at = t;
        loop {
            let next = self.neighbours[at as usize][(self.corner_of(at, vertex) + 2) % 3];
            if next == t {
                return star;
            }
            if next == BORDER {
                return Vec::new();
            }
            star.push(next);
            at = next;
        }
    }

    /// Gives the first triangles of a star new corners, which fill the star's
    /// outline; the others are left without a neighbour that knows them.
    pub(super) fn replace(&mut self, star: &[u32], triangles: &[[u32; 3]]) -> Before {
        let before = star
            .iter()
            .map(|&t| (self.triangles[t as usize], self.neighbours[t as usize]))
            .collect();
        let mut outline = Vec::with_capacity(star.len());
        for &t in star {
            for i in 0..3 {
                let other = self.neighbours[t as usize][i];
                if !star.contains(&other) {
                    let back = (other != BORDER).then(|| (other, self.edge_towards(other, t)));
                    let corners = self.triangles[t as usize];
                    outline.push(([corners[i], corners[(i + 1) % 3]], back));
                }
            }
        }
        for (k, (&t, &corners)) in star.iter().zip(triangles).enumerate() {
            self.triangles[t as usize] = corners;
            for i in 0..3 {
                let [a, b] = [corners[i], corners[(i + 1) % 3]];
                let outer = outline.iter().find(|(edge, _)| *edge == [a, b]);
                let neighbour = match outer {
                    Some((_, Some((other, j)))) => {
                        self.neighbours[*other as usize][*j] = t;
                        *other
                    }
                    Some((_, None)) => BORDER,
                    None => {
                        let beside = triangles.iter().enumerate().position(|(l, other)| {
                            l != k && (0..3).any(|j| [other[(j + 1) % 3], other[j]] == [a, b])
                        });
                        star[beside.expect("new triangles meet in their inner edges")]
                    }
                };
                self.neighbours[t as usize][i] = neighbour;
            }
        }
        before
    }

    /// Undoes `replace`.
    pub(super) fn put_back(&mut self, star: &[u32], before: Before) {
        for (&t, (corners, neighbours)) in star.iter().zip(before) {
            self.triangles[t as usize] = corners;
            self.neighbours[t as usize] = neighbours;
        }
        for &t in star {
            for i in 0..3 {
                let other = self.neighbours[t as usize][i];
                if other != BORDER && !star.contains(&other) {
                    let corners = self.triangles[t as usize];
                    let edge = [corners[(i + 1) % 3], corners[i]];
                    let there = self.triangles[other as usize];
                    let j = (0..3).find(|&j| [there[j], there[(j + 1) % 3]] == edge);
                    let j = j.expect("neighbours share an edge");
                    self.neighbours[other as usize][j] = t;
                }
            }
        }
    }
}
