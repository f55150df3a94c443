//! From a patch set to its topology.

use rayon::prelude::*;

use super::EdgeId;
use super::assembly::{Assembly, assemble};
use super::edge_curve::{EdgeCurve, edges_of};
use super::error::TopologyError;
use super::loops::loops;
use super::model::{Contact, Topology};
use super::near::near_misses;
use super::nodes::{Marks, Unsettled};
use super::pairing::{Limits, Reach, contacts};
use super::place::{demand_between, gap_between, place};
use crate::patch_set::{Class, Demand, PatchSet, PieceId};
use crate::scalar::Cuboid;

/// Rounds of giving up joints before a set is refused.
const GIVE_UPS: usize = 64;

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
        let close = set.tolerances().close_gaps.map_or(0.0, |t| t.get());
        let classes = if set.has_classes() {
            Class::C.gap_mm() / set.unit().in_mm()
        } else {
            0.0
        };
        let reach = Reach {
            gap,
            search: set.tolerances().search.get().max(close).max(classes),
            floor: (FLOOR * size).min(gap * 1e-3),
        };
        let parted =
            |a: &EdgeCurve, b: &EdgeCurve| demand_between(set, a.id, b.id) == Some(Demand::Open);
        let limits = Limits {
            close,
            gap: &|a: &EdgeCurve, b: &EdgeCurve| gap_between(set, a.id, b.id),
            parted: &parted,
        };
        let mut contacts = contacts(&curves, reach, &limits);
        let marks = settle(set, &curves, &mut contacts, reach)?;
        let Assembly {
            edges,
            spans,
            seams,
            nodes,
        } = assemble(&curves, &contacts, &marks, reach.floor);
        let loops = loops(&edges, &spans, &seams);
        let near_misses = near_misses(
            set,
            &curves,
            &spans,
            &seams,
            &contacts,
            (reach.search, reach.floor),
            parted,
        );
        Ok(Self {
            near_misses,
            edges,
            spans,
            seams,
            nodes,
            contacts,
            loops,
            size,
        })
    }
}

/// Settles the marks. Where an edge shorter than the gap tolerance would be
/// closed up by its neighbours on both sides being joined across it, the
/// loosest of the joints at that place is given up, and so on.
fn settle(
    set: &PatchSet,
    curves: &[EdgeCurve],
    contacts: &mut [Contact],
    reach: Reach,
) -> Result<Marks, TopologyError> {
    let at = |edge: EdgeId| place(set, edge);
    for _ in 0..GIVE_UPS {
        let blame = match Marks::settle(curves, contacts, reach.gap) {
            Ok(marks) => return Ok(marks),
            Err(Unsettled::Collapse(blame)) => blame,
            Err(Unsettled::Endless) => break,
        };
        for (edge, contact) in blame {
            match contact {
                Some(contact) if contacts[contact].gap.proved > reach.floor => {
                    contacts[contact].joined = false;
                    contacts[contact].bridged = false;
                }
                _ => {
                    let (patch, side, piece) = at(edge);
                    return Err(TopologyError::ShortEdge {
                        patch,
                        edge: side,
                        piece,
                        length: curves[edge.index()].length,
                        gap: reach.gap,
                    });
                }
            }
        }
    }
    let first = contacts.iter().find(|c| c.joined).map(|c| c.edges[0]);
    let (patch, edge, piece) = at(first.unwrap_or(curves[0].id));
    Err(TopologyError::Unsettled {
        patch,
        edge,
        piece,
        gap: reach.gap,
    })
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
