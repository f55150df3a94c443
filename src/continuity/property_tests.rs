//! Findings do not depend on how a seam is written down.

use proptest::prelude::*;

use super::curvature_tests::raised;
use super::{Figure, Survey, SurveyedSeam};
use crate::bezier::BezierPatch;
use crate::patch_set::PatchSet;
use crate::scalar::{Bracket, Point, Tolerance, Vector};
use crate::topology::Topology;
use crate::topology::test_sets::{add_grid, empty, net};

/// Two sheets beside x = 0, broken by an angle and a step along their seam, and
/// moved apart.
fn sheets(tilt: f64, bend: f64, apart: f64) -> [BezierPatch; 2] {
    let edge = |v: f64| 6.0 * (2.5 * v).sin();
    let left = net((3, 3), |u, v| (-40.0 * (1.0 - u), 60.0 * v, edge(v)));
    let right = net((3, 3), |u, v| {
        let lift = tilt * u * v + if u > 0.5 { bend * (1.0 + v) * u } else { 0.0 };
        (apart + 40.0 * u, 60.0 * v, edge(v) + lift)
    });
    [left, right]
}

/// Raised, reversed, transposed, as the bits say.
fn dressed(patch: &BezierPatch, how: u8) -> BezierPatch {
    let mut patch = if how & 1 == 0 {
        patch.clone()
    } else {
        raised(patch, 1)
    };
    let range = |bit: u8| {
        if how & bit == 0 {
            [0.0, 1.0]
        } else {
            [1.0, 0.0]
        }
    };
    patch = patch.restrict(range(2), range(4));
    if how & 8 == 0 {
        patch
    } else {
        patch.transposed()
    }
}

fn seam(patches: &[BezierPatch; 2], cuts: [f64; 2], scale: f64, swapped: bool) -> SurveyedSeam {
    let mut set: PatchSet = empty();
    let tolerances = set.tolerances_mut();
    tolerances.gap = Tolerance::new(0.01 * scale).unwrap();
    tolerances.search = Tolerance::new(0.1 * scale).unwrap();
    for (k, (patch, cut)) in patches.iter().zip(cuts).enumerate() {
        let name = if (k == 0) == swapped { "b" } else { "a" };
        add_grid(
            &mut set,
            name,
            patch,
            [&[0.0, cut, 1.0], &[0.0, 1.0 - cut, 1.0]],
        );
    }
    let topology = Topology::build(&set).unwrap();
    let mut seams = Survey::of(&set, &topology).seams;
    seams.retain(|s| s.between.0 != s.and.0);
    assert_eq!(seams.len(), 1);
    seams.remove(0)
}

/// Both brackets are narrow and hold one value.
fn one_value(a: Option<Figure>, b: Option<Figure>, factor: f64, floor: f64) -> bool {
    let (Some(a), Some(b)) = (a, b) else {
        return false;
    };
    let b = Bracket {
        proved: b.bracket.proved * factor,
        attained: b.bracket.attained * factor,
    };
    let a = a.bracket;
    let narrow = |b: Bracket| b.proved <= (b.attained * 1.02).max(floor);
    let slack = floor * 1e-2;
    narrow(a) && narrow(b) && a.attained <= b.proved + slack && b.attained <= a.proved + slack
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(64))]

    #[test]
    fn findings_do_not_depend_on_the_writing(
        tilt in prop_oneof![Just(0.0), 0.01..8.0_f64],
        bend in prop_oneof![Just(0.0), 0.01..4.0_f64],
        dress in (0_u8..16, 0_u8..16),
        cuts in (0.2..0.8_f64, 0.2..0.8_f64),
        apart in prop_oneof![Just(0.0), 0.015..0.09_f64],
        turns in (-3.0..3.0_f64, -3.0..3.0_f64, -3.0..3.0_f64),
        shift in -500.0..500.0_f64,
        scale in 0.2..5.0_f64,
        swapped in any::<bool>(),
    ) {
        // Corners within the gap of one another are one place, and how far they
        // stand apart along the edge counts as gap; stretches shorter than the
        // search distance are none.
        prop_assume!((cuts.0 - cuts.1).abs() > 3e-3 && (cuts.0 + cuts.1 - 1.0).abs() > 3e-3);
        let plain = sheets(tilt, bend, apart);
        let turned = nalgebra::Rotation3::from_euler_angles(turns.0, turns.1, turns.2);
        let moved = |p: Point| {
            turned * Point::from(p.coords * scale) + Vector::new(shift, -shift, 0.3 * shift)
        };
        let other = [dressed(&plain[0], dress.0), dressed(&plain[1], dress.1)]
            .map(|p| p.map(moved));
        let p = seam(&plain, [0.5, 0.5], 1.0, false);
        let q = seam(&other, [cuts.0, cuts.1], scale, swapped);
        // At a tolerance's very edge the last bit may decide.
        let limit = p.angle_deg.unwrap().bracket.attained;
        prop_assume!((limit - 0.1).abs() > 0.003 && (limit - 10.0).abs() > 0.3);
        prop_assert_eq!(p.finding, q.finding);
        prop_assert_eq!(p.verdict, q.verdict);
        prop_assert_eq!(p.demand, q.demand);
        prop_assert!((p.length * scale - q.length).abs() <= 1e-5 * q.length, "{} {}", p.length * scale, q.length);
        prop_assert!(
            one_value(Some(p.gap), Some(q.gap), 1.0 / scale, 1e-7),
            "{:?} {:?}", p.gap, q.gap
        );
        prop_assert_eq!(p.gap.bracket.proved <= 1e-7, apart <= 0.0);
        prop_assert!(one_value(p.angle_deg, q.angle_deg, 1.0, 1e-6), "{:?} {:?}", p.angle_deg, q.angle_deg);
        prop_assert!(
            one_value(p.curvature_per_mm, q.curvature_per_mm, scale, 1e-6),
            "{:?} {:?}", p.curvature_per_mm, q.curvature_per_mm
        );
        let failing = |s: &SurveyedSeam| s.failing.iter().map(|f| f.length).sum::<f64>();
        prop_assert!((failing(&p) * scale - failing(&q)).abs() <= 1e-3 * q.length);
    }
}
