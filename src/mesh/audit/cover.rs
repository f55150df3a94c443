//! Whether the cells of a piece cover its unit square exactly once.
//!
//! The cells run counterclockwise. If every edge inside is run once each way,
//! the chain of all cells has the border of the square as its boundary, and a
//! chain is known by its boundary: the signed cells add up to the square, each
//! place once. Parameters are compared bit by bit, so this is exact; that no
//! cell is turned over is known to within the rounding of its area.
//!
//! What is left of the edges once the border is taken away bounds what is
//! missing (run clockwise) or covered again (counterclockwise); its signed area
//! is the share that is told.
//!
//! At a collapsed side the mesh has no triangle with two corners there. Faces
//! that share the vertex a beside the pole, with pole corners p and q, leave
//! the triangle (p, a, q) of parameters open: it stands over the edge from a to
//! the pole and is filled in by a cell of its own, which is proved against the
//! faces beside it. With pole corners half way between their neighbours' this
//! gives each face the trapezoid down to the collapsed side.

use std::collections::BTreeMap;

use super::cell::{Cell, NONE};
use crate::bezier::Side;

/// A part of the square that is not covered exactly once.
#[derive(Debug, Clone, Copy)]
pub(super) struct Flaw {
    /// Signed share of the square: negative is a hole.
    pub(super) share: f64,
    /// The middle of its outline.
    pub(super) place: [f64; 2],
    /// A cell beside it, if there is one.
    pub(super) cell: Option<usize>,
}

/// What covers a piece.
#[derive(Debug, Default)]
pub(super) struct Cover {
    /// Cells to fill in at collapsed sides.
    pub(super) fills: Vec<Cell>,
    /// Where the cover fails.
    pub(super) flaws: Vec<Flaw>,
}

type Key = [u64; 2];

fn key([u, v]: [f64; 2]) -> Key {
    // Minus zero is zero.
    [(u + 0.0).to_bits(), (v + 0.0).to_bits()]
}

fn place(key: Key) -> [f64; 2] {
    key.map(f64::from_bits)
}

/// A directed edge that has no opposite.
#[derive(Debug, Clone, Copy)]
struct Loose {
    from: Key,
    to: Key,
    /// Mesh points at its ends.
    points: [u32; 2],
    cell: Option<usize>,
}

/// The place along a side, counterclockwise from 0 to 1.
fn along(side: Side, [u, v]: [f64; 2]) -> Option<f64> {
    let on = |t: f64, end: f64| t.to_bits() == end.to_bits();
    match side {
        Side::U0 => on(u, 0.0).then_some(1.0 - v),
        Side::U1 => on(u, 1.0).then_some(v),
        Side::V0 => on(v, 0.0).then_some(u),
        Side::V1 => on(v, 1.0).then_some(1.0 - u),
    }
}

/// The ends of a side, in the order of [`along`].
fn ends(side: Side) -> [Key; 2] {
    let ends = match side {
        Side::U0 => [[0.0, 1.0], [0.0, 0.0]],
        Side::U1 => [[1.0, 0.0], [1.0, 1.0]],
        Side::V0 => [[0.0, 0.0], [1.0, 0.0]],
        Side::V1 => [[1.0, 1.0], [0.0, 1.0]],
    };
    ends.map(key)
}

/// Looks at the cells of one piece, given with their numbers in ascending
/// order.
pub(super) fn cover(cells: &[(usize, &Cell)], collapsed: [bool; 4]) -> Cover {
    let mut cover = Cover::default();
    let mut loose = loose(cells);
    for side in Side::ALL.into_iter().filter(|s| collapsed[s.index()]) {
        fill(side, cells, &mut loose, &mut cover.fills);
    }
    let mut bad: Vec<Loose> = Vec::new();
    for side in Side::ALL {
        let (mut on, off): (Vec<_>, Vec<_>) = loose.into_iter().partition(|edge| {
            matches!(
                (along(side, place(edge.from)), along(side, place(edge.to))),
                (Some(a), Some(b)) if a < b
            )
        });
        loose = off;
        on.sort_by(|a, b| {
            let start = |e: &Loose| along(side, place(e.from)).unwrap_or(0.0);
            start(a).total_cmp(&start(b)).then(a.cell.cmp(&b.cell))
        });
        let [mut at, end] = ends(side);
        let missing = |from: Key, to: Key| Loose {
            from: to,
            to: from,
            points: [NONE; 2],
            cell: None,
        };
        for edge in on {
            if edge.from == at {
                at = edge.to;
            } else if along(side, place(edge.from)) > along(side, place(at)) {
                bad.push(missing(at, edge.from));
                at = edge.to;
            } else {
                // Begun before the last one ended: once too many.
                bad.push(edge);
            }
        }
        if at != end {
            bad.push(missing(at, end));
        }
    }
    bad.extend(loose);
    cover.flaws = flaws(&bad);
    cover
}

/// All edges without their opposite, as often as it is missing.
fn loose(cells: &[(usize, &Cell)]) -> Vec<Loose> {
    let mut edges: Vec<(Key, Key, bool, Loose)> = Vec::with_capacity(3 * cells.len());
    for &(index, cell) in cells {
        for k in 0..3 {
            let next = (k + 1) % 3;
            let (from, to) = (key(cell.places[k]), key(cell.places[next]));
            let edge = Loose {
                from,
                to,
                points: [cell.points[k], cell.points[next]],
                cell: Some(index),
            };
            edges.push((from.min(to), from.max(to), from < to, edge));
        }
    }
    edges.sort_by_key(|e| (e.0, e.1, e.2, e.3.cell));
    let mut loose = Vec::new();
    for group in edges.chunk_by(|a, b| (a.0, a.1) == (b.0, b.1)) {
        let forward = group.iter().filter(|e| e.2).count();
        let backward = group.len() - forward;
        let spare = forward.abs_diff(backward);
        let more = forward > backward;
        let of_more = group.iter().filter(|e| e.2 == more).map(|e| e.3);
        loose.extend(of_more.rev().take(spare));
    }
    loose
}

/// Takes the loose edges that end on a collapsed side and closes what is open
/// between them.
fn fill(side: Side, cells: &[(usize, &Cell)], loose: &mut Vec<Loose>, fills: &mut Vec<Cell>) {
    // By the vertex beside the pole: the edge that goes to it, and the one
    // that comes back.
    let mut beside: BTreeMap<Key, [Vec<Loose>; 2]> = BTreeMap::new();
    loose.retain(|edge| {
        let ends = [edge.from, edge.to].map(|k| along(side, place(k)).is_some());
        let border = Side::ALL
            .iter()
            .any(|&s| along(s, place(edge.from)).is_some() && along(s, place(edge.to)).is_some());
        match ends {
            _ if border => true,
            [false, true] => {
                beside.entry(edge.from).or_default()[0].push(*edge);
                false
            }
            [true, false] => {
                beside.entry(edge.to).or_default()[1].push(*edge);
                false
            }
            _ => true,
        }
    });
    let [start, end] = ends(side);
    for (vertex, [out, back]) in beside {
        let end = corner(vertex, [start, end]);
        let (to_pole, from_pole, given) = match (&out[..], &back[..], end) {
            ([o], [b], _) => (o.to, b.from, *o),
            ([o], [], Some(end)) => (o.to, end, *o),
            ([], [b], Some(end)) => (end, b.from, *b),
            _ => {
                loose.extend(out);
                loose.extend(back);
                continue;
            }
        };
        let beside = |c: usize| cells.binary_search_by_key(&c, |(index, _)| *index).ok();
        let Some(face) = given.cell.and_then(beside).map(|at| cells[at].1) else {
            continue;
        };
        let [a, pole] = if out.is_empty() {
            [given.points[1], given.points[0]]
        } else {
            given.points
        };
        // Edges of the fill-in: pole corner to vertex, vertex to the other pole
        // corner, and back along the side.
        fills.push(Cell {
            face: face.face,
            piece: face.piece,
            places: [place(to_pole), place(vertex), place(from_pole)],
            points: [pole, a, pole],
            fill: true,
        });
        let edge = |from: Key, to: Key| Loose {
            from,
            to,
            points: [NONE; 2],
            cell: given.cell,
        };
        loose.push(edge(from_pole, to_pole));
        if out.is_empty() {
            loose.push(edge(to_pole, vertex));
        }
        if back.is_empty() {
            loose.push(edge(vertex, from_pole));
        }
    }
}

/// The end of the collapsed side that lies on the same side of the square as
/// the vertex does, if there is one.
fn corner(vertex: Key, ends: [Key; 2]) -> Option<Key> {
    ends.into_iter().find(|end| {
        Side::ALL
            .iter()
            .any(|&s| along(s, place(vertex)).is_some() && along(s, place(*end)).is_some())
    })
}

/// Edges that hang together, as one flaw each.
fn flaws(bad: &[Loose]) -> Vec<Flaw> {
    let mut group: BTreeMap<Key, usize> = BTreeMap::new();
    let mut root: Vec<usize> = Vec::new();
    fn find(root: &mut [usize], mut at: usize) -> usize {
        while root[at] != at {
            root[at] = root[root[at]];
            at = root[at];
        }
        at
    }
    for edge in bad {
        let [a, b] = [edge.from, edge.to].map(|k| {
            *group.entry(k).or_insert_with(|| {
                root.push(root.len());
                root.len() - 1
            })
        });
        let (a, b) = (find(&mut root, a), find(&mut root, b));
        root[a.max(b)] = a.min(b);
    }
    let mut members: BTreeMap<usize, Vec<&Loose>> = BTreeMap::new();
    for edge in bad {
        let at = find(&mut root, group[&edge.from]);
        members.entry(at).or_default().push(edge);
    }
    members
        .values()
        .map(|edges| {
            let mut middle = [0.0; 2];
            let mut area = 0.0;
            for edge in edges {
                let ([a, b], [c, d]) = (place(edge.from), place(edge.to));
                #[allow(clippy::cast_precision_loss, reason = "a mean for a message")]
                let count = edges.len() as f64;
                middle[0] += (a + c) / 2.0 / count;
                middle[1] += (b + d) / 2.0 / count;
                area += (a * d - b * c) / 2.0;
            }
            Flaw {
                share: area,
                place: middle,
                cell: edges.iter().find_map(|e| e.cell),
            }
        })
        .collect()
}
