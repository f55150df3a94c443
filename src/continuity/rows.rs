//! The rows of a net beside one of its sides, as polynomials of the side's
//! parameter.

use crate::bezier::bernstein::Bernstein;
use crate::bezier::{BezierPatch, Side};
use crate::scalar::{Point, Vector};

/// A side of a piece and its rows; row 0 is the edge.
pub(super) struct Rows<'a> {
    surface: &'a BezierPatch,
    side: Side,
    origin: Point,
}

impl<'a> Rows<'a> {
    /// Coordinates are taken relative to `origin`.
    pub(super) fn new(surface: &'a BezierPatch, side: Side, origin: Point) -> Self {
        Self {
            surface,
            side,
            origin,
        }
    }

    /// Degrees along and across the side.
    pub(super) fn degrees(&self) -> [usize; 2] {
        let (m, n) = self.surface.degree();
        match self.side {
            Side::U0 | Side::U1 => [n, m],
            Side::V0 | Side::V1 => [m, n],
        }
    }

    /// 1 where the parameter across grows from the side inwards, else -1.
    pub(super) fn inwards(&self) -> f64 {
        match self.side {
            Side::U0 | Side::V0 => 1.0,
            Side::U1 | Side::V1 => -1.0,
        }
    }

    /// 1 where across x along is S_u x S_v, -1 where it is the opposite.
    pub(super) fn turned(&self) -> f64 {
        match self.side {
            Side::U0 | Side::U1 => 1.0,
            Side::V0 | Side::V1 => -1.0,
        }
    }

    fn index(&self, row: usize, k: usize) -> (usize, usize) {
        let (m, n) = self.surface.degree();
        match self.side {
            Side::U0 => (row, k),
            Side::U1 => (m - row, k),
            Side::V0 => (k, row),
            Side::V1 => (k, n - row),
        }
    }

    /// w of a row.
    pub(super) fn weights(&self, row: usize) -> Bernstein<f64> {
        let list = (0..=self.degrees()[0]).map(|k| {
            let (i, j) = self.index(row, k);
            self.surface.weight(i, j)
        });
        Bernstein(list.collect())
    }

    /// w S of a row.
    pub(super) fn places(&self, row: usize) -> Bernstein<Vector> {
        let list = (0..=self.degrees()[0]).map(|k| {
            let (i, j) = self.index(row, k);
            (self.surface.control_point(i, j) - self.origin) * self.surface.weight(i, j)
        });
        Bernstein(list.collect())
    }
}
