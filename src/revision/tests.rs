//! Distances with known answers, and sampling against the bounds.

use super::comparison::{Comparison, PatchState};
use super::seams::Trend;
use super::sheet::Sheet;
use super::{Course, Distance, distance};
use crate::bezier::{BezierCurve, BezierPatch, Side};
use crate::continuity::Verdict;
use crate::patch_set::PatchSet;
use crate::scalar::{Point, Tolerance, Vector};
use crate::topology::test_sets::{add, add_grid, empty, net, rectangle, revolved};

const FLOOR: f64 = 1e-7;

fn one(surface: &BezierPatch) -> PatchSet {
    let mut set = empty();
    add(&mut set, "a", surface);
    set
}

fn apart(old: &BezierPatch, new: &BezierPatch) -> Distance {
    let (old, new) = (one(old), one(new));
    distance((&old, &old.patches()[0]), (&new, &new.patches()[0]), FLOOR)
}

fn wave() -> BezierPatch {
    net((3, 3), |u, v| {
        (
            200.0 * u + 9.0 * v * v,
            150.0 * v,
            25.0 * (2.5 * u + 1.0).sin() * (1.9 * v).cos(),
        )
    })
}

/// Raised along v by so many degrees, weights and all.
fn raised(patch: &BezierPatch, by: usize) -> BezierPatch {
    let (m, n) = patch.degree();
    let (mut points, mut weights) = (vec![], vec![]);
    for i in 0..=m {
        let row = (0..=n).map(|j| patch.control_point(i, j)).collect();
        let heavy = (0..=n).map(|j| patch.weight(i, j)).collect();
        let row = BezierCurve::new(row, Some(heavy)).unwrap();
        let row = row.elevated(n + by).unwrap();
        points.extend(row.control_points());
        weights.extend((0..=n + by).map(|j| row.weight(j)));
    }
    BezierPatch::new((m, n + by), points, Some(weights)).unwrap()
}

#[test]
fn a_course_and_its_inverse_lead_back() {
    for course in Course::all() {
        let [u, v] = course.inverse().place(course.place([0.2, 0.7]));
        assert!((u - 0.2).abs() < 1e-15 && (v - 0.7).abs() < 1e-15);
        for side in Side::ALL {
            assert_eq!(course.inverse().side(course.side(side)), side);
        }
    }
}

/// Degree raised, cut in pieces, u and v exchanged or reversed: one surface.
#[test]
fn other_descriptions_of_a_surface_are_at_no_distance() {
    let s = 0.5_f64.sqrt();
    let ball = revolved(&[(0.0, -60.0, 1.0), (60.0, -60.0, s), (60.0, 0.0, 1.0)]).remove(0);
    for surface in [wave(), ball] {
        let mut dressed = vec![
            surface.clone(),
            raised(&surface, 1),
            raised(&surface, 4),
            raised(&raised(&surface, 2).transposed(), 3),
        ];
        for u in [[0.0, 1.0], [1.0, 0.0]] {
            for v in [[0.0, 1.0], [1.0, 0.0]] {
                dressed.push(surface.restrict(u, v));
                dressed.push(surface.restrict(u, v).transposed());
                dressed.push(raised(&surface.restrict(u, v), 2).transposed());
            }
        }
        for other in dressed {
            let found = apart(&surface, &other);
            assert!(found.bracket.proved <= FLOOR, "{found:?}");
            let mut cut = empty();
            add_grid(
                &mut cut,
                "a",
                &other,
                [&[0.0, 0.3, 0.55, 1.0], &[0.0, 0.7, 1.0]],
            );
            let old = one(&surface);
            let found = distance((&old, &old.patches()[0]), (&cut, &cut.patches()[0]), FLOOR);
            assert!(found.bracket.proved <= FLOOR, "{found:?}");
            let found = distance((&cut, &cut.patches()[0]), (&old, &old.patches()[0]), FLOOR);
            assert!(found.bracket.proved <= FLOOR, "{found:?}");
        }
    }
}

/// Moved along the normal, slid within itself, made longer: elementary.
#[test]
fn planes_move_by_what_they_move() {
    let plate = rectangle([0.0, 100.0], [0.0, 50.0]);
    for (new, expected) in [
        (plate.map(|p| p + Vector::new(0.0, 0.0, 0.3)), 0.3),
        (plate.map(|p| p + Vector::new(2.0, 0.0, 0.0)), 2.0),
        (plate.map(|p| p + Vector::new(0.0, -0.7, 0.0)), 0.7),
        (rectangle([0.0, 100.5], [0.0, 50.0]), 0.5),
        (rectangle([-0.25, 100.0], [0.0, 49.9]), 0.25),
    ] {
        for (a, b) in [(&plate, &new), (&new, &plate)] {
            let found = apart(a, b).bracket;
            assert!(found.attained <= expected + 1e-9, "{found:?} {expected}");
            assert!(found.proved >= expected - 1e-9, "{found:?} {expected}");
            assert!(
                found.proved <= found.attained * 1.02,
                "{found:?} {expected}"
            );
        }
    }
}

/// One inner control point lifted by h lifts the surface by h times a product
/// of Bernstein polynomials, at most (4/9)^2 (by differentiation).
#[test]
fn a_lifted_control_point_lifts_the_surface_by_four_ninths_twice() {
    let flat = net((3, 3), |u, v| (90.0 * u, 90.0 * v, 0.0));
    let lifted = net((3, 3), |u, v| {
        let at = (u - 1.0 / 3.0).abs() + (v - 1.0 / 3.0).abs() < 0.1;
        (90.0 * u, 90.0 * v, if at { 0.9 } else { 0.0 })
    });
    let peak = 0.9 * 16.0 / 81.0;
    for new in [lifted.clone(), lifted.transposed(), raised(&lifted, 2)] {
        let found = apart(&flat, &new);
        let bracket = found.bracket;
        assert!(
            bracket.attained <= peak + 1e-9 && bracket.proved >= peak - 1e-9,
            "{found:?}"
        );
        assert!(bracket.proved <= bracket.attained * 1.02, "{found:?}");
        assert!(
            (found.at - Point::new(30.0, 30.0, 0.0)).norm() < 12.0,
            "{found:?}"
        );
    }
}

/// What a dense grid finds never exceeds the bound, and no lower bound of a
/// point's distance exceeds what the grid finds.
#[test]
fn a_dense_grid_refutes_no_distance() {
    let chance = |k: usize, f: f64| (f64::from(u32::try_from(k).unwrap()) * f).sin();
    for case in 0..8_usize {
        let old = wave();
        let f = 1.3 + 0.21 * chance(case, 1.0);
        let points = (0..16).map(|k| {
            let by = 0.8 * chance(case + 1, 2.0);
            old.control_points().nth(k).unwrap()
                + Vector::new(
                    by * chance(k, f),
                    by * chance(k, 2.0 * f),
                    chance(k, 3.0 * f),
                )
        });
        let weights = (case % 2 == 1).then(|| (0..16).map(|k| 1.0 + 0.02 * chance(k, f)).collect());
        let new = BezierPatch::new((3, 3), points.collect(), weights).unwrap();
        let found = apart(&old, &new);
        let (a, b) = (one(&old), one(&new));
        let (a, b) = (
            Sheet::new(&a, &a.patches()[0]),
            Sheet::new(&b, &b.patches()[0]),
        );
        let mut worst = 0.0_f64;
        for (from, to) in [(&a, &b), (&b, &a)] {
            for k in 0..=40_u8 {
                for l in 0..=40_u8 {
                    let at = [k, l].map(|i| f64::from(i) / 40.0);
                    let (_, near) = to.nearest_from(&from.eval(at), at);
                    worst = worst.max(near);
                }
            }
        }
        assert!(worst <= found.bracket.proved, "{case} {worst} {found:?}");
        // Slid within itself by almost as much as along the normal.
        assert!(
            found.bracket.proved <= worst * 1.2,
            "{case} {worst} {found:?}"
        );
        assert!(
            found.bracket.attained >= worst * 0.95,
            "{case} {worst} {found:?}"
        );
        let point = a.eval([0.37, 0.81]) + Vector::new(1.0, -2.0, 5.0);
        let reach = b.reach(&point, [0.5, 0.5], 0.0);
        let mut least = f64::INFINITY;
        for k in 0..=400_u16 {
            for l in 0..=400_u16 {
                let at = [k, l].map(|i| f64::from(i) / 400.0);
                least = least.min((b.eval(at) - point).norm());
            }
        }
        assert!(reach.at_least <= least && reach.met <= least + 1e-9);
        assert!(reach.at_least >= 0.998 * reach.met, "{reach:?}");
    }
}

/// A plate of two halves, the right one lifted at its far edge.
fn plates(gap: f64, lift: f64, exchanged: bool) -> PatchSet {
    let mut set = empty();
    let left = rectangle([0.0, 100.0], [0.0, 50.0]);
    add(
        &mut set,
        "plate/left",
        &if exchanged { left.transposed() } else { left },
    );
    add(
        &mut set,
        "plate/right",
        &net((1, 1), |u, v| (100.0 + gap + 100.0 * u, 50.0 * v, lift * u)),
    );
    set
}

#[test]
fn seams_are_told_better_or_worse() {
    let compared = |old: &PatchSet, new: &PatchSet| Comparison::of(old, new, None).unwrap();
    let good = plates(0.0, 0.0, false);
    let swapped = plates(0.0, 0.0, true);
    // Exchanged parameters change neither patches nor seams, but the side.
    let same = compared(&good, &swapped);
    assert!(!same.has_changes(), "{same:?}");
    assert!(same.seams.is_empty());
    let left = same
        .patches
        .iter()
        .find(|p| p.name == "plate/left")
        .unwrap();
    assert!(left.is_described_otherwise() && left.turned_over);
    // A break of 0.57 degrees, and a gap of 0.05 mm.
    for (bad, distance) in [
        (plates(0.0, 1.0, true), 1.0),
        (plates(0.05, 0.0, true), 0.05),
    ] {
        let worse = compared(&good, &bad);
        assert!(worse.has_changes());
        let [first, ..] = worse.patches.as_slice() else {
            panic!("no patches")
        };
        assert_eq!(
            (first.name.as_str(), first.state),
            ("plate/right", PatchState::Moved)
        );
        let found = first.distance.bracket;
        assert!(
            (found.attained - distance).abs() < 0.02 * distance,
            "{found:?}"
        );
        let [seam] = worse.seams.as_slice() else {
            panic!("{:?}", worse.seams)
        };
        assert_eq!(seam.trend, Trend::Worse);
        // The old U1 is V1 now.
        assert_eq!(seam.between.1, "V1");
        assert_eq!(seam.old.as_ref().unwrap().verdict, Verdict::Met);
        assert_eq!(seam.new.as_ref().unwrap().verdict, Verdict::Fault);
        assert_eq!(compared(&bad, &good).seams[0].trend, Trend::Better);
    }
    // Within a tolerance that was given.
    let bad = plates(0.005, 0.0, false);
    assert!(compared(&good, &bad).has_changes());
    let given = Some(Tolerance::new(0.01).unwrap());
    assert!(!Comparison::of(&good, &bad, given).unwrap().has_changes());
}

#[test]
fn what_came_and_went_is_named() {
    let old = plates(0.0, 0.0, false);
    let mut new = plates(0.0, 0.0, false);
    add(
        &mut new,
        "plate/more",
        &rectangle([200.0, 300.0], [0.0, 50.0]),
    );
    let found = Comparison::of(&old, &new, None).unwrap();
    assert_eq!(found.added, ["plate/more"]);
    assert!(found.removed.is_empty() && found.has_changes());
    assert_eq!(found.seams.len(), 1);
    assert_eq!(found.seams[0].trend, Trend::Added);
    let back = Comparison::of(&new, &old, None).unwrap();
    assert_eq!(back.removed, ["plate/more"]);
    assert_eq!(back.seams[0].trend, Trend::Removed);
}
