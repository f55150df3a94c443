//! Where three or more edges meet, and where one has no partner.

use super::figure::{End, PatchEdge};
use super::place::{length, patch_edge};
use crate::patch_set::PatchSet;
use crate::topology::Topology;

/// A seam in which three or more edges take part.
#[derive(Debug, Clone, PartialEq)]
pub struct Crowd {
    /// The patch edges, by patch name and side.
    pub edges: Vec<End>,
    /// Length along the master edges.
    pub length: f64,
}

/// A chain of the open boundary.
#[derive(Debug, Clone, PartialEq)]
pub struct OpenLoop {
    /// The patch edges along it, in order.
    pub edges: Vec<End>,
    /// Its length.
    pub length: f64,
}

pub(super) fn crowds(set: &PatchSet, topology: &Topology) -> Vec<Crowd> {
    let mut found: Vec<Crowd> = Vec::new();
    for seam in topology.seams().iter().filter(|s| s.spans.len() > 2) {
        let spans = seam.spans.iter().map(|s| &topology.spans()[s.index()]);
        let mut edges: Vec<End> = spans.map(|s| patch_edge(set, s.edge)).collect();
        edges.sort_by_key(|e| (&set.patches()[e.0.index()].name, e.1));
        let master = &topology.spans()[seam.spans[0].index()];
        found.push(Crowd {
            edges,
            length: length(set, master.edge, master.t),
        });
    }
    let names = |c: &Crowd| -> Vec<(String, PatchEdge)> {
        let name = |e: &End| (set.patches()[e.0.index()].name.clone(), e.1);
        c.edges.iter().map(name).collect()
    };
    found.sort_by_cached_key(names);
    let mut merged: Vec<Crowd> = Vec::new();
    for crowd in found {
        match merged.last_mut() {
            Some(last) if last.edges == crowd.edges => last.length += crowd.length,
            _ => merged.push(crowd),
        }
    }
    merged
}

pub(super) fn loops(set: &PatchSet, topology: &Topology) -> Vec<OpenLoop> {
    let chains = topology.open_loops().iter();
    chains
        .map(|chain| {
            let mut edges: Vec<End> = Vec::new();
            let mut total = 0.0;
            for span in chain {
                let span = &topology.spans()[span.index()];
                let end = patch_edge(set, span.edge);
                if edges.last() != Some(&end) {
                    edges.push(end);
                }
                total += length(set, span.edge, span.t);
            }
            if edges.len() > 1 && edges.first() == edges.last() {
                edges.pop();
            }
            OpenLoop {
                edges,
                length: total,
            }
        })
        .collect()
}
