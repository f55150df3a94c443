//! The size field: how long edges are to be at every place.
//!
//! ```text
//! request = min(size, panel's size,
//!               SAFE sqrt(8 e / (k1 + max(k2, 0) / 3)),   chord e, |k1| >= |k2|
//!               psi / |k1|)                               normal angle psi
//! h(x)    = min over y of request(y) + slope |x - y|,      slope = ln growth / 2
//! ```
//!
//! Over an equilateral triangle of edge h with its corners on the surface the
//! height is a quadratic form, h^2 (k1 + k2 / 3) / 8 at most if k1 and k2 have one
//! sign and h^2 k1 / 8 if not; SAFE allows for edges longer than the size. Requests
//! stand on a grid a piece and spread over grids and seams as in Dijkstra's
//! shortest ways; between nodes the field is bilinear. All of this is sampled.

use std::cmp::Reverse;
use std::collections::BinaryHeap;

use rayon::prelude::*;

use super::Sizing;
use super::atlas::{Place, carried};
use crate::bezier::BezierPatch;
use crate::patch_set::PatchSet;
use crate::scalar::{Point, Vector};
use crate::topology::{Topology, nearest_from};

/// The part of the largest size a chord allows that is aimed at.
const SAFE: f64 = 0.82;

/// Sizes keep to so many times the smallest edge asked for: single edges are that
/// much shorter than the size at their place.
const ABOVE: f64 = 1.75;

/// Cells of a grid in one parameter.
const FEWEST: usize = 4;
const MOST: usize = 64;

/// The part of the growth that sizes use: single edges are up to two thirds longer
/// than the size, and ways along a grid longer than straight ones.
const SLOPE: f64 = 0.5;

/// Sizes on one piece.
#[derive(Debug, Clone)]
struct Grid {
    cells: [usize; 2],
    points: Vec<Point>,
    h: Vec<f64>,
}

/// The size at every place.
#[derive(Debug, Clone)]
pub(super) struct Field {
    size: f64,
    least: f64,
    slope: f64,
    /// One a piece; none where one size rules everywhere.
    grids: Vec<Grid>,
}

/// A place where edges are to be no longer than this.
#[derive(Debug, Clone, Copy)]
pub(super) struct Source {
    pub(super) place: Place,
    pub(super) h: f64,
}

impl Field {
    /// The field of a set.
    pub(super) fn new(
        set: &PatchSet,
        topology: &Topology,
        sizing: &Sizing,
        sources: &[Source],
    ) -> Self {
        let mut field = Self {
            size: sizing.size,
            least: sizing
                .min_edge
                .map_or(0.0, |least| (ABOVE * least).min(sizing.size)),
            slope: SLOPE * sizing.growth.ln(),
            grids: Vec::new(),
        };
        let panel_sizes = set.panels().iter().any(|panel| panel.size.is_some());
        let varied = sizing.chord.is_some() || sizing.normal_rad.is_some() || panel_sizes;
        if varied || !sources.is_empty() {
            field.lay(set, sizing, sources);
            field.take(sources);
            field.spread(set, topology);
        }
        field
    }

    fn lay(&mut self, set: &PatchSet, sizing: &Sizing, sources: &[Source]) {
        let field = &*self;
        // Grids are as fine as the smallest source on them.
        let mut fine = vec![f64::INFINITY; set.pieces().len()];
        for source in sources {
            let of = &mut fine[source.place.piece as usize];
            *of = of.min(source.h);
        }
        let grids = set
            .pieces()
            .par_iter()
            .zip(&fine)
            .map(|(piece, &fine)| {
                let panel = &set.panels()[set.patches()[piece.patch.index()].panel.index()];
                let size = panel.size.map_or(sizing.size, |own| own.min(sizing.size));
                field.grid(&piece.surface, (size, fine), sizing)
            })
            .collect();
        self.grids = grids;
    }

    fn grid(&self, surface: &BezierPatch, (size, fine): (f64, f64), sizing: &Sizing) -> Grid {
        let cell = fine.min(size);
        let cells = lengths(surface).map(|length| count(length / cell).clamp(FEWEST, MOST));
        let nodes = (cells[0] + 1) * (cells[1] + 1);
        let mut grid = Grid {
            cells,
            points: Vec::with_capacity(nodes),
            h: Vec::with_capacity(nodes),
        };
        for i in 0..=cells[0] {
            for j in 0..=cells[1] {
                let jet = surface.jet(ratio(i, cells[0]), ratio(j, cells[1]));
                grid.points.push(jet.point);
                let mut h = size;
                if let Some((gaussian, mean)) = jet.gaussian_and_mean() {
                    let root = (mean * mean - gaussian).max(0.0).sqrt();
                    let (k1, k2) = (mean.abs() + root, mean.abs() - root);
                    if let Some(e) = sizing.chord {
                        h = h.min(SAFE * (8.0 * e / (k1 + k2.max(0.0) / 3.0)).sqrt());
                    }
                    if let Some(psi) = sizing.normal_rad {
                        h = h.min(psi / k1);
                    }
                }
                grid.h.push(h.max(self.least));
            }
        }
        grid
    }

    /// Lowers the nodes round each source.
    fn take(&mut self, sources: &[Source]) {
        for source in sources {
            let grid = &mut self.grids[source.place.piece as usize];
            let (nodes, weights) = grid.around(source.place.uv);
            let point: Vector = (0..4)
                .map(|k| grid.points[nodes[k]].coords * weights[k])
                .sum();
            for at in nodes {
                let away = (grid.points[at].coords - point).norm();
                let asked = (source.h + self.slope * away).max(self.least);
                grid.h[at] = grid.h[at].min(asked);
            }
        }
    }

    /// Whether no smaller size is aimed at than that at a place.
    pub(super) fn is_least(&self, place: Place) -> bool {
        self.at(place) <= self.least * (1.0 + 1e-9)
    }

    /// The size at a place.
    pub(super) fn at(&self, place: Place) -> f64 {
        if self.grids.is_empty() {
            return self.size;
        }
        let grid = &self.grids[place.piece as usize];
        let (nodes, weights) = grid.around(place.uv);
        (0..4).map(|k| grid.h[nodes[k]] * weights[k]).sum()
    }

    /// Lowers sizes until they grow no faster than asked along grids and seams.
    fn spread(&mut self, set: &PatchSet, topology: &Topology) {
        let firsts: Vec<usize> = self
            .grids
            .iter()
            .scan(0, |next, grid| {
                let first = *next;
                *next += grid.h.len();
                Some(first)
            })
            .collect();
        let bridges = self.bridges(set, topology, &firsts);
        let piece_of = |node: usize| firsts.partition_point(|&first| first <= node) - 1;
        let mut h: Vec<f64> = self
            .grids
            .iter()
            .flat_map(|g| g.h.iter().copied())
            .collect();
        // Positive doubles are ordered as their bits are.
        let mut heap: BinaryHeap<Reverse<(u64, usize)>> = h
            .iter()
            .enumerate()
            .map(|(node, h)| Reverse((h.to_bits(), node)))
            .collect();
        while let Some(Reverse((bits, node))) = heap.pop() {
            if bits != h[node].to_bits() {
                continue;
            }
            let piece = piece_of(node);
            let grid = &self.grids[piece];
            let here = grid.points[node - firsts[piece]];
            let mut reach = |other: usize, point: &Point| {
                let most = f64::from_bits(bits) + self.slope * (point - here).norm();
                if most < h[other] {
                    h[other] = most;
                    heap.push(Reverse((most.to_bits(), other)));
                }
            };
            for other in grid.neighbours(node - firsts[piece]) {
                reach(firsts[piece] + other, &grid.points[other]);
            }
            let from = bridges.partition_point(|b| b.0 < node);
            for &(_, other) in bridges[from..].iter().take_while(|b| b.0 == node) {
                let beyond = piece_of(other);
                reach(other, &self.grids[beyond].points[other - firsts[beyond]]);
            }
        }
        for (grid, first) in self.grids.iter_mut().zip(&firsts) {
            let count = grid.h.len();
            grid.h.copy_from_slice(&h[*first..*first + count]);
        }
    }

    /// Pairs of nodes of different pieces that lie beside each other on seams.
    fn bridges(
        &self,
        set: &PatchSet,
        topology: &Topology,
        firsts: &[usize],
    ) -> Vec<(usize, usize)> {
        let mut bridges: Vec<(usize, usize)> = topology
            .seams()
            .par_iter()
            .flat_map_iter(|seam| {
                let mut found = Vec::new();
                let spans = || seam.spans.iter().map(|id| &topology.spans()[id.index()]);
                for from in spans() {
                    for to in spans().filter(|to| !std::ptr::eq(*to, from)) {
                        let (a, b) = (from.edge.piece().index(), to.edge.piece().index());
                        let curve = set.pieces()[b].surface.edge(to.edge.side());
                        for (t, node) in self.grids[a].border(from.edge.side()) {
                            if t < from.t[0] - 1e-12 || t > from.t[1] + 1e-12 {
                                continue;
                            }
                            let guess = carried(from, to, t);
                            let point = self.grids[a].points[node];
                            let foot = nearest_from(&curve, &point, guess, to.t).t;
                            let uv = to.edge.side().at(foot);
                            let (nodes, weights) = self.grids[b].around(uv);
                            for k in (0..4).filter(|&k| weights[k] > 0.0) {
                                let pair = [firsts[a] + node, firsts[b] + nodes[k]];
                                found.push((pair[0], pair[1]));
                                found.push((pair[1], pair[0]));
                            }
                        }
                    }
                }
                found
            })
            .collect();
        bridges.sort_unstable();
        bridges.dedup();
        bridges
    }
}

impl Grid {
    /// The nodes of the cell round a place, and their bilinear weights.
    fn around(&self, [u, v]: [f64; 2]) -> ([usize; 4], [f64; 4]) {
        let [(i, a), (j, b)] = [(u, self.cells[0]), (v, self.cells[1])].map(|(t, cells)| {
            let scaled = t * ratio(cells, 1);
            let cell = count(scaled).min(cells - 1);
            (cell, (scaled - ratio(cell, 1)).clamp(0.0, 1.0))
        });
        let row = self.cells[1] + 1;
        let node = i * row + j;
        (
            [node, node + 1, node + row, node + row + 1],
            [(1.0 - a) * (1.0 - b), (1.0 - a) * b, a * (1.0 - b), a * b],
        )
    }

    fn neighbours(&self, node: usize) -> impl Iterator<Item = usize> + use<> {
        let [rows, columns] = self.cells;
        let width = columns + 1;
        let (i, j) = (node / width, node % width);
        let near = |at: usize, most: usize| at.saturating_sub(1)..=(at + 1).min(most);
        near(i, rows)
            .flat_map(move |i| near(j, columns).map(move |j| i * width + j))
            .filter(move |&other| other != node)
    }

    /// The nodes of one side with their parameters.
    fn border(&self, side: crate::bezier::Side) -> impl Iterator<Item = (f64, usize)> + use<> {
        use crate::bezier::Side;
        let [rows, columns] = self.cells;
        let width = columns + 1;
        let most = match side {
            Side::U0 | Side::U1 => columns,
            Side::V0 | Side::V1 => rows,
        };
        (0..=most).map(move |k| {
            let node = match side {
                Side::U0 => k,
                Side::U1 => rows * width + k,
                Side::V0 => k * width,
                Side::V1 => k * width + columns,
            };
            (ratio(k, most), node)
        })
    }
}

/// How long a piece is along u and along v: the longest of three chords' sums.
pub(super) fn lengths(surface: &BezierPatch) -> [f64; 2] {
    let length = |at: &dyn Fn(f64, f64) -> Point| {
        [0.0, 0.5, 1.0]
            .map(|s| {
                (0..8_u8)
                    .map(|k| {
                        let (a, b) = (f64::from(k) / 8.0, f64::from(k + 1) / 8.0);
                        (at(b, s) - at(a, s)).norm()
                    })
                    .sum::<f64>()
            })
            .into_iter()
            .fold(0.0, f64::max)
    };
    [
        length(&|t, s| surface.eval(t, s)),
        length(&|t, s| surface.eval(s, t)),
    ]
}

/// The whole part of a number that is not negative.
#[allow(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "the cast saturates"
)]
pub(super) fn count(x: f64) -> usize {
    x as usize
}

#[allow(clippy::cast_precision_loss, reason = "counts stay far below 2^52")]
pub(super) fn ratio(k: usize, n: usize) -> f64 {
    k as f64 / n as f64
}
