//! The open boundary: chains of spans without a partner.
//!
//! Where several chains pass one node, the right way on is found by walking
//! round the node from piece to piece, so two parts that touch at a point keep
//! their own loops.

use super::model::{Edge, Seam, Span};
use super::{EdgeId, NodeId, SpanId};
use crate::bezier::Side;

/// One end of a span.
type End = (usize, usize);

/// Steps after which a walk round a node is given up; no node has so many
/// pieces.
const STEPS: usize = 100_000;

/// All chains of open spans. A chain closes unless it ends where three or more
/// pieces meet along one seam.
pub(super) fn loops(edges: &[Edge], spans: &[Span], seams: &[Seam]) -> Vec<Vec<SpanId>> {
    let open = |span: usize| seams[spans[span].seam.index()].spans.len() == 1;
    let mut next: Vec<[Option<End>; 2]> = vec![[None; 2]; spans.len()];
    let mut left: Vec<(NodeId, usize, usize)> = Vec::new();
    for span in (0..spans.len()).filter(|&s| open(s)) {
        let ends = [0, 1].map(|end| walk(edges, spans, seams, (span, end)));
        for (end, onward) in ends.iter().enumerate() {
            if onward.is_none() {
                left.push((spans[span].nodes[end], span, end));
            }
        }
        next[span] = ends;
    }
    // What no walk has linked is linked in order, node by node.
    left.sort_unstable();
    for group in left.chunk_by(|p, q| p.0 == q.0) {
        for pair in group.chunks_exact(2) {
            next[pair[0].1][pair[0].2] = Some((pair[1].1, pair[1].2));
            next[pair[1].1][pair[1].2] = Some((pair[0].1, pair[0].2));
        }
    }
    let mut seen = vec![false; spans.len()];
    let mut loops = Vec::new();
    for span in (0..spans.len()).filter(|&s| open(s)) {
        if seen[span] {
            continue;
        }
        let (mut chain, closed) = follow(&next, (span, 1));
        if !closed {
            let (mut before, _) = follow(&next, (span, 0));
            before.reverse();
            before.push(span);
            before.append(&mut chain);
            chain = before;
        } else {
            chain.insert(0, span);
        }
        for &member in &chain {
            seen[member] = true;
        }
        loops.push(chain.into_iter().map(SpanId::new).collect());
    }
    loops
}

/// The spans that follow after leaving one through an end, and whether they
/// come back to it.
fn follow(next: &[[Option<End>; 2]], from: End) -> (Vec<usize>, bool) {
    let mut found = Vec::new();
    let mut at = from;
    while let Some((span, end)) = next[at.0][at.1] {
        if span == from.0 {
            return (found, true);
        }
        if found.len() == next.len() {
            break;
        }
        found.push(span);
        at = (span, 1 - end);
    }
    (found, false)
}

/// From an open span's end round its node to the next open span's end.
fn walk(edges: &[Edge], spans: &[Span], seams: &[Seam], from: End) -> Option<End> {
    let mut at = from;
    for _ in 0..STEPS {
        at = across_piece(edges, spans, at)?;
        let seam = &seams[spans[at.0].seam.index()];
        match seam.spans.as_slice() {
            [_] => return Some(at),
            [p, q] => {
                let other = if p.index() == at.0 { q } else { p };
                // The same node on the other use.
                let turned = spans[at.0].reversed != spans[other.index()].reversed;
                let end = if turned { 1 - at.1 } else { at.1 };
                at = (other.index(), end);
            }
            _ => return None,
        }
    }
    None
}

/// The span end on the same piece that shares the corner (or the split) of a
/// span end.
fn across_piece(edges: &[Edge], spans: &[Span], (span, end): End) -> Option<End> {
    let mut edge = spans[span].edge;
    let range = &edges[edge.index()].spans;
    // A split inside the edge: straight on along it.
    if end == 0 && span > range.start {
        return Some((span - 1, 1));
    }
    if end == 1 && span + 1 < range.end {
        return Some((span + 1, 0));
    }
    let mut corner = edge.side().at([0.0, 1.0][end]);
    // At most past two collapsed edges and back.
    for _ in 0..4 {
        let side = other_side(edge.side(), corner);
        edge = EdgeId::of(edge.piece(), side);
        let at_end = usize::from(along(side, corner) > 0.5);
        let info = &edges[edge.index()];
        if !info.collapsed {
            let span = [info.spans.start, info.spans.end.checked_sub(1)?][at_end];
            return Some((span, at_end));
        }
        corner = side.at([1.0, 0.0][at_end]);
    }
    None
}

/// The side that meets `side` at a corner of the unit square.
fn other_side(side: Side, [u, v]: [f64; 2]) -> Side {
    match side {
        Side::U0 | Side::U1 if v < 0.5 => Side::V0,
        Side::U0 | Side::U1 => Side::V1,
        Side::V0 | Side::V1 if u < 0.5 => Side::U0,
        Side::V0 | Side::V1 => Side::U1,
    }
}

fn along(side: Side, [u, v]: [f64; 2]) -> f64 {
    match side {
        Side::U0 | Side::U1 => v,
        Side::V0 | Side::V1 => u,
    }
}
