//! Which patches face the same way: components, flipped patches, and the turn
//! that settles them.
//!
//! Neighbours run opposite ways round their common edge, so the sides alone say
//! whether two stated normals point to one side. A closed component is turned
//! outwards by the sign of its volume (sampled at 16 places a piece); an open
//! one keeps the way most of its area faces, and of equal areas that of its
//! first patch.

use std::collections::VecDeque;

use super::{EdgeId, Topology};
use crate::bezier::Side;
use crate::patch_set::{PatchId, PatchSet, PieceId};
use crate::scalar::Vector;

/// Patches that hang together through joined seams.
#[derive(Debug, Clone, PartialEq)]
pub struct Component {
    /// Its patches, ascending.
    pub patches: Vec<PatchId>,
    /// Whether no edge of it is open.
    pub closed: bool,
    /// Whether its patches can all face one way; a band with a half turn cannot.
    pub orientable: bool,
    /// The patches that have to be turned over for that, ascending.
    pub turned: Vec<PatchId>,
}

/// The components of a set, by their first patch.
#[derive(Debug, Clone, PartialEq)]
pub struct Orientation {
    /// The components.
    pub components: Vec<Component>,
}

/// Whether the stated normals of two patches point to one side of the surface
/// joined along a stretch (`first` and `second` as in [`super::Contact`]).
#[must_use]
pub fn normals_agree(
    set: &PatchSet,
    edges: [EdgeId; 2],
    first: [f64; 2],
    second: [f64; 2],
) -> bool {
    let against = (first[0] > first[1]) != (second[0] > second[1]);
    let [a, b] = edges.map(|edge| counterclockwise(set, edge));
    (a == b) == against
}

/// Whether an edge's parameter runs counterclockwise round its piece, seen
/// from outside.
fn counterclockwise(set: &PatchSet, edge: EdgeId) -> bool {
    let plain = matches!(edge.side(), Side::V0 | Side::U1);
    plain != set.patch_of(edge.piece()).flipped
}

impl Orientation {
    /// The components of a set, and what it takes to have each face one way.
    #[must_use]
    pub fn of(set: &PatchSet, topology: &Topology) -> Self {
        let count = set.patches().len();
        // Seams of three or more say nothing of inside and outside.
        let mut crowded = vec![false; topology.edges().len()];
        let mut open = vec![false; count];
        let patch = |edge: EdgeId| set.pieces()[edge.piece().index()].patch.index();
        for seam in topology.seams() {
            for span in seam.spans.iter().map(|s| &topology.spans()[s.index()]) {
                match seam.spans.len() {
                    1 => open[patch(span.edge)] = true,
                    2 => {}
                    _ => crowded[span.edge.index()] = true,
                }
            }
        }
        let mut beside: Vec<Vec<(usize, bool)>> = vec![Vec::new(); count];
        for contact in topology.contacts().iter().filter(|c| c.joined) {
            if contact.edges.iter().any(|e| crowded[e.index()]) {
                continue;
            }
            let [a, b] = contact.edges.map(patch);
            let agree = normals_agree(set, contact.edges, contact.first, contact.second);
            beside[a].push((b, agree));
            beside[b].push((a, agree));
        }
        let mut facing: Vec<Option<bool>> = vec![None; count];
        let mut components = Vec::new();
        for start in 0..count {
            if facing[start].is_some() {
                continue;
            }
            facing[start] = Some(true);
            let (mut members, mut orientable) = (vec![start], true);
            let mut queue = VecDeque::from([(start, true)]);
            while let Some((at, way)) = queue.pop_front() {
                for &(other, agree) in &beside[at] {
                    let wanted = way == agree;
                    match facing[other] {
                        Some(found) => orientable &= found == wanted,
                        None => {
                            facing[other] = Some(wanted);
                            members.push(other);
                            queue.push_back((other, wanted));
                        }
                    }
                }
            }
            members.sort_unstable();
            let closed = members.iter().all(|&m| !open[m]);
            let against = |m: usize| facing[m] == Some(false);
            let (mut area, mut volume) = (0.0, 0.0);
            for &member in &members {
                let (part, moment) = measures(set, member, start);
                let sign = if against(member) { -1.0 } else { 1.0 };
                area += sign * part;
                volume += sign * moment;
            }
            let keep = if closed { volume >= 0.0 } else { area >= 0.0 };
            let turned = members.iter().copied();
            let turned = turned.filter(|&m| orientable && against(m) == keep);
            components.push(Component {
                closed,
                orientable,
                turned: turned.map(PatchId::new).collect(),
                patches: members.into_iter().map(PatchId::new).collect(),
            });
        }
        Self { components }
    }

    /// All patches that have to be turned over, ascending.
    #[must_use]
    pub fn turned(&self) -> Vec<PatchId> {
        let all = self.components.iter().flat_map(|c| &c.turned);
        let mut all: Vec<PatchId> = all.copied().collect();
        all.sort_unstable();
        all
    }
}

/// Area of a patch, and the integral of (S - o) . n along its stated normal, o
/// the first point of patch `origin`: sampled at the middles of 4 x 4 cells.
fn measures(set: &PatchSet, patch: usize, origin: usize) -> (f64, f64) {
    let first = set.patches()[origin].pieces.start;
    let origin = set.pieces()[first].surface.control_point(0, 0);
    let patch = &set.patches()[patch];
    let outward = if patch.flipped { -1.0 } else { 1.0 };
    let (mut area, mut moment) = (0.0, 0.0);
    for piece in patch.pieces.clone().map(PieceId::new) {
        let surface = &set.pieces()[piece.index()].surface;
        for (i, j) in (0..4_u8).flat_map(|i| (0..4_u8).map(move |j| (i, j))) {
            let [u, v] = [i, j].map(|k| (f64::from(k) + 0.5) / 4.0);
            let jet = surface.jet(u, v);
            let normal: Vector = jet.cross() * (outward / 16.0);
            area += normal.norm();
            moment += (jet.point - origin).dot(&normal);
        }
    }
    (area, moment)
}

impl PatchSet {
    /// Turns patches over: their outward normal becomes the opposite one.
    pub fn turn_over(&mut self, patches: &[PatchId]) {
        for patch in patches {
            let patch = &mut self.patches[patch.index()];
            patch.flipped = !patch.flipped;
        }
    }
}

#[cfg(test)]
mod tests {
    use super::super::test_sets::{add, empty, net, rectangle};
    use super::*;

    fn orientation(set: &PatchSet) -> Orientation {
        let topology = Topology::build(set).unwrap();
        Orientation::of(set, &topology)
    }

    /// The six faces of a cube, each turned by chance: turned outwards, all
    /// normals point away from the middle.
    #[test]
    fn a_cube_is_turned_outwards() {
        for mask in 0..64_u8 {
            let mut set = empty();
            for face in 0..6_u8 {
                let (axis, side) = (face / 2, f64::from(face % 2));
                let turn = mask & (1 << face) != 0;
                let surface = net((1, 1), |u, v| {
                    let (u, v) = if turn { (v, u) } else { (u, v) };
                    match axis {
                        0 => (side, u, v),
                        1 => (u, side, v),
                        _ => (u, v, side),
                    }
                });
                let surface = surface.map(|p| crate::scalar::Point::from(p.coords * 50.0));
                add(&mut set, &format!("face {face}"), &surface);
            }
            let found = orientation(&set);
            let [component] = found.components.as_slice() else {
                panic!("one component")
            };
            assert!(component.closed && component.orientable);
            set.turn_over(&found.turned());
            for patch in 0..6 {
                let surface = &set.pieces()[patch].surface;
                let normal = surface.normal(0.5, 0.5).unwrap();
                let out = surface.eval(0.5, 0.5) - crate::scalar::Point::new(25.0, 25.0, 25.0);
                let sign = if set.patches()[patch].flipped {
                    -1.0
                } else {
                    1.0
                };
                assert!(sign * normal.dot(&out) > 0.0, "{mask} {patch}");
            }
            assert!(orientation(&set).turned().is_empty());
        }
    }

    /// An open sheet keeps the way most of it faces; parts apart are two.
    #[test]
    fn a_sheet_keeps_its_majority() {
        let mut set = empty();
        add(&mut set, "a", &rectangle([0.0, 10.0], [0.0, 5.0]));
        let b = add(
            &mut set,
            "b",
            &rectangle([10.0, 14.0], [0.0, 5.0]).transposed(),
        );
        add(&mut set, "c", &rectangle([100.0, 110.0], [0.0, 5.0]));
        let found = orientation(&set);
        assert_eq!(found.components.len(), 2);
        assert_eq!(found.turned(), [b]);
        assert!(!found.components[0].closed);
    }

    /// A band of three patches with a half turn cannot face one way.
    #[test]
    fn a_half_turn_is_told() {
        let mut set = empty();
        let at = |angle: f64, v: f64| {
            let (r, z) = ((angle / 2.0).cos() * v, (angle / 2.0).sin() * v);
            ((50.0 + r) * angle.cos(), (50.0 + r) * angle.sin(), z)
        };
        let third = std::f64::consts::TAU / 3.0;
        let ends = |k: u8, v: f64| {
            if k == 3 {
                // Back at the first end, turned over.
                at(0.0, -v)
            } else {
                at(f64::from(k) * third, v)
            }
        };
        for k in 0..3 {
            let strip = net((1, 1), |u, v| ends(k + u8::from(u > 0.5), 20.0 * v - 10.0));
            add(&mut set, &format!("{k}"), &strip);
        }
        let found = orientation(&set);
        assert_eq!(found.components.len(), 1);
        assert!(!found.components[0].orientable);
        assert!(found.turned().is_empty());
    }
}
