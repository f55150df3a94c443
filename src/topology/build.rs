//! From a patch set to its topology.

use rayon::prelude::*;

use super::assembly::{Assembly, assemble};
use super::edge_curve::{Cuboid, EdgeCurve, edges_of};
use super::error::TopologyError;
use super::loops::loops;
use super::model::Topology;
use super::nodes::Marks;
use super::pairing::{Reach, contacts};
use super::place::demand_between;
use crate::patch_set::{Demand, PatchSet, PieceId};

/// A gap below this fraction of the set's size is as good as none.
const FLOOR: f64 = 1e-9;

impl Topology {
    /// Pairs the edges of a set, under its gap and search tolerances.
    ///
    /// Deterministic: the result is the same at any number of threads.
    ///
    /// # Errors
    /// [`TopologyError`] where edges are so short, or gaps so large, that no
    /// sound structure follows.
    pub fn build(set: &PatchSet) -> Result<Self, TopologyError> {
        let size = set
            .pieces()
            .par_iter()
            .map(|piece| Cuboid::around(piece.surface.control_points()))
            .reduce_with(|a, b| a.union(&b))
            .map_or(0.0, |cuboid| cuboid.diagonal());
        let curves = edge_curves(set, size);
        let gap = set.tolerances().gap.get();
        let reach = Reach {
            gap,
            search: set.tolerances().search.get(),
            floor: (FLOOR * size).min(gap * 1e-3),
        };
        let contacts = contacts(&curves, reach, |a, b| {
            demand_between(set, a.id, b.id) != Some(Demand::Open)
        });
        let marks = Marks::settle(set, &curves, &contacts, gap)?;
        let Assembly {
            edges,
            spans,
            seams,
            nodes,
        } = assemble(&curves, &contacts, &marks, reach.floor);
        let loops = loops(&edges, &spans, &seams);
        Ok(Self {
            edges,
            spans,
            seams,
            nodes,
            contacts,
            loops,
        })
    }
}

fn edge_curves(set: &PatchSet, size: f64) -> Vec<EdgeCurve> {
    let mut by_name: Vec<usize> = (0..set.patches().len()).collect();
    by_name.sort_by(|&a, &b| set.patches()[a].name.cmp(&set.patches()[b].name));
    let mut rank = vec![0_u32; by_name.len()];
    for (place, &patch) in (0_u32..).zip(&by_name) {
        rank[patch] = place;
    }
    (0..set.pieces().len())
        .into_par_iter()
        .with_min_len(64)
        .flat_map_iter(|piece| {
            let patch = set.pieces()[piece].patch.index();
            edges_of(set, PieceId::new(piece), rank[patch], size)
        })
        .collect()
}
