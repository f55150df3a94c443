//! Surface to mesh: rectangles of every piece against the facets below them.

use rayon::prelude::*;

use super::{Peak, Spot, Task};
use crate::bezier::BezierPatch;
use crate::patch_set::PieceId;
use crate::scalar::{Point, Vector};

/// Cells of the first grid in one parameter.
const MOST: usize = 400;

/// Cells looked at for one of the first grid, at most.
const BUDGET: usize = 3_000;

/// The first grid of a piece.
pub(super) struct Look {
    cells: [usize; 2],
    /// By cell: the facet nearest to its middle.
    hints: Vec<u32>,
    pub(super) peak: Peak,
}

/// What is proved of a piece.
pub(super) struct Proved {
    pub(super) bound: f64,
    pub(super) peak: Peak,
    pub(super) facets: Vec<(u32, f64)>,
    pub(super) over: Vec<(Spot, f64)>,
}

#[allow(clippy::cast_precision_loss, reason = "counts stay far below 2^52")]
fn ratio(k: usize, n: usize) -> f64 {
    k as f64 / n as f64
}

#[allow(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "the cast saturates"
)]
fn count(x: f64) -> usize {
    x as usize
}

/// Lengths of a piece along u and along v, sampled.
fn lengths(surface: &BezierPatch) -> [f64; 2] {
    let sum = |at: &dyn Fn(f64, f64) -> Point, s: f64| {
        (0..6)
            .map(|k| (at(ratio(k + 1, 6), s) - at(ratio(k, 6), s)).norm())
            .sum::<f64>()
    };
    let longest = |at: &dyn Fn(f64, f64) -> Point| {
        [0.0, 0.5, 1.0]
            .map(|s| sum(at, s))
            .into_iter()
            .fold(0.0, f64::max)
    };
    [
        longest(&|t, s| surface.eval(t, s)),
        longest(&|t, s| surface.eval(s, t)),
    ]
}

impl Task<'_> {
    /// Looks at the middles of a first grid of cells, about half a facet wide.
    pub(super) fn first_look(&self, present: &[bool]) -> Vec<Option<Look>> {
        let seeds = self.seeds(present);
        (0..self.set.pieces().len())
            .into_par_iter()
            .map(|piece| {
                let (seed, facets) = seeds[piece]?;
                let surface = &self.set.pieces()[piece].surface;
                let [a, b, _] = self.ground.corners(seed);
                let edge = (b - a).norm();
                let mut cells = lengths(surface)
                    .map(|length| count((2.0 * length / edge).ceil()).clamp(1, MOST));
                // No more than four cells a facet that has a corner here.
                while cells[0] * cells[1] > 16 + 6 * facets {
                    let longer = usize::from(cells[1] > cells[0]);
                    cells[longer] = cells[longer].div_ceil(2);
                }
                let mut hints = Vec::with_capacity(cells[0] * cells[1]);
                let mut peak: Option<Peak> = None;
                let mut row = seed;
                for i in 0..cells[0] {
                    let mut hint = row;
                    for j in 0..cells[1] {
                        let uv = [
                            (ratio(i, 1) + 0.5) / ratio(cells[0], 1),
                            (ratio(j, 1) + 0.5) / ratio(cells[1], 1),
                        ];
                        let found = self.peak(piece, uv, hint);
                        hint = found.facet;
                        if j == 0 {
                            row = hint;
                        }
                        hints.push(hint);
                        if peak.is_none_or(|p| found.distance > p.distance) {
                            peak = Some(found);
                        }
                    }
                }
                Some(Look {
                    cells,
                    hints,
                    peak: peak?,
                })
            })
            .collect()
    }

    /// A facet to begin with for every piece, and how many have corners on it.
    fn seeds(&self, present: &[bool]) -> Vec<Option<(u32, usize)>> {
        let mut seeds: Vec<Option<(u32, usize)>> = vec![None; present.len()];
        let mut corner: Vec<f64> = vec![f64::INFINITY; present.len()];
        for (t, spots) in (0_u32..).zip(self.spots) {
            for spot in spots {
                let piece = spot.piece.index();
                let seed = seeds[piece].get_or_insert((t, 0));
                seed.1 += 1;
                // The one nearest to where the first cell is.
                let away = spot.uv[0].hypot(spot.uv[1]);
                if away < corner[piece] {
                    corner[piece] = away;
                    seed.0 = t;
                }
            }
        }
        // Pieces that no corner lies on take their neighbours'.
        loop {
            let mut more = Vec::new();
            for seam in self.topology.seams() {
                let pieces = || {
                    let spans = seam.spans.iter();
                    spans.map(|id| self.topology.spans()[id.index()].edge.piece().index())
                };
                let known = pieces().find_map(|piece| seeds[piece]);
                if let Some((facet, _)) = known {
                    more.extend(
                        pieces()
                            .filter(|&p| present[p] && seeds[p].is_none())
                            .map(|p| (p, facet)),
                    );
                }
            }
            if more.is_empty() {
                break;
            }
            for (piece, facet) in more {
                seeds[piece].get_or_insert((facet, 0));
            }
        }
        for (piece, seed) in seeds.iter_mut().enumerate() {
            if !present[piece] {
                *seed = None;
            } else if seed.is_none() && !self.triangles.is_empty() {
                *seed = Some((0, 0));
            }
        }
        seeds
    }

    fn peak(&self, piece: usize, uv: [f64; 2], hint: u32) -> Peak {
        let point = self.set.pieces()[piece].surface.eval(uv[0], uv[1]);
        let (facet, distance) = self.ground.walk(hint, &point);
        Peak {
            distance,
            spot: Spot {
                piece: PieceId::new(piece),
                uv,
            },
            point,
            facet,
        }
    }

    /// The bound of every cell, piece by piece.
    pub(super) fn cells(&self, first: &[Option<Look>], attained: f64) -> Vec<Proved> {
        first
            .par_iter()
            .enumerate()
            .filter_map(|(piece, look)| look.as_ref().map(|look| self.piece(piece, look, attained)))
            .collect()
    }

    fn piece(&self, piece: usize, look: &Look, attained: f64) -> Proved {
        let surface = &self.set.pieces()[piece].surface;
        let mut proved = Proved {
            bound: 0.0,
            peak: look.peak,
            facets: Vec::new(),
            over: Vec::new(),
        };
        let [rows, columns] = look.cells;
        let mut stack: Vec<([f64; 2], [f64; 2], u32)> = Vec::new();
        let mut net: Vec<Vector> = Vec::new();
        for i in 0..rows {
            let u = [ratio(i, rows), ratio(i + 1, rows)];
            let strip = surface.restrict(u, [0.0, 1.0]);
            for j in 0..columns {
                let v = [ratio(j, columns), ratio(j + 1, columns)];
                stack.push((u, v, look.hints[i * columns + j]));
                let mut looked = 0;
                let mut whole = true;
                while let Some((u, v, hint)) = stack.pop() {
                    looked += 1;
                    let part = if whole {
                        strip.restrict([0.0, 1.0], v)
                    } else {
                        surface.restrict(u, v)
                    };
                    let middle = [(u[0] + u[1]) / 2.0, (v[0] + v[1]) / 2.0];
                    let hint = if whole {
                        hint
                    } else {
                        let here = self.peak(piece, middle, hint);
                        if here.distance > proved.peak.distance {
                            proved.peak = here;
                        }
                        here.facet
                    };
                    whole = false;
                    let origin = part.control_point(0, 0);
                    net.clear();
                    net.extend(part.control_points().map(|p| p - origin));
                    let goal = self.goal(attained.max(proved.peak.distance));
                    let bound = self.ground.bound(hint, &net, &origin, goal) + self.slack[piece];
                    let tiny = (u[1] - u[0]).max(v[1] - v[0]) < 1e-9;
                    if bound <= goal || looked >= BUDGET || tiny {
                        proved.bound = proved.bound.max(bound);
                        proved.facets.push((hint, bound));
                        if bound > self.chord {
                            let spot = Spot {
                                piece: PieceId::new(piece),
                                uv: middle,
                            };
                            proved.over.push((spot, bound));
                        }
                        continue;
                    }
                    for u in [[u[0], middle[0]], [middle[0], u[1]]] {
                        for v in [[v[0], middle[1]], [middle[1], v[1]]] {
                            stack.push((u, v, hint));
                        }
                    }
                }
            }
        }
        proved
    }
}
