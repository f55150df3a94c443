//! Triangles between chains of points: rows zipped together, sides filled.

use super::triangulation::{BORDER, TriangleEdge, is_proper, narrow};

/// Triangles between two chains that run the same way, `lower` to the right
/// of `upper` when seen along them (lower chain below when running in +p).
/// Greedy: the chain goes on whose new triangle has the smaller error.
pub(super) fn zip(
    lower: &[u32],
    upper: &[u32],
    mut error: impl FnMut([u32; 3]) -> f64,
    triangles: &mut Vec<[u32; 3]>,
) {
    let (mut i, mut j) = (0, 0);
    while i + 1 < lower.len() || j + 1 < upper.len() {
        let on_lower = (i + 1 < lower.len()).then(|| [lower[i], lower[i + 1], upper[j]]);
        let on_upper = (j + 1 < upper.len()).then(|| [lower[i], upper[j + 1], upper[j]]);
        let take_lower = match (on_lower, on_upper) {
            (Some(a), Some(b)) => error(a) <= error(b),
            (Some(_), None) => true,
            _ => false,
        };
        if take_lower {
            triangles.extend(on_lower);
            i += 1;
        } else {
            triangles.extend(on_upper);
            j += 1;
        }
    }
}

/// Triangles between rows, linked as they are made. `open` holds, for a vertex,
/// the edge from there along its row that the row above is to be linked to.
#[derive(Debug)]
pub(super) struct Strips {
    pub(super) triangles: Vec<[u32; 3]>,
    /// As in `Triangulation`.
    pub(super) neighbours: Vec<[u32; 3]>,
    open: Vec<Option<TriangleEdge>>,
    /// Whether every triangle so far has area and runs counterclockwise.
    pub(super) good: bool,
}

impl Strips {
    /// For rows made of this many vertices.
    pub(super) fn new(vertices: usize) -> Self {
        Self {
            triangles: Vec::with_capacity(2 * vertices),
            neighbours: Vec::with_capacity(2 * vertices),
            open: vec![None; vertices],
            good: true,
        }
    }

    /// Fills the strip between two rows, `lower` below, that may share their
    /// first and their last vertex. The chain goes on whose new triangle has the
    /// smaller error.
    pub(super) fn fill(
        &mut self,
        lower: &[u32],
        upper: &[u32],
        at: impl Fn(u32) -> [f64; 2],
        error: impl Fn([[f64; 2]; 3]) -> f64,
    ) {
        let (mut i, mut j) = (0, 0);
        let (mut lower_end, mut upper_end) = (lower.len() - 1, upper.len() - 1);
        // The edge towards what comes next.
        let mut ahead = None;
        if lower[0] == upper[0] {
            let t = self.push([lower[0], lower[1], upper[1]], &at, None);
            self.link_below(t, lower[0]);
            self.open[upper[0] as usize] = Some((t, 2));
            ahead = Some((t, 1));
            (i, j) = (1, 1);
        }
        let shared = lower[lower_end] == upper[upper_end] && lower_end > i && upper_end > j;
        if shared {
            lower_end -= 1;
            upper_end -= 1;
        }
        while i < lower_end || j < upper_end {
            let on_lower = (i < lower_end).then(|| [lower[i], lower[i + 1], upper[j]]);
            let on_upper = (j < upper_end).then(|| [lower[i], upper[j + 1], upper[j]]);
            let rate = |corners: [u32; 3]| {
                let places = corners.map(&at);
                if is_proper(places) {
                    error(places)
                } else {
                    f64::INFINITY
                }
            };
            let below = match (on_lower, on_upper) {
                (Some(a), Some(b)) => rate(a) <= rate(b),
                (a, _) => a.is_some(),
            };
            if below {
                let t = self.push([lower[i], lower[i + 1], upper[j]], &at, ahead);
                self.link_below(t, lower[i]);
                ahead = Some((t, 1));
                i += 1;
            } else {
                let t = self.push([lower[i], upper[j + 1], upper[j]], &at, ahead);
                self.open[upper[j] as usize] = Some((t, 1));
                ahead = Some((t, 0));
                j += 1;
            }
        }
        if shared {
            let t = self.push([lower[i], lower[i + 1], upper[j]], &at, ahead);
            self.link_below(t, lower[i]);
            self.open[upper[j] as usize] = Some((t, 1));
        }
    }

    /// Adds a triangle whose last edge is `behind`.
    fn push(
        &mut self,
        corners: [u32; 3],
        at: impl Fn(u32) -> [f64; 2],
        behind: Option<TriangleEdge>,
    ) -> u32 {
        self.good &= is_proper(corners.map(at));
        let t = narrow(self.triangles.len());
        self.triangles.push(corners);
        self.neighbours.push([BORDER; 3]);
        if let Some(behind) = behind {
            self.link((t, 2), behind);
        }
        t
    }

    /// Links the first edge of a triangle to the strip below.
    fn link_below(&mut self, t: u32, start: u32) {
        if let Some(below) = self.open[start as usize].take() {
            self.link((t, 0), below);
        }
    }

    fn link(&mut self, (t, i): TriangleEdge, (other, j): TriangleEdge) {
        self.neighbours[t as usize][i] = other;
        self.neighbours[other as usize][j] = t;
    }

    /// The other hand: for rows that were made in a mirror image.
    pub(super) fn mirrored(mut self) -> Self {
        for ([_, b, c], [ab, _, ca]) in self.triangles.iter_mut().zip(&mut self.neighbours) {
            std::mem::swap(b, c);
            std::mem::swap(ab, ca);
        }
        self
    }
}

/// Triangulates a polygon that is monotone from its first vertex to the last
/// of `lower`: both chains start at the same vertex and end at the same one,
/// `lower` to the right. Stack algorithm of Garey, Johnson, Preparata and
/// Tarjan (1978); linear, and right with runs of collinear points.
///
/// `before(a, b)` orders vertices along the direction of monotony; `is_proper`
/// tells whether three vertices make a counterclockwise triangle with area.
pub(super) fn monotone(
    lower: &[u32],
    upper: &[u32],
    before: impl Fn(u32, u32) -> bool,
    is_proper: impl Fn([u32; 3]) -> bool,
    triangles: &mut Vec<[u32; 3]>,
) {
    // Merge both chains; the common ends count as lower.
    let mut order: Vec<(u32, bool)> = vec![(lower[0], false)];
    let (mut i, mut j) = (1, 1);
    while i + 1 < lower.len() || j + 1 < upper.len() {
        let take_lower =
            i + 1 < lower.len() && (j + 1 >= upper.len() || before(lower[i], upper[j]));
        if take_lower {
            order.push((lower[i], false));
            i += 1;
        } else {
            order.push((upper[j], true));
            j += 1;
        }
    }
    let last = lower[lower.len() - 1];
    let mut emit = |a: u32, b: u32, c: u32| {
        triangles.push(if is_proper([a, b, c]) {
            [a, b, c]
        } else {
            [a, c, b]
        });
    };
    let mut stack: Vec<(u32, bool)> = vec![order[0]];
    for &(vertex, on_upper) in order.iter().skip(1) {
        let top = stack[stack.len() - 1];
        if stack.len() > 1 && top.1 != on_upper {
            for pair in stack.windows(2) {
                emit(pair[0].0, pair[1].0, vertex);
            }
            stack.clear();
            stack.push(top);
        } else {
            while let [.., second, first] = stack.as_slice() {
                let (b, a) = (second.0, first.0);
                let corners = if on_upper {
                    [b, vertex, a]
                } else {
                    [b, a, vertex]
                };
                if !is_proper(corners) {
                    break;
                }
                emit(b, a, vertex);
                stack.pop();
            }
        }
        stack.push((vertex, on_upper));
    }
    for pair in stack.windows(2) {
        emit(pair[0].0, pair[1].0, last);
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::tessellation::triangulation::{Triangulation, is_proper};

    #[test]
    fn a_side_with_a_zigzag_and_collinear_points_is_covered() {
        // Left side u = 0 with two inner points, column to its right zigzags.
        let places = vec![
            [0.0, 0.0],
            [0.0, 0.3],
            [0.0, 0.5],
            [0.0, 1.0],
            [0.3, 0.1],
            [0.1, 0.2],
            [0.4, 0.45],
            [0.1, 0.6],
            [0.5, 0.62],
            [0.2, 0.9],
            [1.0, 0.0],
            [1.0, 1.0],
        ];
        let at = |v: u32| places[v as usize];
        let proper = |corners: [u32; 3]| is_proper(corners.map(at));
        let before = |a: u32, b: u32| at(a)[1] <= at(b)[1];
        let column = [0, 4, 5, 6, 7, 8, 9, 3];
        let mut triangles = Vec::new();
        monotone(&column, &[0, 1, 2, 3], before, proper, &mut triangles);
        assert_eq!(triangles.len(), 8);
        // The rest of the square, to use the triangulation's own check.
        let before = |a: u32, b: u32| (at(a)[1], -at(a)[0]) <= (at(b)[1], -at(b)[0]);
        monotone(&[0, 10, 11, 3], &column, before, proper, &mut triangles);
        Triangulation::new(places.clone(), None, triangles).check();
    }

    #[test]
    fn the_square_with_samples_on_its_sides_is_covered() {
        let places = vec![
            [0.0, 0.0],
            [0.5, 0.0],
            [1.0, 0.0],
            [1.0, 0.4],
            [1.0, 1.0],
            [0.0, 0.2],
            [0.0, 0.7],
            [0.0, 1.0],
            [0.8, 1.0],
        ];
        let at = |v: u32| places[v as usize];
        let proper = |corners: [u32; 3]| is_proper(corners.map(at));
        let before = |a: u32, b: u32| (at(a)[0], at(a)[1]) < (at(b)[0], at(b)[1]);
        let mut triangles = Vec::new();
        monotone(
            &[0, 1, 2, 3, 4],
            &[0, 5, 6, 7, 8, 4],
            before,
            proper,
            &mut triangles,
        );
        Triangulation::new(places.clone(), None, triangles).check();
    }
}
