//! Gaps with known answers.

use super::test_sets::{add, empty, net, rectangle};
use super::{Contact, Stretch, Topology, gap, nearest};
use crate::bezier::{BezierCurve, BezierPatch};
use crate::scalar::Point;

const WHOLE: [f64; 2] = [0.0, 1.0];

fn whole(curve: &BezierCurve) -> Stretch<'_> {
    Stretch {
        curve,
        range: WHOLE,
    }
}

fn curve(points: &[(f64, f64, f64)], weights: Option<&[f64]>) -> BezierCurve {
    let points = points
        .iter()
        .map(|&(x, y, z)| Point::new(x, y, z))
        .collect();
    BezierCurve::new(points, weights.map(<[f64]>::to_vec)).unwrap()
}

fn only_contact(a: &BezierPatch, b: &BezierPatch) -> Contact {
    let mut set = empty();
    add(&mut set, "a", a);
    add(&mut set, "b", b);
    let topology = Topology::build(&set).unwrap();
    topology.check().unwrap();
    let [contact] = topology.contacts() else {
        panic!("one contact, not {}", topology.contacts().len())
    };
    contact.clone()
}

/// No sample of either curve is farther from the other than the proved bound.
fn refute(a: &BezierCurve, b: &BezierCurve, proved: f64) {
    for k in 0..=2000 {
        let t = f64::from(k) / 2000.0;
        assert!(nearest(b, &a.eval(t), WHOLE).distance <= proved);
        assert!(nearest(a, &b.eval(t), WHOLE).distance <= proved);
    }
}

/// An edge that leaves the other linearly: the gap is that of its far end.
#[test]
fn a_linear_gap_is_largest_at_its_end() {
    let wedge = net((1, 1), |u, v| {
        let start = 10.0 + 0.06 * v;
        (start * (1.0 - u) + 20.0 * u, 50.0 * v, 0.0)
    });
    let contact = only_contact(&rectangle([0.0, 10.0], [0.0, 50.0]), &wedge);
    // Attained from the straight edge's side, so short by 1 - cos(0.06 / 50).
    assert!(contact.gap.attained <= 0.06 && contact.gap.attained > 0.059_999_9);
    assert!(contact.gap.proved >= 0.06 && contact.gap.proved < 0.0612);
    assert!((contact.gap_at - 1.0).abs() < 1e-12);
}

/// One control point of fifteen moved by h lifts the edge by h times a
/// Bernstein polynomial, whose maximum at k / n is
/// C(n, k) (k / n)^k (1 - k / n)^(n - k) (by differentiation).
#[test]
fn a_peak_inside_is_found_where_it_is() {
    let (n, k, h) = (15, 4, 0.3);
    let bump = net((1, n), |u, v| {
        let moved = (v * 15.0 - 4.0).abs() < 0.1 && u < 0.5;
        (10.0 + 10.0 * u, 80.0 * v, if moved { h } else { 0.0 })
    });
    let contact = only_contact(&rectangle([0.0, 10.0], [0.0, 80.0]), &bump);
    let x = f64::from(k) / 15.0;
    let peak = h * 1365.0 * x.powi(k) * (1.0 - x).powi(11);
    assert!(
        contact.gap.attained <= peak + 1e-12,
        "{:?} {peak}",
        contact.gap
    );
    assert!(contact.gap.proved >= peak, "{:?} {peak}", contact.gap);
    assert!(contact.gap.proved <= contact.gap.attained * 1.02);
    assert!((contact.gap_at - x).abs() < 0.03);
}

/// The cubic of a car's waistline, say, run through at other speeds.
#[test]
fn reparametrised_curves_have_no_gap() {
    let points = [
        (0.0, 0.0, 0.0),
        (40.0, 30.0, 5.0),
        (90.0, -20.0, 12.0),
        (130.0, 10.0, 20.0),
    ];
    let plain = curve(&points, None);
    // A linear rational change of parameter keeps points and turns weights
    // into powers (Farin, NURBS).
    let c: f64 = 1.7;
    let weights = [1.0, c, c * c, c * c * c];
    let moebius = curve(&points, Some(&weights));
    let found = gap(whole(&plain), whole(&moebius), 1e-9, 1.0);
    assert!(found.bracket.proved < 1e-11, "{:?}", found.bracket);
    // The line of a door sill, uneven speed: t^2 and its like, either way round.
    let line = curve(&[(0.0, 0.0, 0.0), (100.0, 20.0, 5.0)], None);
    let uneven = curve(
        &[(0.0, 0.0, 0.0), (20.0, 4.0, 1.0), (100.0, 20.0, 5.0)],
        None,
    );
    for (a, b) in [(&line, &uneven), (&uneven, &line)] {
        let found = gap(whole(a), whole(b), 1e-9, 1.0);
        assert!(found.bracket.proved < 1e-9, "{:?}", found.bracket);
    }
    for (from, to) in [(0.0, 0.4), (0.4, 1.0), (0.25, 0.5)] {
        let part = plain.restrict(from, to).elevated(9).unwrap();
        let stretch = Stretch {
            curve: &plain,
            range: [from, to],
        };
        let found = gap(stretch, whole(&part), 1e-9, 1.0);
        assert!(found.bracket.proved < 1e-11, "{:?}", found.bracket);
    }
}

/// Curves of any kind: the bracket holds, and is narrow.
#[test]
fn brackets_hold_and_are_narrow() {
    let a = curve(
        &[
            (0.0, 0.0, 0.0),
            (30.0, 20.0, 0.0),
            (70.0, 20.0, 3.0),
            (100.0, 0.0, 0.0),
        ],
        None,
    );
    let others = [
        curve(
            &[(0.0, 0.05, 0.0), (50.0, 30.1, 1.4), (100.0, 0.0, 0.05)],
            None,
        ),
        curve(
            &[(0.0, 0.0, 0.0), (50.0, 29.0, 2.0), (100.0, 0.0, 0.0)],
            Some(&[1.0, 1.1, 1.0]),
        ),
        curve(
            &[
                (0.0, 0.0, 0.1),
                (20.0, 13.0, 0.1),
                (60.0, 24.0, 2.1),
                (99.0, 0.5, 0.1),
            ],
            Some(&[1.0, 2.0, 1.5, 0.5]),
        ),
    ];
    for b in others {
        let found = gap(whole(&a), whole(&b), 1e-9, f64::INFINITY).bracket;
        refute(&a, &b, found.proved);
        assert!(found.proved <= found.attained * 1.02, "{found:?}");
    }
}
