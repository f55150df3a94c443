//! Every promise of the topology, looked at once more.

use thiserror::Error;

use super::model::Topology;
use super::{EdgeId, NodeId, SeamId, SpanId};

/// A promise that does not hold: a fault of this program, not of the set.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Error)]
pub enum Flaw {
    /// Spans do not cover an edge from 0 to 1, or its ends are not its nodes.
    #[error("edge {0:?}: its spans do not cover it; they must run from 0 to 1 without a hole")]
    Cover(EdgeId),
    /// A collapsed edge has a span or two nodes.
    #[error("edge {0:?}: collapsed, but with a span or two nodes; it must have one node only")]
    Collapsed(EdgeId),
    /// Two edges of a piece disagree on the node at their common corner.
    #[error(
        "edge {0:?}: its end is not the node of its neighbour on the piece; corners are shared"
    )]
    Corner(EdgeId),
    /// A span begins and ends at one node.
    #[error("span {0:?}: begins and ends at one node; a span must lead from one to another")]
    Closed(SpanId),
    /// A span is not in the seam it names, or in more than one.
    #[error("span {0:?}: not once in its own seam; every span must be in one seam, once")]
    Membership(SpanId),
    /// The uses of a seam do not share its end nodes in the stated direction.
    #[error("seam {0:?}: its uses end at different nodes; all must share both")]
    Ends(SeamId),
    /// One edge takes part twice in a seam.
    #[error("seam {0:?}: one edge takes part twice; every edge may once")]
    Twice(SeamId),
    /// A node has no span and no collapsed edge.
    #[error("node {0:?}: nothing ends there; every node must be of use")]
    Idle(NodeId),
    /// A chain of the open boundary does not hang together, or misses a span.
    #[error(
        "span {0:?}: not once in the open loops, or not linked to the next; loops must hold every open span once"
    )]
    Loop(SpanId),
}

impl Topology {
    /// Looks at every promise the model makes.
    ///
    /// # Errors
    /// The first [`Flaw`] found; there is none unless the program is broken.
    pub fn check(&self) -> Result<(), Flaw> {
        self.check_edges()?;
        self.check_seams()?;
        self.check_loops()
    }

    #[allow(
        clippy::float_cmp,
        reason = "neighbouring spans share their parameter bit for bit"
    )]
    fn check_edges(&self) -> Result<(), Flaw> {
        let mut used = vec![false; self.nodes.len()];
        for (index, edge) in self.edges.iter().enumerate() {
            let id = EdgeId::new(index);
            let spans = &self.spans[edge.spans.clone()];
            if edge.collapsed {
                if !spans.is_empty() || edge.nodes[0] != edge.nodes[1] {
                    return Err(Flaw::Collapsed(id));
                }
                used[edge.nodes[0].index()] = true;
                continue;
            }
            let covered = spans.first().is_some_and(|s| s.t[0] == 0.0)
                && spans.last().is_some_and(|s| s.t[1] == 1.0)
                && spans.iter().all(|s| s.edge == id && s.t[0] < s.t[1])
                && spans
                    .windows(2)
                    .all(|w| w[0].t[1] == w[1].t[0] && w[0].nodes[1] == w[1].nodes[0])
                && spans[0].nodes[0] == edge.nodes[0]
                && spans[spans.len() - 1].nodes[1] == edge.nodes[1];
            if !covered {
                return Err(Flaw::Cover(id));
            }
            for (k, span) in spans.iter().enumerate() {
                if span.nodes[0] == span.nodes[1] {
                    return Err(Flaw::Closed(SpanId::new(edge.spans.start + k)));
                }
                for node in span.nodes {
                    used[node.index()] = true;
                }
            }
        }
        for (piece, edges) in self.edges.chunks_exact(4).enumerate() {
            // U0 and U1 begin on V0 and end on V1.
            let [u0, u1, v0, v1] = [0, 1, 2, 3].map(|k| edges[k].nodes);
            let corners = [
                (u0[0], v0[0]),
                (u0[1], v1[0]),
                (u1[0], v0[1]),
                (u1[1], v1[1]),
            ];
            if corners.iter().any(|(a, b)| a != b) {
                return Err(Flaw::Corner(EdgeId::new(piece * 4)));
            }
        }
        match used.iter().position(|u| !u) {
            Some(idle) => Err(Flaw::Idle(NodeId::new(idle))),
            None => Ok(()),
        }
    }

    fn check_seams(&self) -> Result<(), Flaw> {
        let mut seen = vec![false; self.spans.len()];
        for (index, seam) in self.seams.iter().enumerate() {
            let id = SeamId::new(index);
            for &span in &seam.spans {
                if seen[span.index()] || self.spans[span.index()].seam != id {
                    return Err(Flaw::Membership(span));
                }
                seen[span.index()] = true;
            }
            let master = seam.spans.first().ok_or(Flaw::Ends(id))?;
            let [p, q] = self.spans[master.index()].nodes;
            for &span in &seam.spans {
                let span = &self.spans[span.index()];
                let expected = if span.reversed { [q, p] } else { [p, q] };
                if span.nodes != expected {
                    return Err(Flaw::Ends(id));
                }
            }
            let mut edges: Vec<EdgeId> = seam
                .spans
                .iter()
                .map(|s| self.spans[s.index()].edge)
                .collect();
            edges.sort_unstable();
            if edges.windows(2).any(|w| w[0] == w[1]) || self.spans[master.index()].reversed {
                return Err(Flaw::Twice(id));
            }
        }
        match seen.iter().position(|s| !s) {
            Some(lost) => Err(Flaw::Membership(SpanId::new(lost))),
            None => Ok(()),
        }
    }

    /// A chain may stay open only at a node where an odd number of open spans
    /// end.
    fn check_loops(&self) -> Result<(), Flaw> {
        let open = |span: SpanId| {
            self.seams[self.spans[span.index()].seam.index()]
                .spans
                .len()
                == 1
        };
        let mut times = vec![0_u32; self.spans.len()];
        let mut ends = vec![0_u32; self.nodes.len()];
        for chain in &self.loops {
            let mut at: Option<NodeId> = None;
            for (k, &span) in chain.iter().enumerate() {
                times[span.index()] += 1;
                let [p, q] = self.spans[span.index()].nodes;
                // The first span runs so that it meets the second.
                let start = at.unwrap_or_else(|| match chain.get(k + 1) {
                    Some(next) if self.spans[next.index()].nodes.contains(&q) => p,
                    Some(_) => q,
                    None => p,
                });
                if start != p && start != q {
                    return Err(Flaw::Loop(span));
                }
                at = Some(if start == p { q } else { p });
            }
        }
        for (index, &times) in times.iter().enumerate() {
            let span = SpanId::new(index);
            if times != u32::from(open(span)) {
                return Err(Flaw::Loop(span));
            }
            if open(span) {
                for node in self.spans[index].nodes {
                    ends[node.index()] += 1;
                }
            }
        }
        for chain in &self.loops {
            let (Some(first), Some(last)) = (chain.first(), chain.last()) else {
                continue;
            };
            let [p, q] = self.spans[first.index()].nodes;
            let closed = chain.len() > 1
                && self.spans[last.index()]
                    .nodes
                    .iter()
                    .any(|n| *n == p || *n == q);
            if !closed && ends.iter().all(|e| e % 2 == 0) {
                return Err(Flaw::Loop(*first));
            }
        }
        Ok(())
    }
}
