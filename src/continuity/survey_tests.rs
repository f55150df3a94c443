//! Demand, finding and verdict on sets with one seam in question.

use super::{Finding, Survey, Verdict};
use crate::bezier::{BezierPatch, Side};
use crate::patch_set::{Demand, PatchSet};
use crate::scalar::Tolerance;
use crate::topology::Topology;
use crate::topology::test_sets::{add, add_grid, demand, empty, net, rectangle};

/// A plane that leaves x = `start` at an angle to the plane z = 0.
fn tilted(start: f64, degrees: f64) -> BezierPatch {
    let (sin, cos) = degrees.to_radians().sin_cos();
    net((1, 1), move |u, v| {
        (start + 8.0 * u * cos, 5.0 * v, 8.0 * u * sin)
    })
}

fn two(start: f64, degrees: f64, stated: Option<Demand>) -> PatchSet {
    let mut set = empty();
    let b = add(&mut set, "b", &tilted(start, degrees));
    let a = add(&mut set, "a", &rectangle([0.0, 10.0], [0.0, 5.0]));
    if let Some(stated) = stated {
        demand(&mut set, (b, Side::U0), (a, Side::U1), stated);
    }
    set
}

fn survey(set: &PatchSet) -> Survey {
    let topology = Topology::build(set).unwrap();
    topology.check().unwrap();
    Survey::of(set, &topology)
}

#[test]
fn every_demand_meets_its_finding() {
    use Demand::{Crease, G0, G1, Open};
    let cases = [
        // Inferred: tangent, in between, crease.
        (10.0, 0.05, None, G1, Finding::Tangent, Verdict::Met),
        (10.0, 0.8, None, G1, Finding::Break, Verdict::Fault),
        (10.0, 45.0, None, Crease, Finding::Crease, Verdict::Met),
        // Stated.
        (10.0, 45.0, Some(G1), G1, Finding::Crease, Verdict::Fault),
        (10.0, 0.8, Some(G0), G0, Finding::Break, Verdict::Met),
        (
            10.0,
            0.8,
            Some(Crease),
            Crease,
            Finding::Break,
            Verdict::Met,
        ),
        (10.0, 0.0, Some(Open), Open, Finding::Open, Verdict::Met),
        // Apart by less and by more than the search distance.
        (10.05, 0.0, None, G1, Finding::Gap, Verdict::Fault),
        (10.05, 0.0, Some(Open), Open, Finding::Open, Verdict::Met),
        (14.0, 0.0, Some(G1), G1, Finding::Apart, Verdict::Fault),
        (14.0, 0.0, Some(Open), Open, Finding::Open, Verdict::Met),
    ];
    for (start, degrees, stated, demand, finding, verdict) in cases {
        let found = survey(&two(start, degrees, stated));
        let [seam] = found.seams.as_slice() else {
            panic!("one seam: {start} {degrees} {stated:?}")
        };
        let case = format!("{start} {degrees} {stated:?}");
        assert_eq!(seam.demand, demand, "{case}");
        assert_eq!(seam.finding, finding, "{case}");
        assert_eq!(seam.verdict, verdict, "{case}");
        let source = seam.demand_source == crate::patch_set::DemandSource::Stated;
        assert_eq!(source, stated.is_some(), "{case}");
        // The lesser name comes first, whatever the order in the file.
        assert_eq!(seam.between.0.index(), 1, "{case}");
        if finding == Finding::Apart {
            let gap = seam.gap.bracket;
            assert!((gap.attained - 4.0).abs() < 1e-9 && gap.proved < 4.1);
        }
    }
    assert!(survey(&two(14.0, 0.0, None)).seams.is_empty());
}

/// No verdict on curvature unless its tolerance is set.
#[test]
fn curvature_is_judged_only_on_request() {
    let bent = net((2, 1), |u, v| {
        (10.0 + 10.0 * u, 5.0 * v, if u > 0.9 { 2.0 } else { 0.0 })
    });
    let mut set = empty();
    let a = add(&mut set, "a", &rectangle([0.0, 10.0], [0.0, 5.0]));
    let b = add(&mut set, "b", &bent);
    demand(&mut set, (a, Side::U1), (b, Side::U0), Demand::G2);
    let found = survey(&set);
    assert_eq!(found.seams[0].finding, Finding::Tangent);
    assert_eq!(found.seams[0].verdict, Verdict::Met);
    set.tolerances.curvature_per_mm = Some(Tolerance::new(2e-4).unwrap());
    let found = survey(&set);
    assert_eq!(found.seams[0].finding, Finding::Curvature);
    assert_eq!(found.seams[0].verdict, Verdict::Fault);
    // S_u = (10, 0, 0) and S_uu = (0, 0, 4) at the edge: 4 / 100.
    let step = found.seams[0].curvature_per_mm.unwrap().bracket.attained;
    assert!((step - 0.04).abs() < 1e-12);
}

/// A patch of many pieces is one seam to its neighbour; its own lines are not
/// listed while they are smooth.
#[test]
fn pieces_are_grouped_by_patch_edge() {
    let surface = net((3, 3), |u, v| {
        (40.0 * u, 30.0 * v, (3.0 * u).sin() * (2.0 * v).cos())
    });
    let mut set = empty();
    let left = surface.restrict([0.0, 0.5], [0.0, 1.0]);
    let right = surface.restrict([0.5, 1.0], [0.0, 1.0]);
    add_grid(&mut set, "a", &left, [&[0.0, 0.4, 1.0], &[0.0, 0.5, 1.0]]);
    add_grid(&mut set, "b", &right, [&[0.0, 1.0], &[0.0, 0.2, 0.7, 1.0]]);
    let found = survey(&set);
    assert_eq!(found.seams.len(), 1);
    let whole = left.edge(Side::U1).length();
    assert!((found.seams[0].length - whole).abs() < 1e-6);
    assert_eq!(found.findings(), 0);
    assert_eq!(found.loops.len(), 1);
    assert_eq!(found.loops[0].edges.len(), 6);
}

/// Three on one edge are reported, with their length.
#[test]
fn crowds_are_findings() {
    let mut set = two(10.0, 45.0, None);
    add(&mut set, "c", &tilted(10.0, -60.0));
    let found = survey(&set);
    assert_eq!(found.crowds.len(), 1);
    assert_eq!(found.crowds[0].edges.len(), 3);
    assert!((found.crowds[0].length - 5.0).abs() < 1e-12);
    assert_eq!(found.findings(), 1);
}

/// The two sides of a sliver are near one another, but not neighbours.
#[test]
fn what_lies_beyond_a_sliver_is_no_near_miss() {
    let mut set = empty();
    add(&mut set, "a", &rectangle([0.0, 10.0], [0.0, 5.0]));
    add(&mut set, "b", &rectangle([10.0, 10.05], [0.0, 5.0]));
    add(&mut set, "c", &rectangle([10.05, 20.0], [0.0, 5.0]));
    let found = survey(&set);
    assert_eq!(found.seams.len(), 2);
    assert_eq!(found.findings(), 0);
    // A sliver at the rim: its far side is open, and near the edge within.
    let mut set = empty();
    add(&mut set, "a", &rectangle([0.0, 10.0], [0.0, 5.0]));
    add(&mut set, "b", &rectangle([10.0, 10.05], [0.0, 5.0]));
    let found = survey(&set);
    assert_eq!(found.seams.len(), 1);
    assert_eq!(found.findings(), 0);
    // The same with the sliver before its neighbour.
    let mut set = empty();
    add(&mut set, "a", &rectangle([10.0, 10.05], [0.0, 5.0]));
    add(&mut set, "b", &rectangle([0.0, 10.0], [0.0, 5.0]));
    let found = survey(&set);
    assert_eq!(found.seams.len(), 1);
    assert_eq!(found.findings(), 0);
    // A fin that stops short of a seam is a near miss of both its edges.
    let mut set = empty();
    add(&mut set, "a", &rectangle([0.0, 10.0], [0.0, 5.0]));
    add(&mut set, "b", &rectangle([10.0, 20.0], [0.0, 5.0]));
    add(
        &mut set,
        "fin",
        &net((1, 1), |u, v| (10.0, 5.0 * v, 0.05 + 8.0 * u)),
    );
    let found = survey(&set);
    let gaps = found.seams.iter().filter(|s| s.finding == Finding::Gap);
    assert_eq!(gaps.count(), 2);
}

/// A gap that grows from the corner is a near miss as long as it is within the
/// search distance: sin(angle) = 0.1 / 0.1 mm of search at 1 / 100.
#[test]
fn a_slit_is_a_near_miss_with_its_length() {
    let mut set = empty();
    add(&mut set, "a", &rectangle([0.0, 50.0], [0.0, 100.0]));
    // Opens from (50, 0) at one in a hundred: 0.1 mm after ten.
    let opened = net((1, 1), |u, v| (50.0 + v + u * (50.0 - v), 100.0 * v, 0.0));
    add(&mut set, "b", &opened);
    let found = survey(&set);
    let [slit] = found.slits.as_slice() else {
        panic!("{:?}", found.slits)
    };
    assert!((slit.length - 10.0).abs() < 0.01, "{slit:?}");
    assert!((slit.gap.bracket.attained - 0.1).abs() < 1e-6);
    assert!(slit.gap.bracket.proved <= slit.gap.bracket.attained * 1.02);
    assert_eq!(found.findings(), 1);
    // So is an edge that runs into the other patch as slowly.
    let mut overlapping = empty();
    add(&mut overlapping, "a", &rectangle([0.0, 50.0], [0.0, 100.0]));
    let into = net((1, 1), |u, v| (50.0 - v + u * (50.0 + v), 100.0 * v, 0.0));
    add(&mut overlapping, "b", &into);
    let found_slits = survey(&overlapping).slits;
    let [slit] = found_slits.as_slice() else {
        panic!("{found_slits:?}")
    };
    assert!((slit.length - 10.0).abs() < 0.01, "{slit:?}");
    // Demanded open, it is none.
    let set = {
        let (a, b) = (
            crate::patch_set::PatchId::new(0),
            crate::patch_set::PatchId::new(1),
        );
        demand(&mut set, (a, Side::U1), (b, Side::U0), Demand::Open);
        set
    };
    assert!(survey(&set).slits.is_empty());
    // Two sides of a pointed part run together, and are no slit.
    let mut set = empty();
    let half = |side: f64| {
        net((1, 1), move |u, v| {
            (100.0 * u, side * v * (2.0 - 1.98 * u), 0.0)
        })
    };
    add(&mut set, "a", &half(1.0));
    add(&mut set, "b", &half(-1.0));
    assert!(survey(&set).slits.is_empty());
}

/// Duplicates, overlaps and slivers.
#[test]
fn what_lies_on_another_is_told() {
    let mut set = empty();
    let wave = net((3, 3), |u, v| {
        (60.0 * u, 40.0 * v, 5.0 * (3.0 * u).sin() * v)
    });
    add(&mut set, "a", &wave);
    add(&mut set, "b", &wave.transposed());
    add(
        &mut set,
        "c",
        &wave.restrict([0.4, 0.9], [0.3, 0.8]).map(|p| p),
    );
    add(&mut set, "d", &rectangle([200.0, 300.0], [0.0, 0.03]));
    let found = survey(&set);
    let pairs: Vec<([usize; 2], bool)> = found
        .overlaps
        .iter()
        .map(|o| (o.patches.map(|p| p.index()), o.duplicate))
        .collect();
    assert_eq!(pairs, [([0, 1], true), ([0, 2], false), ([1, 2], false)]);
    let [sliver] = found.slivers.as_slice() else {
        panic!("{:?}", found.slivers)
    };
    assert_eq!(sliver.patch.index(), 3);
    assert!((sliver.width - 0.03).abs() < 1e-9);
    // Neighbours are not on one another.
    let mut set = empty();
    add(&mut set, "a", &wave.restrict([0.0, 0.5], [0.0, 1.0]));
    add(&mut set, "b", &wave.restrict([0.5, 1.0], [0.0, 1.0]));
    assert!(survey(&set).overlaps.is_empty());
}

/// A break on one hundredth of the seam, off every uniform place: found, and
/// placed to the hundredth. The lifted row of a spline of degree 3 cut at the
/// bump's ends.
#[test]
fn a_break_on_a_hundredth_is_found_and_placed() {
    let mut set = empty();
    add(&mut set, "a", &rectangle([0.0, 10.0], [0.0, 100.0]));
    let breaks = [0.0, 0.617, 0.627, 1.0];
    let flat = rectangle([10.0, 20.0], [0.0, 100.0]);
    let id = add_grid(&mut set, "b", &flat, [&[0.0, 1.0], &breaks]);
    // The middle piece: degree 4 along, its middle point of row 1 lifted.
    let at = set.patches[id.index()].pieces.start + 1;
    let lifted = net((2, 4), |u, v| {
        let lift = if (u - 0.5).abs() < 0.1 && (v - 0.5).abs() < 0.1 {
            0.05
        } else {
            0.0
        };
        (10.0 + 10.0 * u, 61.7 + v, lift)
    });
    set.pieces[at].surface = lifted;
    let found = survey(&set);
    let fault: Vec<_> = found
        .seams
        .iter()
        .filter(|s| s.finding == Finding::Break)
        .collect();
    let [seam] = fault.as_slice() else {
        panic!("{:?}", found.seams)
    };
    // Slope across is 2 * 0.05 * B / 10, B = 6 t^2 (1 - t)^2, at most 3 / 8.
    let expected = (0.01_f64 * 0.375).atan().to_degrees();
    let angle = seam.angle_deg.unwrap().bracket;
    assert!((angle.attained - expected).abs() < 1e-6, "{angle:?}");
    assert!(angle.proved <= angle.attained * 1.02);
    let [stretch] = seam.failing.as_slice() else {
        panic!("{:?}", seam.failing)
    };
    assert!(
        stretch.from.point.y > 61.7 && stretch.to.point.y < 62.7,
        "{stretch:?}"
    );
    // 0.01 B = tan(0.1 degrees) has its roots symmetrically about the middle.
    let root = |target: f64| {
        let x = (target / 0.06_f64).sqrt();
        (1.0 - (1.0 - 4.0 * x).sqrt()) / 2.0
    };
    let from = root(0.1_f64.to_radians().tan());
    assert!(
        (stretch.from.point.y - 61.7 - from).abs() < 1e-6,
        "{stretch:?}"
    );
    assert!(
        (stretch.length - (1.0 - 2.0 * from)).abs() < 1e-6,
        "{stretch:?}"
    );
}

/// Gaps between the tolerance and the length asked for are closed in the mesh,
/// and stay faults.
#[test]
fn closed_gaps_stay_faults() {
    let mut set = two(10.05, 0.0, None);
    assert_eq!(Topology::build(&set).unwrap().open_loops().len(), 2);
    set.tolerances.close_gaps = Some(Tolerance::new(0.06).unwrap());
    assert_eq!(Topology::build(&set).unwrap().open_loops().len(), 1);
    let found = survey(&set);
    let [seam] = found.seams.as_slice() else {
        panic!("one seam")
    };
    assert!(seam.joined && seam.bridged);
    assert_eq!(seam.finding, Finding::Gap);
    assert_eq!(seam.verdict, Verdict::Fault);
    assert!((seam.severity - 5.0).abs() < 1e-6);
}
