//! The pieces of one surface on their grid of parameters.

use crate::bezier::{BezierCurve, BezierPatch, Side};

/// Bezier pieces on a grid: piece (i, j) stands at
/// `i * (breaks_v.len() - 1) + j` and covers `breaks_u[i]..breaks_u[i + 1]` by
/// `breaks_v[j]..breaks_v[j + 1]`.
#[derive(Debug, Clone)]
pub struct PieceGrid {
    /// Ascending parameters in u, end points included.
    pub breaks_u: Vec<f64>,
    /// The same in v.
    pub breaks_v: Vec<f64>,
    /// The pieces, v fastest.
    pub pieces: Vec<BezierPatch>,
}

impl PieceGrid {
    /// Splits rows and columns at their middle until no piece has an edge that
    /// ends where it starts without being collapsed (such an edge would have
    /// one node only), nor two opposite edges that are collapsed (a piece has
    /// one pole at most). Ends within `gap` count as one point, and so does an
    /// edge that keeps within `gap` of its start.
    pub(super) fn split_closed(mut self, gap: f64) -> Self {
        // Halves of a smooth loop are open at once; an edge that still closes
        // after eight halvings folds onto itself, and is left to the seams.
        for _ in 0..8 {
            let columns = self.breaks_v.len() - 1;
            let rows = self.breaks_u.len() - 1;
            let (mut split_u, mut split_v) = (vec![false; rows], vec![false; columns]);
            for (at, piece) in self.pieces.iter().enumerate() {
                let closed = |side| is_closed(&piece.edge(side), gap);
                split_u[at / columns] |= closed(Side::V0) || closed(Side::V1);
                split_v[at % columns] |= closed(Side::U0) || closed(Side::U1);
                let [u0, u1, v0, v1] = Side::ALL.map(|side| is_point(&piece.edge(side), gap));
                split_u[at / columns] |= u0 && u1 && !v0 && !v1;
                split_v[at % columns] |= v0 && v1 && !u0 && !u1;
            }
            if !split_u.iter().chain(&split_v).any(|&split| split) {
                break;
            }
            self = self.split(&split_u, &split_v);
        }
        self
    }

    fn split(self, split_u: &[bool], split_v: &[bool]) -> Self {
        let (breaks_u, ranges_u) = halved(&self.breaks_u, split_u);
        let (breaks_v, ranges_v) = halved(&self.breaks_v, split_v);
        let columns = self.breaks_v.len() - 1;
        let mut pieces = Vec::with_capacity(ranges_u.len() * ranges_v.len());
        for &(i, u) in &ranges_u {
            for &(j, v) in &ranges_v {
                let piece = &self.pieces[i * columns + j];
                pieces.push(match (u, v) {
                    (WHOLE, WHOLE) => piece.clone(),
                    _ => piece.restrict(u.limits(), v.limits()),
                });
            }
        }
        Self {
            breaks_u,
            breaks_v,
            pieces,
        }
    }
}

/// Which part of a piece.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Part {
    Whole,
    First,
    Second,
}

const WHOLE: Part = Part::Whole;

impl Part {
    fn limits(self) -> [f64; 2] {
        match self {
            Self::Whole => [0.0, 1.0],
            Self::First => [0.0, 0.5],
            Self::Second => [0.5, 1.0],
        }
    }
}

fn halved(breaks: &[f64], split: &[bool]) -> (Vec<f64>, Vec<(usize, Part)>) {
    let mut finer = vec![breaks[0]];
    let mut ranges = Vec::new();
    for (k, pair) in breaks.windows(2).enumerate() {
        if split[k] {
            finer.push(pair[0] + (pair[1] - pair[0]) / 2.0);
            ranges.extend([(k, Part::First), (k, Part::Second)]);
        } else {
            ranges.push((k, Part::Whole));
        }
        finer.push(pair[1]);
    }
    (finer, ranges)
}

fn is_closed(edge: &BezierCurve, gap: f64) -> bool {
    let start = edge.control_point(0);
    (edge.control_point(edge.degree()) - start).norm() <= gap && !is_point(edge, gap)
}

fn is_point(edge: &BezierCurve, gap: f64) -> bool {
    let start = edge.control_point(0);
    edge.control_points().all(|p| (p - start).norm() <= gap)
}
