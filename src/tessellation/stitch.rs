//! Triangles between chains of points: rows zipped together, sides filled.

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
