//! Which seams stay mesh edges, and the curves they make.
//!
//! Kept are open edges, seams of three or more uses, seams between panels, seams
//! declared a crease or G0, and seams whose normals part by more than the tangent
//! tolerance (sampled). Kept seams are joined to chains that end at corners: where
//! not two of them meet, or where they turn.

use rayon::prelude::*;

use super::atlas::carried;
use crate::patch_set::{Demand, PatchSet};
use crate::scalar::{Vector, angle_rad};
use crate::topology::{SeamId, Topology, demand_between};

/// Places along a seam at which normals are compared.
const PLACES: u8 = 9;

/// A kept curve that turns by more than this at a node has a corner there.
const CORNER_DEG: f64 = 5.0;

/// Which seams are kept, and the chains of those.
#[derive(Debug)]
pub(super) struct Seams {
    kept: Vec<bool>,
    pub(super) chains: Vec<Chain>,
}

/// A curve of kept seams.
#[derive(Debug, Clone)]
pub(super) struct Chain {
    pub(super) links: Vec<Link>,
    pub(super) closed: bool,
}

/// One seam of a chain.
#[derive(Debug, Clone, Copy)]
pub(super) struct Link {
    pub(super) seam: usize,
    /// Whether the chain runs it as its master does.
    pub(super) forward: bool,
}

impl Seams {
    /// Looks at every seam.
    pub(super) fn of(set: &PatchSet, topology: &Topology) -> Self {
        let kept: Vec<bool> = (0..topology.seams().len())
            .into_par_iter()
            .map(|seam| keeps(set, topology, seam))
            .collect();
        let chains = chains(set, topology, &kept);
        Self { kept, chains }
    }

    /// Whether a seam stays a run of mesh edges.
    pub(super) fn is_kept(&self, seam: SeamId) -> bool {
        self.kept[seam.index()]
    }
}

fn keeps(set: &PatchSet, topology: &Topology, seam: usize) -> bool {
    let spans = &topology.seams()[seam].spans;
    let &[a, b] = spans.as_slice() else {
        return true;
    };
    let (a, b) = (&topology.spans()[a.index()], &topology.spans()[b.index()]);
    if set.patch_of(a.edge.piece()).panel != set.patch_of(b.edge.piece()).panel {
        return true;
    }
    if matches!(
        demand_between(set, a.edge, b.edge),
        Some(Demand::Crease | Demand::G0 | Demand::Open)
    ) {
        return true;
    }
    let limit = set.tolerances().tangent_deg.get().to_radians();
    (0..PLACES).any(|k| {
        let s = f64::from(k) / f64::from(PLACES - 1);
        let t = a.t[0] * (1.0 - s) + a.t[1] * s;
        let normal = |span: &crate::topology::Span, t: f64| {
            let piece = span.edge.piece();
            let [u, v] = span.edge.side().at(t);
            let outward = if set.patch_of(piece).flipped {
                -1.0
            } else {
                1.0
            };
            let normal = set.pieces()[piece.index()].surface.normal(u, v)?;
            Some(normal * outward)
        };
        let curve = |span: &crate::topology::Span| {
            set.pieces()[span.edge.piece().index()]
                .surface
                .edge(span.edge.side())
        };
        let point = curve(a).eval(t);
        let other = crate::topology::nearest_from(&curve(b), &point, carried(a, b, t), b.t).t;
        match (normal(a, t), normal(b, other)) {
            (Some(m), Some(n)) => angle_rad(&m, &n) > limit,
            _ => false,
        }
    })
}

/// The two ends of a seam: node and direction into it.
fn ends(set: &PatchSet, topology: &Topology, seam: usize) -> [(usize, Vector); 2] {
    let master = &topology.spans()[topology.seams()[seam].spans[0].index()];
    let surface = &set.pieces()[master.edge.piece().index()].surface;
    let curve = surface.edge(master.edge.side());
    let inner = |from: f64, to: f64| {
        let tangent = curve.jet(from).dt * (to - from);
        if tangent.norm() > 0.0 {
            tangent
        } else {
            curve.eval(from + (to - from) * 1e-3) - curve.eval(from)
        }
    };
    [
        (master.nodes[0].index(), inner(master.t[0], master.t[1])),
        (master.nodes[1].index(), inner(master.t[1], master.t[0])),
    ]
}

fn chains(set: &PatchSet, topology: &Topology, kept: &[bool]) -> Vec<Chain> {
    let mut at: Vec<Vec<(usize, usize, Vector)>> = vec![Vec::new(); topology.nodes().len()];
    let members: Vec<usize> = (0..kept.len()).filter(|&s| kept[s]).collect();
    let mut nodes = vec![[0; 2]; kept.len()];
    for &seam in &members {
        for (end, (node, direction)) in ends(set, topology, seam).into_iter().enumerate() {
            at[node].push((seam, end, direction));
            nodes[seam][end] = node;
        }
    }
    let corner: Vec<bool> = at
        .iter()
        .map(|ways| match ways.as_slice() {
            [] => false,
            [a, b] => angle_rad(&a.2, &-b.2) > CORNER_DEG.to_radians(),
            _ => true,
        })
        .collect();
    let mut seen = vec![false; kept.len()];
    let mut found = Vec::new();
    let follow = |start: usize, end: usize, seen: &mut Vec<bool>| {
        let mut links = Vec::new();
        let (mut seam, mut from) = (start, end);
        loop {
            seen[seam] = true;
            links.push(Link {
                seam,
                forward: from == 0,
            });
            let node = nodes[seam][1 - from];
            if corner[node] {
                return (links, false);
            }
            // Two ways meet here: on by the other one.
            let next = at[node]
                .iter()
                .find(|way| (way.0, way.1) != (seam, 1 - from));
            match next {
                Some(&(other, _, _)) if seen[other] => return (links, true),
                Some(&(other, end, _)) => (seam, from) = (other, end),
                None => return (links, false),
            }
        }
    };
    for &seam in &members {
        for end in 0..2 {
            if !seen[seam] && corner[nodes[seam][end]] {
                let (links, closed) = follow(seam, end, &mut seen);
                found.push(Chain { links, closed });
            }
        }
    }
    for &seam in &members {
        if !seen[seam] {
            let (links, closed) = follow(seam, 0, &mut seen);
            found.push(Chain { links, closed });
        }
    }
    found
}
