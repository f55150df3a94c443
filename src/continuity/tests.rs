//! Seams with known answers.

use super::{Angle, Meeting};
use crate::bezier::{BezierPatch, Side};
use crate::patch_set::PatchSet;
use crate::topology::test_sets::{add, empty, net, rectangle, revolved};
use crate::topology::{Contact, Topology};

fn meeting(topology: &Topology) -> Meeting {
    let [contact] = topology.contacts() else {
        panic!("one contact, not {}", topology.contacts().len())
    };
    of(contact)
}

fn of(contact: &Contact) -> Meeting {
    Meeting {
        edges: contact.edges,
        first: contact.first,
        second: contact.second,
    }
}

fn angle(set: &PatchSet) -> Angle {
    meeting(&Topology::build(set).unwrap()).angle(set)
}

fn pair(a: &BezierPatch, b: &BezierPatch) -> PatchSet {
    let mut set = empty();
    add(&mut set, "a", a);
    add(&mut set, "b", b);
    set
}

/// A plane that leaves x = 10 at an angle to the plane z = 0.
fn tilted(degrees: f64) -> BezierPatch {
    let (sin, cos) = degrees.to_radians().sin_cos();
    net((2, 3), move |u, v| {
        (10.0 + 8.0 * u * cos, 5.0 * v, 8.0 * u * sin)
    })
}

/// Two planes at an angle: the angle, from hardly any to a fold back.
#[test]
fn planes_meet_at_their_angle() {
    let flat = rectangle([0.0, 10.0], [0.0, 5.0]);
    for degrees in [1e-3, 0.05, 0.12, 0.8, 10.0, 60.0, 89.99, 90.0, 120.0, 175.0] {
        let set = pair(&flat, &tilted(degrees));
        let found = angle(&set).bracket;
        assert!(
            (found.attained - degrees).abs() < 1e-6,
            "{degrees}: {found:?}"
        );
        assert!(found.proved >= degrees - 1e-9, "{degrees}: {found:?}");
        assert!(found.proved <= degrees * 1.02, "{degrees}: {found:?}");
    }
    // Folded back, the sides lie on one another as well.
    let set = pair(&flat, &tilted(180.0));
    let topology = Topology::build(&set).unwrap();
    let contact = &topology.contacts()[0];
    assert_eq!(contact.edges[0].side(), Side::U1);
    let fold = of(contact).angle(&set).bracket;
    assert!(fold.attained > 179.999_999);
}

/// Turning a patch over, exchanging its parameters or declaring it flipped
/// changes no angle; only whether the stated normals agree.
#[test]
fn orientation_is_settled_by_the_edges() {
    let flat = rectangle([0.0, 10.0], [0.0, 5.0]);
    let bent = tilted(25.0);
    for other in [
        bent.clone(),
        bent.transposed(),
        bent.restrict([0.0, 1.0], [1.0, 0.0]),
        bent.restrict([1.0, 0.0], [0.0, 1.0]),
    ] {
        for flipped in [false, true] {
            let mut set = pair(&flat, &other);
            set.patches[1].flipped = flipped;
            let topology = Topology::build(&set).unwrap();
            let meeting = meeting(&topology);
            let found = meeting.angle(&set).bracket.attained;
            assert!((found - 25.0).abs() < 1e-9, "{found}");
            let normals = [0.5; 2].map(|x| x);
            let n =
                other.normal(normals[0], normals[1]).unwrap() * if flipped { -1.0 } else { 1.0 };
            assert_eq!(meeting.normals_agree(&set), n.z > 0.0);
        }
    }
}

/// A cut through one surface is tangent to round-off, and proved so.
#[test]
fn halves_of_a_surface_are_proved_tangent() {
    let s = 0.5_f64.sqrt();
    let wave = net((4, 3), |u, v| {
        (100.0 * u, 100.0 * v, 9.0 * (5.0 * u + 4.0 * v).sin())
    });
    let octant = revolved(&[(0.0, -2.0, 1.0), (2.0, -2.0, s), (2.0, 0.0, 1.0)]).remove(0);
    for surface in [wave, octant] {
        for raised in [false, true] {
            let left = surface.restrict([0.0, 1.0], [0.0, 0.4]);
            let mut right = surface.restrict([0.0, 1.0], [0.4, 1.0]);
            if raised {
                right = right.restrict([1.0, 0.0], [0.0, 1.0]);
            }
            let set = pair(&left, &right);
            let topology = Topology::build(&set).unwrap();
            let found = meeting(&topology).angle(&set).bracket;
            assert!(found.proved <= 1e-6, "{found:?}");
            // Turned round in u, its normal turns over.
            assert_eq!(meeting(&topology).normals_agree(&set), !raised);
        }
    }
}

/// A quarter cylinder against the next one cut in two: a T-junction of
/// rational edges whose parametrisations differ by a linear rational change.
/// Tangent all along, and proved so.
#[test]
fn rational_t_junctions_are_proved_tangent() {
    let quarter = revolved(&[(50.0, 0.0, 1.0), (50.0, 30.0, 1.0)]).remove(0);
    let lower = revolved(&[(50.0, -40.0, 1.0), (50.0, 0.0, 1.0)]).remove(0);
    let mut set = empty();
    add(&mut set, "long", &quarter);
    add(&mut set, "one", &lower.restrict([0.0, 1.0], [0.0, 0.3]));
    add(&mut set, "two", &lower.restrict([0.0, 1.0], [0.3, 1.0]));
    let topology = Topology::build(&set).unwrap();
    topology.check().unwrap();
    assert_eq!(topology.contacts().len(), 3);
    for contact in topology.contacts() {
        assert!(contact.joined && contact.gap.proved < 1e-9, "{contact:?}");
        let found = of(contact).angle(&set).bracket;
        assert!(found.proved <= 1e-6, "{found:?}");
    }
}

/// Edges 0.06 mm apart, and differently parametrised ones: the slip between
/// matched and nearest points costs next to nothing.
#[test]
fn angles_across_a_gap_are_narrow() {
    let wave = |shift: f64, degrees: f64| {
        let tilt = degrees.to_radians().tan();
        net((3, 3), move |u, v| {
            let bend = 8.0 * (3.0 * v).sin();
            (10.0 + 10.0 * u, 100.0 * v, bend + shift + 10.0 * u * tilt)
        })
    };
    let left = wave(0.0, 0.0).restrict([-1.0, 0.0], [0.0, 1.0]);
    let right = wave(0.06, 2.0);
    let found = angle(&pair(&left, &right)).bracket;
    assert!(found.proved <= found.attained * 1.02, "{found:?}");
}

/// Two cylinders of different radius, tangent along a ruling: the step of
/// normal curvature is 1 / r1 - 1 / r2 (elementary).
#[test]
fn tangent_cylinders_differ_in_curvature() {
    let s = 0.5_f64.sqrt();
    let arc = |r: f64, side: f64| {
        let points = [0.0, 30.0].into_iter().flat_map(|y| {
            [(0.0, 0.0), (side * r, 0.0), (side * r, r)]
                .map(|(x, z)| crate::scalar::Point::new(x, y, z))
        });
        let weights = [1.0, s, 1.0, 1.0, s, 1.0].to_vec();
        BezierPatch::new((1, 2), points.collect(), Some(weights)).unwrap()
    };
    let set = pair(&arc(50.0, 1.0), &arc(80.0, -1.0));
    let topology = Topology::build(&set).unwrap();
    let meeting = meeting(&topology);
    assert!(meeting.angle(&set).bracket.proved < 1e-6);
    let step = meeting.curvature_step(&set, 1e-9).unwrap();
    assert!(step.bracket.proved <= step.bracket.attained * 1.02);
    assert!((step.bracket.attained - (1.0 / 50.0 - 1.0 / 80.0)).abs() < 1e-12);
}

/// Sampling at 2,000 places never exceeds the proved bound, and the bracket is
/// narrow: patches that share an edge and little else.
#[test]
fn sampling_does_not_refute_the_angle() {
    let wave = |k: usize, f: f64| (f64::from(u32::try_from(k).unwrap()) * f).sin();
    for case in 0..24 {
        let f = 1.1 + 0.37 * wave(case, 1.0);
        let (m, n) = (1 + case % 3, 2 + case % 3);
        let patch = |side: f64, weighted: bool| {
            let points = (0..=m).flat_map(|i| (0..=n).map(move |j| (i, j)));
            let across = |i: usize| f64::from(u32::try_from(i).unwrap()) * 12.0 * side;
            let along = |j: usize| f64::from(u32::try_from(j).unwrap()) * 20.0;
            let points = points.map(|(i, j)| {
                let k = if i == 0 {
                    j
                } else {
                    j + 7 * i + if side > 0.0 { 50 } else { 90 }
                };
                crate::scalar::Point::new(
                    across(i) + 2.0 * wave(k, f),
                    along(j) + 3.0 * wave(k, 2.0 * f),
                    5.0 * wave(k, 3.0 * f),
                )
            });
            let weights = weighted.then(|| {
                (0..(m + 1) * (n + 1))
                    .map(|k| 1.0 + 0.4 * wave(k % (n + 1), f))
                    .collect()
            });
            BezierPatch::new((m, n), points.collect(), weights).unwrap()
        };
        let weighted = case % 2 == 1;
        let (a, b) = (patch(-1.0, weighted), patch(1.0, weighted));
        let set = pair(&a, &b);
        let topology = Topology::build(&set).unwrap();
        let contact = topology
            .contacts()
            .iter()
            .find(|c| c.edges.map(|e| e.side()) == [Side::U0, Side::U0])
            .unwrap();
        let found = of(contact).angle(&set).bracket;
        assert!(found.proved <= found.attained * 1.02, "{case} {found:?}");
        let mut worst = 0.0_f64;
        for k in 0..=2000 {
            let t = f64::from(k) / 2000.0;
            let (p, q) = (a.normal(0.0, t).unwrap(), b.normal(0.0, t).unwrap());
            // They run the same way, so one normal is turned over.
            worst = worst.max(p.cross(&q).norm().atan2(-p.dot(&q)).to_degrees());
        }
        assert!(worst <= found.proved + 1e-9, "{case} {worst} {found:?}");
        assert!(worst >= found.attained - 1e-6, "{case} {worst} {found:?}");
    }
}
