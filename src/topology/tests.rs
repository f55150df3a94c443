//! Sets with known topology.

use super::test_sets::{add, add_grid, add_pieces, demand, empty, net, rectangle, revolved};
use super::{EdgeId, Topology};
use crate::bezier::{BezierPatch, Side};
use crate::patch_set::{Demand, PatchSet, PieceId};

fn build(set: &PatchSet) -> Topology {
    let topology = Topology::build(set).unwrap();
    topology.check().unwrap();
    topology
}

/// Seams by number of uses: open, ordinary, non-manifold.
fn uses(topology: &Topology) -> [usize; 3] {
    let mut count = [0; 3];
    for seam in topology.seams() {
        count[seam.spans.len().min(3) - 1] += 1;
    }
    count
}

fn edge(piece: usize, side: Side) -> EdgeId {
    EdgeId::of(PieceId::new(piece), side)
}

/// A wavy strip of degree 3 in v, its long edges different cubics.
fn wave() -> BezierPatch {
    net((3, 3), |u, v| {
        (
            100.0 * u,
            100.0 * v,
            20.0 * (7.0 * v + 2.0 * u).sin() + 5.0 * (9.0 * u * v).cos(),
        )
    })
}

#[test]
fn two_rectangles_share_one_seam() {
    let mut set = empty();
    add(&mut set, "a", &rectangle([0.0, 10.0], [0.0, 5.0]));
    add(&mut set, "b", &rectangle([10.0, 20.0], [0.0, 5.0]));
    let topology = build(&set);
    assert_eq!(uses(&topology), [6, 1, 0]);
    assert_eq!(topology.nodes().len(), 6);
    assert_eq!(topology.open_loops().len(), 1);
    assert_eq!(topology.open_loops()[0].len(), 6);
    let [contact] = topology.contacts() else {
        panic!("one contact")
    };
    assert_eq!(contact.edges, [edge(0, Side::U1), edge(1, Side::U0)]);
    assert!(contact.second[0] < contact.second[1]);
    assert!(contact.joined && contact.gap.proved < 1e-13);
}

#[test]
fn reversed_and_transposed_neighbours_are_found() {
    let surface = wave();
    let left = surface.restrict([0.0, 0.5], [0.0, 1.0]);
    let right = surface.restrict([0.5, 1.0], [0.0, 1.0]);
    let variants = [
        (right.clone(), Side::U0, false),
        (right.restrict([0.0, 1.0], [1.0, 0.0]), Side::U0, true),
        (right.restrict([1.0, 0.0], [0.0, 1.0]), Side::U1, false),
        (right.transposed(), Side::V0, false),
    ];
    for (other, side, against) in variants {
        let mut set = empty();
        add(&mut set, "a", &left);
        add(&mut set, "b", &other);
        let topology = build(&set);
        assert_eq!(uses(&topology), [6, 1, 0]);
        let contact = &topology.contacts()[0];
        assert_eq!(contact.edges, [edge(0, Side::U1), edge(1, side)]);
        let span = topology.edges()[contact.edges[1].index()].spans.start;
        assert_eq!(topology.spans()[span].reversed, against);
        assert!(contact.gap.proved < 1e-9, "{:?}", contact.gap);
    }
}

/// The same curve raised to degree 7, and split unevenly on the other side:
/// still one place to round-off.
#[test]
fn degree_raised_and_split_edges_coincide() {
    let surface = wave();
    let left = surface.restrict([0.0, 0.5], [0.0, 1.0]);
    let right = surface.restrict([0.5, 1.0], [0.0, 1.0]);
    let rows: Vec<_> = (0..=3)
        .map(|i| {
            let points = (0..=3).map(|j| right.control_point(i, j)).collect();
            crate::bezier::BezierCurve::new(points, None)
                .unwrap()
                .elevated(7)
                .unwrap()
        })
        .collect();
    let points = rows
        .iter()
        .flat_map(|r| r.control_points().collect::<Vec<_>>());
    let raised = BezierPatch::new((3, 7), points.collect(), None).unwrap();
    let mut set = empty();
    add(&mut set, "a", &left);
    add_grid(&mut set, "b", &raised, [&[0.0, 1.0], &[0.0, 0.3, 0.7, 1.0]]);
    let topology = build(&set);
    // Three on the seam, two inside b.
    assert_eq!(uses(&topology), [3 + 3 + 2, 3 + 2, 0]);
    assert_eq!(topology.edges()[edge(0, Side::U1).index()].spans.len(), 3);
    for span in topology.spans() {
        assert!(span.gap.proved < 1e-9, "{:?}", span.gap);
    }
    let along = &topology.spans()[topology.edges()[edge(0, Side::U1).index()].spans.start];
    assert!((along.t[1] - 0.3).abs() < 1e-9);
}

#[test]
fn a_t_junction_splits_the_long_edge() {
    let mut set = empty();
    add(&mut set, "long", &rectangle([0.0, 10.0], [0.0, 9.0]));
    add(&mut set, "one", &rectangle([10.0, 20.0], [0.0, 2.0]));
    add(&mut set, "two", &rectangle([10.0, 20.0], [2.0, 7.0]));
    add(&mut set, "three", &rectangle([10.0, 20.0], [7.0, 9.0]));
    let topology = build(&set);
    assert_eq!(uses(&topology), [3 + 1 + 1 + 3, 5, 0]);
    assert_eq!(topology.nodes().len(), 4 + 2 + 4);
    assert_eq!(topology.open_loops().len(), 1);
}

#[test]
fn a_partial_overlap_joins_the_common_stretch_only() {
    let mut set = empty();
    add(&mut set, "a", &rectangle([0.0, 10.0], [0.0, 6.0]));
    add(&mut set, "b", &rectangle([10.0, 20.0], [4.0, 10.0]));
    let topology = build(&set);
    assert_eq!(uses(&topology), [8, 1, 0]);
    assert_eq!(topology.open_loops().len(), 1);
    let contact = &topology.contacts()[0];
    assert!((contact.first[0] - 4.0 / 6.0).abs() < 1e-12);
    assert!((contact.second[1] - 2.0 / 6.0).abs() < 1e-12);
}

#[test]
fn three_on_one_edge_are_one_seam() {
    let mut set = empty();
    add(&mut set, "a", &rectangle([0.0, 10.0], [0.0, 5.0]));
    add(&mut set, "b", &rectangle([10.0, 20.0], [0.0, 5.0]));
    let fin = net((1, 1), |u, v| (10.0, 5.0 * v, 8.0 * u));
    add(&mut set, "c", &fin);
    let topology = build(&set);
    assert_eq!(uses(&topology), [9, 0, 1]);
    assert_eq!(topology.contacts().len(), 3);
}

#[test]
fn an_open_demand_keeps_edges_apart() {
    let mut set = empty();
    let a = add(&mut set, "a", &rectangle([0.0, 10.0], [0.0, 5.0]));
    let b = add(&mut set, "b", &rectangle([10.0, 20.0], [0.0, 5.0]));
    demand(&mut set, (b, Side::U0), (a, Side::U1), Demand::Open);
    let topology = build(&set);
    assert_eq!(uses(&topology), [8, 0, 0]);
    assert_eq!(topology.nodes().len(), 8);
    assert_eq!(topology.open_loops().len(), 2);
    assert!(!topology.contacts()[0].joined);
}

#[test]
fn near_misses_stay_open() {
    let mut set = empty();
    add(&mut set, "a", &rectangle([0.0, 10.0], [0.0, 5.0]));
    add(&mut set, "b", &rectangle([10.05, 20.0], [0.0, 5.0]));
    let topology = build(&set);
    assert_eq!(uses(&topology), [8, 0, 0]);
    let [contact] = topology.contacts() else {
        panic!("one contact")
    };
    assert!(!contact.joined);
    assert!((contact.gap.attained - 0.05).abs() < 1e-9);
    assert!(contact.gap.proved / contact.gap.attained < 1.02);
}

/// Cylinder: four pieces round, closed onto themselves.
#[test]
fn a_cylinder_closes() {
    let mut set = empty();
    add_pieces(
        &mut set,
        "cylinder",
        &revolved(&[(5.0, 0.0, 1.0), (5.0, 20.0, 1.0)]),
    );
    let topology = build(&set);
    assert_eq!(uses(&topology), [8, 4, 0]);
    assert_eq!(topology.open_loops().len(), 2);
    assert!(topology.open_loops().iter().all(|l| l.len() == 4));
}

/// Sphere: eight octants, poles collapsed; Euler: V - E + F = 2.
#[test]
fn a_sphere_closes_at_its_poles() {
    let s = 0.5_f64.sqrt();
    let r = 500.0;
    let mut set = empty();
    add_pieces(
        &mut set,
        "south",
        &revolved(&[(0.0, -r, 1.0), (r, -r, s), (r, 0.0, 1.0)]),
    );
    add_pieces(
        &mut set,
        "north",
        &revolved(&[(r, 0.0, 1.0), (r, r, s), (0.0, r, 1.0)]),
    );
    let topology = build(&set);
    assert_eq!(uses(&topology), [0, 12, 0]);
    assert_eq!(topology.nodes().len(), 6);
    assert_eq!(topology.edges().iter().filter(|e| e.collapsed).count(), 8);
    assert!(topology.open_loops().is_empty());
}

/// Torus: sixteen pieces; Euler: V - E + F = 0.
#[test]
fn a_torus_closes() {
    let s = 0.5_f64.sqrt();
    let profile = [
        [(30.0, 0.0, 1.0), (30.0, 5.0, s), (25.0, 5.0, 1.0)],
        [(25.0, 5.0, 1.0), (20.0, 5.0, s), (20.0, 0.0, 1.0)],
        [(20.0, 0.0, 1.0), (20.0, -5.0, s), (25.0, -5.0, 1.0)],
        [(25.0, -5.0, 1.0), (30.0, -5.0, s), (30.0, 0.0, 1.0)],
    ];
    let mut set = empty();
    for (k, quarter) in profile.iter().enumerate() {
        add_pieces(&mut set, &format!("ring/{k}"), &revolved(quarter));
    }
    let topology = build(&set);
    assert_eq!(uses(&topology), [0, 32, 0]);
    assert_eq!(topology.nodes().len(), 16);
}

/// Two squares that touch at a corner only: two nodes there, two loops.
#[test]
fn a_touch_at_a_point_joins_nothing() {
    let mut set = empty();
    add(&mut set, "a", &rectangle([0.0, 10.0], [0.0, 5.0]));
    add(&mut set, "b", &rectangle([10.0, 20.0], [5.0, 10.0]));
    let topology = build(&set);
    assert!(topology.contacts().is_empty());
    assert_eq!(topology.nodes().len(), 8);
    assert_eq!(topology.open_loops().len(), 2);
}

/// A gap of nine tenths of the tolerance is joined, one of 1.03 is not.
#[test]
fn the_gap_tolerance_decides() {
    for (gap, joined) in [(0.009, true), (0.0103, false)] {
        let mut set = empty();
        add(&mut set, "a", &rectangle([0.0, 10.0], [0.0, 5.0]));
        add(&mut set, "b", &rectangle([10.0 + gap, 20.0], [0.0, 5.0]));
        assert_eq!(build(&set).contacts()[0].joined, joined, "{gap}");
    }
}

/// A sliver between two patches, narrower than the gap tolerance.
#[test]
fn slivers_do_not_break_the_structure() {
    for width in [0.5, 0.05, 0.008, 0.001] {
        let mut set = empty();
        add(&mut set, "a", &rectangle([0.0, 10.0], [0.0, 5.0]));
        add(&mut set, "b", &rectangle([10.0, 10.0 + width], [0.0, 5.0]));
        add(&mut set, "c", &rectangle([10.0 + width, 20.0], [0.0, 5.0]));
        // Joined on both sides; its two ends stay two places.
        assert_eq!(uses(&build(&set)), [8, 2, 0], "{width}");
    }
}

/// The same patch twice: every edge used twice, nothing open.
#[test]
fn duplicates_are_joined_all_round() {
    let mut set = empty();
    add(&mut set, "a", &wave());
    add(&mut set, "b", &wave());
    let topology = build(&set);
    assert_eq!(uses(&topology), [0, 4, 0]);
}

/// The order in the file changes ids, never who is master.
#[test]
fn the_least_name_is_master() {
    let mut set = empty();
    add(&mut set, "b", &rectangle([10.0, 20.0], [0.0, 5.0]));
    add(&mut set, "a", &rectangle([0.0, 10.0], [0.0, 5.0]));
    let topology = build(&set);
    let seam = topology
        .seams()
        .iter()
        .find(|s| s.spans.len() == 2)
        .unwrap();
    let master = &topology.spans()[seam.spans[0].index()];
    assert_eq!(master.edge, edge(1, Side::U1));
}

/// A corner on one edge reaches a third edge by way of a second, though the
/// first and the third are not within the gap tolerance of each other.
#[test]
fn corners_are_carried_from_edge_to_edge() {
    let mut set = empty();
    add(&mut set, "m", &rectangle([10.0, 20.0], [0.0, 9.0]));
    add(
        &mut set,
        "n",
        &net((1, 1), |u, v| (10.008, 9.0 * v, 7.0 * u)),
    );
    add(&mut set, "one", &rectangle([0.0, 9.992], [0.0, 4.0]));
    add(&mut set, "two", &rectangle([0.0, 9.992], [4.0, 9.0]));
    let topology = build(&set);
    assert_eq!(topology.contacts().iter().filter(|c| c.joined).count(), 4);
    assert_eq!(topology.edges()[edge(1, Side::U0).index()].spans.len(), 2);
    assert_eq!(uses(&topology)[2], 2);
}
