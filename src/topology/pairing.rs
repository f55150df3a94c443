//! Which edges keep together: the contacts of a set.
//!
//! A common stretch begins and ends where a corner of one edge falls on the
//! other. So the four corners of a pair are dropped on the other edge; between
//! two neighbouring places found the two edges either keep within the search
//! distance (bracketed, see [`super::gap`]) or they do not meet there.

use rayon::prelude::*;

use super::box_tree::BoxTree;
use super::edge_curve::EdgeCurve;
use super::gap::{Stretch, gap};
use super::model::Contact;
use super::nearest::nearest;
use crate::pace;

/// The distances pairing works with, in length units.
#[derive(Debug, Clone, Copy)]
pub(super) struct Reach {
    /// Within this edges are joined.
    pub(super) gap: f64,
    /// Within this edges are looked at together.
    pub(super) search: f64,
    /// A length as good as none.
    pub(super) floor: f64,
}

impl Reach {
    /// The reach for a pair of edges: search never above half the shorter one,
    /// gap never above search.
    fn of(&self, a: &EdgeCurve, b: &EdgeCurve) -> Self {
        let search = self.search.max(self.gap).min(a.length.min(b.length) / 2.0);
        Self {
            gap: self.gap.min(search),
            search,
            floor: self.floor.min(search / 8.0),
        }
    }
}

/// A question about two edges.
type Ask<'a, T> = &'a (dyn Fn(&EdgeCurve, &EdgeCurve) -> T + Sync);

/// What a pair of edges is held to.
pub(super) struct Limits<'a> {
    /// The gap tolerance of a pair.
    pub(super) gap: Ask<'a, f64>,
    /// Gaps up to this are closed even so; zero for none.
    pub(super) close: f64,
    /// Whether a pair is demanded open.
    pub(super) parted: Ask<'a, bool>,
}

/// A corner of one edge that falls on the other.
#[derive(Debug, Clone, Copy)]
struct Meeting {
    s: f64,
    t: f64,
    distance: f64,
}

impl Meeting {
    fn at_corners(&self) -> bool {
        is_end(self.s) && is_end(self.t)
    }
}

/// Whether a parameter is exactly an end; ends are snapped, never computed.
pub(super) fn is_end(t: f64) -> bool {
    t <= 0.0 || t >= 1.0
}

/// All contacts, in the order of their edges' ranks.
pub(super) fn contacts(edges: &[EdgeCurve], reach: Reach, limits: &Limits<'_>) -> Vec<Contact> {
    let entries: Vec<usize> = (0..edges.len()).filter(|&i| !edges[i].collapsed).collect();
    let tree = BoxTree::new(edges.iter().map(|e| e.cuboid).collect(), entries.clone());
    pace::expect(entries.len() as u64, "edges");
    let mut found: Vec<((u64, u64), Contact)> = entries
        .par_iter()
        .with_min_len(64)
        .flat_map_iter(|&i| {
            let mut list = Vec::new();
            let a = &edges[i];
            tree.meeting(&a.cuboid.grown(reach.search.max(reach.gap)), |j| {
                let b = &edges[j];
                if a.rank < b.rank {
                    pair(a, b, reach, limits, |contact| {
                        list.push(((a.rank, b.rank), contact));
                    });
                }
            });
            pace::step(1);
            list
        })
        .collect();
    found.sort_by(|(p, c), (q, d)| p.cmp(q).then(c.first[0].total_cmp(&d.first[0])));
    found.into_iter().map(|(_, contact)| contact).collect()
}

/// Finds the contacts of one pair, `a` of lesser rank.
fn pair(
    a: &EdgeCurve,
    b: &EdgeCurve,
    reach: Reach,
    limits: &Limits<'_>,
    mut found: impl FnMut(Contact),
) {
    let limit = (limits.gap)(a, b);
    let wide = Reach {
        gap: limit.max(limits.close),
        ..reach
    };
    let mut reach = wide.of(a, b);
    if a.id.piece() == b.id.piece() {
        if a.id.side().index() / 2 != b.id.side().index() / 2 {
            // Neighbours round a corner of their own piece.
            return;
        }
        // Opposite edges meet only where the piece is closed; a sliver is not.
        reach.search = reach.search.min(a.half_width);
        reach.gap = reach.gap.min(reach.search);
    }
    let meetings = meetings(a, b, &reach);
    for window in meetings.windows(2) {
        let (from, to) = (window[0], window[1]);
        let first = Stretch {
            curve: &a.curve,
            range: [from.s, to.s],
        };
        let second = Stretch {
            curve: &b.curve,
            range: [from.t, to.t],
        };
        if from.s >= to.s || from.t.total_cmp(&to.t).is_eq() {
            continue;
        }
        let gap = gap(first, second, reach.floor, reach.search);
        if gap.bracket.proved > reach.search {
            continue;
        }
        let joined = gap.bracket.proved <= reach.gap;
        // A touch at a corner is no stretch.
        let least = if joined { reach.gap } else { reach.search };
        if !is_whole(first.range) && first.cut().length() <= least
            || !is_whole(second.range) && second.cut().length() <= least
        {
            continue;
        }
        found(Contact {
            edges: [a.id, b.id],
            first: first.range,
            second: second.range,
            gap: gap.bracket,
            gap_at: gap.at,
            joined: joined && !(limits.parted)(a, b),
            bridged: joined && gap.bracket.proved > limit && !(limits.parted)(a, b),
        });
    }
}

fn is_whole(range: [f64; 2]) -> bool {
    is_end(range[0]) && is_end(range[1])
}

/// Corners of either edge that fall on the other, ascending on the first.
fn meetings(a: &EdgeCurve, b: &EdgeCurve, reach: &Reach) -> Vec<Meeting> {
    let mut found: Vec<Meeting> = Vec::with_capacity(4);
    let (near_a, near_b) = (a.cuboid.grown(reach.search), b.cuboid.grown(reach.search));
    // Cheap first: one end of each on an end of the other is most often all.
    let reachable = |ends: &EdgeCurve, near: &crate::scalar::Cuboid| {
        ends.ends.iter().filter(|p| near.holds(p)).count()
    };
    if reachable(a, &near_b) + reachable(b, &near_a) < 2 {
        return found;
    }
    for (k, s) in [0.0, 1.0].into_iter().enumerate() {
        if near_b.holds(&a.ends[k])
            && let Some((t, distance)) = drop_on(b, &a.ends[k], reach)
        {
            found.push(Meeting { s, t, distance });
        }
        if near_a.holds(&b.ends[k])
            && let Some((t, distance)) = drop_on(a, &b.ends[k], reach)
        {
            found.push(Meeting {
                s: t,
                t: s,
                distance,
            });
        }
    }
    // Where a corner falls inside the other edge, the pair of corners there
    // (nearest only because the curve ends) says nothing.
    let all = found.clone();
    found.retain(|m| {
        !m.at_corners()
            || m.distance <= reach.gap
            || !all
                .iter()
                .any(|n| !n.at_corners() && beside(a, b, m, n, reach))
    });
    found.sort_by(|m, n| {
        m.s.total_cmp(&n.s)
            .then(m.t.total_cmp(&n.t))
            .then(m.distance.total_cmp(&n.distance))
    });
    found.dedup_by(|m, n| m.s.total_cmp(&n.s).is_eq() && m.t.total_cmp(&n.t).is_eq());
    found
}

fn beside(a: &EdgeCurve, b: &EdgeCurve, m: &Meeting, n: &Meeting, reach: &Reach) -> bool {
    let near = 2.0 * reach.search;
    (a.curve.eval(m.s) - a.curve.eval(n.s)).norm() <= near
        && (b.curve.eval(m.t) - b.curve.eval(n.t)).norm() <= near
}

/// The place of an edge nearest to a point, if within the search distance; an
/// end of the edge where that is within the gap of it.
fn drop_on(edge: &EdgeCurve, point: &crate::scalar::Point, reach: &Reach) -> Option<(f64, f64)> {
    for (end, t) in edge.ends.iter().zip([0.0, 1.0]) {
        let distance = (end - point).norm();
        if distance <= reach.floor {
            return Some((t, distance));
        }
    }
    let foot = nearest(&edge.curve, point, [0.0, 1.0]);
    if foot.distance > reach.search {
        return None;
    }
    let place = edge.curve.eval(foot.t);
    let end = usize::from(foot.t > 0.5);
    let t = if (place - edge.ends[end]).norm() <= reach.gap {
        [0.0, 1.0][end]
    } else {
        foot.t
    };
    Some((t, (edge.curve.eval(t) - point).norm()))
}
