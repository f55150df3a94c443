//! Patches that lie on one another, and slivers: judged on samples and on
//! control points.

use rayon::prelude::*;

use super::box_tree::BoxTree;
use super::gap::difference_bound;
use crate::bezier::{BezierPatch, Side};
use crate::patch_set::{PatchId, PatchSet};
use crate::scalar::{Cuboid, Point, Vector};

/// Places inside a piece, in each direction.
const PLACES: [f64; 3] = [0.25, 0.5, 0.75];

/// Nearer than this to an edge of the other piece a place is not on it.
const MARGIN: f64 = 0.02;

/// Two patches that lie on one another.
#[derive(Debug, Clone, PartialEq)]
pub struct Overlap {
    /// The two, ascending.
    pub patches: [PatchId; 2],
    /// Whether all places of both lie on the other: one surface twice.
    pub duplicate: bool,
    /// A place of the first that lies on the second, within the gap tolerance.
    pub at: Point,
}

/// A patch nowhere wider than the search distance.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Sliver {
    /// The patch.
    pub patch: PatchId,
    /// A proved bound of the distance of its long sides.
    pub width: f64,
}

/// A box along the directions of a piece.
struct Slab {
    axes: [Vector; 3],
    low: [f64; 3],
    high: [f64; 3],
}

impl Slab {
    fn new(surface: &BezierPatch, by: f64) -> Self {
        let jet = surface.jet(0.5, 0.5);
        let unit = |v: Vector, other: Vector| v.try_normalize(0.0).unwrap_or(other);
        let axes = [
            unit(jet.du, Vector::x()),
            unit(jet.dv, Vector::y()),
            unit(jet.cross(), Vector::z()),
        ];
        let bound = |k: usize, pick: fn(f64, f64) -> f64, from: f64| {
            let along = surface.control_points().map(|p| p.coords.dot(&axes[k]));
            along.fold(from, pick)
        };
        Self {
            low: [0, 1, 2].map(|k| bound(k, f64::min, f64::INFINITY) - by),
            high: [0, 1, 2].map(|k| bound(k, f64::max, f64::NEG_INFINITY) + by),
            axes,
        }
    }

    fn holds(&self, point: &Point) -> bool {
        (0..3).all(|k| {
            let x = point.coords.dot(&self.axes[k]);
            self.low[k] <= x && x <= self.high[k]
        })
    }
}

/// Whether a place lies on the inside of a piece, within `gap` of it.
fn lies_on(surface: &BezierPatch, point: &Point, gap: f64) -> bool {
    let mut best = ([0.5, 0.5], f64::INFINITY);
    for (u, v) in (0..5_u8).flat_map(|i| (0..5_u8).map(move |j| (i, j))) {
        let at = [u, v].map(|k| f64::from(k) / 4.0);
        let square = (surface.eval(at[0], at[1]) - point).norm_squared();
        if square < best.1 {
            best = (at, square);
        }
    }
    let [mut u, mut v] = best.0;
    for _ in 0..16 {
        let jet = surface.jet(u, v);
        let Some(step) = jet.steps_along(&(point - jet.point), 1e-12) else {
            return false;
        };
        u = (u + step[0]).clamp(0.0, 1.0);
        v = (v + step[1]).clamp(0.0, 1.0);
    }
    let inside = |t: f64| (MARGIN..=1.0 - MARGIN).contains(&t);
    inside(u) && inside(v) && (surface.eval(u, v) - point).norm() <= gap
}

/// All pairs of patches with a place of one on the other.
pub(super) fn overlaps(set: &PatchSet) -> Vec<Overlap> {
    let gap = set.tolerances().gap.get();
    let pieces = set.pieces();
    let boxes: Vec<Cuboid> = pieces
        .par_iter()
        .with_min_len(256)
        .map(|p| Cuboid::around(p.surface.control_points()).grown(gap))
        .collect();
    let slabs: Vec<Slab> = pieces
        .par_iter()
        .with_min_len(256)
        .map(|p| Slab::new(&p.surface, gap))
        .collect();
    let tree = BoxTree::new(boxes.clone(), (0..pieces.len()).collect());
    // First and second patch, which piece of the first, how many places, one.
    let mut hits: Vec<(PatchId, PatchId, usize, usize, Point)> = (0..pieces.len())
        .into_par_iter()
        .with_min_len(64)
        .flat_map_iter(|i| {
            let surface = &pieces[i].surface;
            let places = PLACES.map(|u| PLACES.map(|v| surface.eval(u, v)));
            let mut found = Vec::new();
            tree.meeting(&boxes[i], |j| {
                if pieces[i].patch == pieces[j].patch {
                    return;
                }
                let on = places.as_flattened().iter().filter(|p| {
                    boxes[j].holds(p) && slabs[j].holds(p) && lies_on(&pieces[j].surface, p, gap)
                });
                let on: Vec<&Point> = on.collect();
                if let Some(first) = on.first() {
                    found.push((pieces[i].patch, pieces[j].patch, i, on.len(), **first));
                }
            });
            found
        })
        .collect();
    hits.sort_by_key(|h| (h.0.min(h.1), h.0.max(h.1), h.2));
    let pair = |h: &(PatchId, PatchId, usize, usize, Point)| (h.0.min(h.1), h.0.max(h.1));
    hits.chunk_by(|p, q| pair(p) == pair(q))
        .map(|group| {
            let (a, b) = pair(&group[0]);
            let covered: usize = group.iter().map(|h| h.3).sum();
            let all = [a, b].map(|p| set.patches()[p.index()].pieces.len());
            let first = group.iter().find(|h| h.0 == a).unwrap_or(&group[0]);
            Overlap {
                patches: [a, b],
                duplicate: covered >= 9 * (all[0] + all[1]),
                at: first.4,
            }
        })
        .collect()
}

/// All patches nowhere wider than the search distance.
pub(super) fn slivers(set: &PatchSet) -> Vec<Sliver> {
    let search = set.tolerances().search.get();
    let width = |index: usize, sides: [Side; 2]| {
        let surface = &set.pieces()[index].surface;
        let [a, b] = sides.map(|side| surface.edge(side));
        difference_bound(&a, &b)
    };
    let judged = |id: usize| {
        let patch = &set.patches()[id];
        let columns = patch.breaks_v.len() - 1;
        let rows = patch.breaks_u.len() - 1;
        let piece = |i: usize, j: usize| patch.pieces.start + i * columns + j;
        let along_u = (0..columns).map(|j| {
            (0..rows)
                .map(|i| width(piece(i, j), [Side::U0, Side::U1]))
                .sum::<f64>()
        });
        let along_v = (0..rows).map(|i| {
            (0..columns)
                .map(|j| width(piece(i, j), [Side::V0, Side::V1]))
                .sum::<f64>()
        });
        let width = along_u.fold(0.0, f64::max).min(along_v.fold(0.0, f64::max));
        (width <= search).then(|| Sliver {
            patch: PatchId::new(id),
            width,
        })
    };
    (0..set.patches().len())
        .into_par_iter()
        .with_min_len(256)
        .filter_map(judged)
        .collect()
}
