//! Spans and seams from settled marks.

use rayon::prelude::*;

use super::edge_curve::EdgeCurve;
use super::gap::{Stretch, gap};
use super::model::{Contact, Edge, Node, Seam, Span};
use super::nodes::Marks;
use super::{EdgeId, NodeId, SeamId, SpanId};
use crate::scalar::Bracket;

/// Edges, spans, seams and nodes, ready for the topology.
pub(super) struct Assembly {
    pub(super) edges: Vec<Edge>,
    pub(super) spans: Vec<Span>,
    pub(super) seams: Vec<Seam>,
    pub(super) nodes: Vec<Node>,
}

/// Numbers the nodes, cuts the edges into spans and groups these into seams.
pub(super) fn assemble(
    curves: &[EdgeCurve],
    contacts: &[Contact],
    marks: &Marks,
    floor: f64,
) -> Assembly {
    let (nodes, node_of) = nodes(curves, marks);
    let node = |class: usize| NodeId::new(node_of[class]);
    let mut edges = Vec::with_capacity(curves.len());
    let mut spans = Vec::with_capacity(curves.len());
    for curve in curves {
        let places = marks.of(curve.id.index());
        let start = spans.len();
        if !curve.collapsed {
            for pair in places.windows(2) {
                spans.push(Span {
                    edge: curve.id,
                    t: [pair[0].t, pair[1].t],
                    nodes: [node(marks.class(&pair[0])), node(marks.class(&pair[1]))],
                    seam: SeamId::new(0),
                    reversed: false,
                    gap: Bracket::ZERO,
                });
            }
        }
        edges.push(Edge {
            collapsed: curve.collapsed,
            nodes: [
                node(marks.class(&places[0])),
                node(marks.class(&places[places.len() - 1])),
            ],
            spans: start..spans.len(),
        });
    }
    let seams = group(curves, contacts, marks, &edges, &mut spans);
    measure(curves, contacts, &seams, &mut spans, floor);
    Assembly {
        edges,
        spans,
        seams,
        nodes,
    }
}

/// Nodes in order of first appearance, and the node of every class.
fn nodes(curves: &[EdgeCurve], marks: &Marks) -> (Vec<Node>, Vec<usize>) {
    let mut node_of: Vec<usize> = Vec::new();
    let mut least: Vec<(u64, f64, usize)> = Vec::new();
    for curve in curves {
        for mark in marks.of(curve.id.index()) {
            let class = marks.class(mark);
            if node_of.len() <= class {
                node_of.resize(class + 1, usize::MAX);
            }
            let here = (curve.rank, mark.t, curve.id.index());
            match least.get_mut(node_of[class]) {
                Some(held) => {
                    if (here.0, here.1) < (held.0, held.1) {
                        *held = here;
                    }
                }
                None => {
                    node_of[class] = least.len();
                    least.push(here);
                }
            }
        }
    }
    let nodes = least
        .into_iter()
        .map(|(_, t, edge)| Node {
            point: curves[edge].curve.eval(t),
        })
        .collect();
    (nodes, node_of)
}

/// Unites spans along joined contacts; sets each span's seam and direction.
fn group(
    curves: &[EdgeCurve],
    contacts: &[Contact],
    marks: &Marks,
    edges: &[Edge],
    spans: &mut [Span],
) -> Vec<Seam> {
    let mut parent: Vec<usize> = (0..spans.len()).collect();
    let find = |parent: &mut Vec<usize>, mut at: usize| {
        while parent[at] != at {
            parent[at] = parent[parent[at]];
            at = parent[at];
        }
        at
    };
    let within = |edge: EdgeId, range: [f64; 2]| {
        let places = marks.of(edge.index());
        let nearest = |t: f64| {
            (0..places.len())
                .min_by(|&i, &j| (places[i].t - t).abs().total_cmp(&(places[j].t - t).abs()))
                .unwrap_or(0)
        };
        let (i, j) = (nearest(range[0]), nearest(range[1]));
        let start = edges[edge.index()].spans.start;
        start + i.min(j)..start + i.max(j)
    };
    for contact in contacts.iter().filter(|c| c.joined) {
        let here = within(contact.edges[0], contact.first);
        let there = within(contact.edges[1], contact.second);
        // Both run over the same nodes; a few spans at most, so no index.
        for i in here {
            let [p, q] = spans[i].nodes;
            let met = there
                .clone()
                .find(|&j| spans[j].nodes == [p, q] || spans[j].nodes == [q, p]);
            if let Some(j) = met {
                let (a, b) = (find(&mut parent, i), find(&mut parent, j));
                parent[a.max(b)] = a.min(b);
            }
        }
    }
    let mut members: Vec<(usize, usize)> = (0..spans.len())
        .map(|i| (find(&mut parent, i), i))
        .collect();
    members.sort_unstable();
    let mut seams = Vec::new();
    for group in members.chunk_by(|p, q| p.0 == q.0) {
        let mut list: Vec<usize> = group.iter().map(|&(_, i)| i).collect();
        let master = list
            .iter()
            .position(|&i| {
                list.iter().all(|&j| {
                    curves[spans[i].edge.index()].rank <= curves[spans[j].edge.index()].rank
                })
            })
            .unwrap_or(0);
        list[..=master].rotate_right(1);
        let ends = spans[list[0]].nodes;
        for &i in &list {
            spans[i].seam = SeamId::new(seams.len());
            spans[i].reversed = spans[i].nodes != ends;
        }
        seams.push(Seam {
            spans: list.into_iter().map(SpanId::new).collect(),
        });
    }
    seams
}

/// The gap of every span against its seam's master.
fn measure(
    curves: &[EdgeCurve],
    contacts: &[Contact],
    seams: &[Seam],
    spans: &mut [Span],
    floor: f64,
) {
    let same = |p: [f64; 2], q: [f64; 2]| {
        let q = [q[0].min(q[1]), q[0].max(q[1])];
        p[0].total_cmp(&q[0]).is_eq() && p[1].total_cmp(&q[1]).is_eq()
    };
    let mut known: Vec<(EdgeId, EdgeId, &Contact)> = contacts
        .iter()
        .filter(|c| c.joined)
        .map(|c| (c.edges[0], c.edges[1], c))
        .collect();
    known.sort_by_key(|k| (k.0, k.1));
    let gaps: Vec<Bracket> = spans
        .par_iter()
        .with_min_len(256)
        .map(|span| {
            let master = &spans[seams[span.seam.index()].spans[0].index()];
            if master.edge == span.edge {
                return Bracket::ZERO;
            }
            let from = known.partition_point(|k| (k.0, k.1) < (master.edge, span.edge));
            let direct = known[from..]
                .iter()
                .take_while(|k| (k.0, k.1) == (master.edge, span.edge))
                .find(|k| same(master.t, k.2.first) && same(span.t, k.2.second));
            if let Some((_, _, contact)) = direct {
                return contact.gap;
            }
            let first = Stretch {
                curve: &curves[master.edge.index()].curve,
                range: master.t,
            };
            let range = if span.reversed {
                [span.t[1], span.t[0]]
            } else {
                span.t
            };
            let second = Stretch {
                curve: &curves[span.edge.index()].curve,
                range,
            };
            gap(first, second, floor, f64::INFINITY).bracket
        })
        .collect();
    for (span, gap) in spans.iter_mut().zip(gaps) {
        span.gap = gap;
    }
}
