//! Values on a grid over a piece, bilinear between its nodes.

use crate::sampling::ratio;

/// As many cells of one size along u as along v, and a value at every corner.
#[derive(Debug)]
pub(super) struct Grid<T> {
    cells: usize,
    /// v fastest.
    nodes: Vec<T>,
}

impl<T> Grid<T> {
    pub(super) fn new(cells: usize, nodes: Vec<T>) -> Self {
        debug_assert_eq!(nodes.len(), (cells + 1) * (cells + 1));
        Self { cells, nodes }
    }

    pub(super) fn nodes(&self) -> &[T] {
        &self.nodes
    }

    /// The nodes round a place, and the parts they have in a bilinear value.
    pub(super) fn around(&self, [u, v]: [f64; 2]) -> ([&T; 4], [f64; 4]) {
        let (i, x) = self.cell(u);
        let (j, y) = self.cell(v);
        let corner = i * (self.cells + 1) + j;
        let beyond = corner + self.cells + 1;
        let (x0, y0) = (1.0 - x, 1.0 - y);
        (
            [corner, corner + 1, beyond, beyond + 1].map(|node| &self.nodes[node]),
            [x0 * y0, x0 * y, x * y0, x * y],
        )
    }

    /// The cell of a parameter, and how far into it, 0 to 1 within the piece.
    #[allow(
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "a parameter in 0..1 times a cell count of at most a dozen"
    )]
    fn cell(&self, t: f64) -> (usize, f64) {
        let scaled = t * ratio(self.cells, 1);
        let cell = (scaled.max(0.0) as usize).min(self.cells - 1);
        (cell, scaled - ratio(cell, 1))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_is_bilinear_is_met() {
        let value = |u: f64, v: f64| 2.0 + u - 3.0 * v + 4.0 * u * v;
        let nodes = (0..16).map(|node| value(ratio(node / 4, 3), ratio(node % 4, 3)));
        let grid = Grid::new(3, nodes.collect());
        for (u, v) in [
            (0.0, 0.0),
            (0.1, 0.9),
            (0.5, 2.0 / 3.0),
            (1.0, 0.2),
            (1.0, 1.0),
        ] {
            let (corners, weights) = grid.around([u, v]);
            let met: f64 = corners.iter().zip(weights).map(|(c, w)| **c * w).sum();
            assert!((met - value(u, v)).abs() < 1e-14, "at ({u}, {v}): {met}");
        }
    }
}
