//! Sets by chance: whatever is thrown at it, the topology is sound or refused.

use proptest::prelude::*;

use super::test_sets::{add, empty, net};
use super::{Topology, TopologyError};
use crate::bezier::{BezierCurve, BezierPatch};
use crate::patch_set::PatchSet;
use crate::scalar::Point;

/// A wavy surface over [x0, x1] x [y0, y1] of a wide sheet.
fn sheet(x: [f64; 2], y: [f64; 2]) -> BezierPatch {
    let whole = net((3, 3), |u, v| {
        let (x, y) = (300.0 * u, 200.0 * v);
        (x, y, 12.0 * (x / 70.0).sin() * (y / 60.0).cos())
    });
    whole.restrict([x[0] / 300.0, x[1] / 300.0], [y[0] / 200.0, y[1] / 200.0])
}

/// The same surface otherwise parametrised: `how` picks transposition, two
/// reversals and a raised degree.
fn dressed(patch: &BezierPatch, how: u8) -> BezierPatch {
    let mut patch = patch.clone();
    if how & 1 != 0 {
        patch = patch.transposed();
    }
    let range = |bit: u8| {
        if how & bit != 0 {
            [1.0, 0.0]
        } else {
            [0.0, 1.0]
        }
    };
    patch = patch.restrict(range(2), range(4));
    if how & 8 != 0 {
        let (m, n) = patch.degree();
        let rows = (0..=m).flat_map(|i| {
            let row = (0..=n).map(|j| patch.control_point(i, j)).collect();
            let row = BezierCurve::new(row, None)
                .unwrap()
                .elevated(n + 2)
                .unwrap();
            row.control_points().collect::<Vec<_>>()
        });
        patch = BezierPatch::new((m, n + 2), rows.collect(), None).unwrap();
    }
    patch
}

/// Columns of patches, each column cut at heights of its own: T-junctions.
fn columns(cuts: &[Vec<f64>], dress: &[u8]) -> Vec<BezierPatch> {
    let width = 300.0 / f64::from(u32::try_from(cuts.len()).unwrap());
    let mut patches = vec![];
    for (x, cuts) in (0_u32..).zip(cuts) {
        let x = f64::from(x) * width;
        let mut heights = vec![0.0, 200.0];
        heights.extend(cuts.iter().copied());
        heights.sort_by(f64::total_cmp);
        heights.dedup_by(|a, b| *a - *b < 5.0);
        if let Some(last) = heights.last_mut() {
            *last = 200.0;
        }
        for y in heights.windows(2) {
            let how = dress.get(patches.len() % dress.len().max(1)).copied();
            let patch = sheet([x, x + width], [y[0], y[1]]);
            patches.push(dressed(&patch, how.unwrap_or(0)));
        }
    }
    patches
}

fn set_of(patches: &[BezierPatch]) -> PatchSet {
    let mut set = empty();
    for (k, patch) in patches.iter().enumerate() {
        add(&mut set, &format!("patch/{k:03}"), patch);
    }
    set
}

/// What does not depend on names or parameters: spans by number of uses, and
/// open loops.
fn shape(topology: &Topology) -> (Vec<usize>, usize, usize) {
    let mut uses: Vec<usize> = topology.seams().iter().map(|s| s.spans.len()).collect();
    uses.sort_unstable();
    (uses, topology.open_loops().len(), topology.nodes().len())
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(96))]

    /// Cuts are at half millimetres: corners of two columns fall together or
    /// are far beyond the gap tolerance, within which they would be joined.
    /// A sheet cut with T-junctions has one boundary and only ordinary seams,
    /// however its patches are parametrised, turned or moved; Euler's
    /// V - E + F = 1 for a disc.
    #[test]
    fn a_cut_sheet_is_a_disc(
        cuts in prop::collection::vec(
            prop::collection::vec((12..388_i32).prop_map(|k| f64::from(k) / 2.0), 0..4),
            1..5,
        ),
        dress in prop::collection::vec(0_u8..16, 1..7),
        turn in -3.0..3.0_f64,
        shift in -1000.0..1000.0_f64,
    ) {
        let plain = columns(&cuts, &[0]);
        let topology = Topology::build(&set_of(&plain)).unwrap();
        topology.check().unwrap();
        prop_assert_eq!(topology.open_loops().len(), 1);
        prop_assert!(topology.seams().iter().all(|s| s.spans.len() <= 2));
        let euler = topology.nodes().len() + plain.len();
        prop_assert_eq!(euler, topology.seams().len() + 1);
        let (sin, cos) = turn.sin_cos();
        let moved: Vec<BezierPatch> = columns(&cuts, &dress)
            .iter()
            .map(|p| p.map(|q| Point::new(
                cos * q.x - sin * q.z + shift,
                q.y - shift,
                sin * q.x + cos * q.z,
            )))
            .collect();
        let other = Topology::build(&set_of(&moved)).unwrap();
        other.check().unwrap();
        prop_assert_eq!(shape(&topology), shape(&other));
        for span in other.spans() {
            prop_assert!(span.gap.proved < 1e-8, "{:?}", span.gap);
        }
    }

    /// Control points jittered by anything from nothing to many tolerances,
    /// and patches scaled down towards the tolerance.
    #[test]
    fn jittered_sets_are_sound_or_refused(
        cuts in prop::collection::vec(prop::collection::vec(6.0..194.0_f64, 0..4), 1..5),
        dress in prop::collection::vec(0_u8..16, 1..7),
        exponent in -4.0..0.5_f64,
        scale in -4.0..0.0_f64,
        jitter in prop::collection::vec(-1.0..1.0_f64, 37),
    ) {
        let (size, scale) = (10.0_f64.powf(exponent), 10.0_f64.powf(scale));
        let mut at = 0;
        let mut next = || {
            at = (at + 1) % jitter.len();
            jitter[at] * size
        };
        let patches: Vec<BezierPatch> = columns(&cuts, &dress)
            .iter()
            .map(|p| {
                let (m, n) = p.degree();
                let points = p
                    .control_points()
                    .map(|q| Point::new(q.x + next(), q.y + next(), q.z + next()) * scale);
                BezierPatch::new((m, n), points.collect(), None).unwrap()
            })
            .collect();
        match Topology::build(&set_of(&patches)) {
            Ok(topology) => topology.check().unwrap(),
            Err(TopologyError::ShortEdge { .. }) => {}
            Err(other) => prop_assert!(false, "{}", other),
        }
    }
}
