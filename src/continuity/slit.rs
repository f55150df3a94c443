//! Near misses that open further than the search distance.

use super::figure::{End, Figure};
use super::place::{patch_edge, place};
use crate::bezier::BezierCurve;
use crate::patch_set::PatchSet;
use crate::topology::{EdgeId, Topology, nearest};

/// Two open edges that keep within the search distance along a stretch only.
#[derive(Debug, Clone, PartialEq)]
pub struct Slit {
    /// The shorter edge.
    pub between: End,
    /// The other edge.
    pub and: End,
    /// The gap along the stretch.
    pub gap: Figure,
    /// Length of the stretch.
    pub length: f64,
}

/// All slits, the longest first.
pub(super) fn slits(set: &PatchSet, topology: &Topology) -> Vec<Slit> {
    let curve = |edge: EdgeId| -> BezierCurve {
        set.pieces()[edge.piece().index()].surface.edge(edge.side())
    };
    let mut found: Vec<Slit> = topology
        .near_misses()
        .iter()
        .map(|near| {
            let [a, b] = near.edges;
            let foot = nearest(&curve(b), &curve(a).eval(near.gap_at), [0.0, 1.0]).t;
            Slit {
                between: patch_edge(set, a),
                and: patch_edge(set, b),
                gap: Figure {
                    bracket: near.gap,
                    at: place(set, near.edges, [near.gap_at, foot]),
                },
                length: near.length,
            }
        })
        .collect();
    found.sort_by(|p, q| q.length.total_cmp(&p.length));
    found
}
