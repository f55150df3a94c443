//! Steps of curvature with known answers, and sampling against the bounds.

use super::{CurvatureStep, Meeting};
use crate::bezier::{BezierCurve, BezierPatch};
use crate::patch_set::PatchSet;
use crate::scalar::Point;
use crate::topology::test_sets::{add, empty, net, rectangle, revolved};
use crate::topology::{Topology, nearest};

const FLOOR: f64 = 1e-9;

fn pair(a: &BezierPatch, b: &BezierPatch) -> PatchSet {
    let mut set = empty();
    add(&mut set, "a", a);
    add(&mut set, "b", b);
    set
}

fn meeting(set: &PatchSet) -> Meeting {
    let topology = Topology::build(set).unwrap();
    let [contact] = topology.contacts() else {
        panic!("one contact, not {}", topology.contacts().len())
    };
    Meeting {
        edges: contact.edges,
        first: contact.first,
        second: contact.second,
    }
}

fn step(set: &PatchSet) -> CurvatureStep {
    meeting(set).curvature_step(set, FLOOR).unwrap()
}

fn narrow(step: &CurvatureStep) -> bool {
    let found = step.bracket;
    found.attained <= found.proved && found.proved <= (found.attained * 1.02).max(FLOOR)
}

/// A sphere's cap on a cone, tangent along a circle: across it the sphere has
/// 1/R, the cone's line none (elementary). The sphere's side ends at no pole.
#[test]
fn a_sphere_on_a_tangent_cone() {
    let radius: f64 = 40.0;
    let (sin, cos) = 30.0_f64.to_radians().sin_cos();
    // The circle at latitude 30; the arc from there to 90 degrees of latitude.
    let foot = (radius * cos, radius * sin);
    // The control point of the arc lies on both tangents.
    let weight = 30.0_f64.to_radians().cos();
    let arc = [
        (foot.0, foot.1, 1.0),
        (foot.0 - (radius - foot.1) * sin / cos, radius, weight),
        (0.0, radius, 1.0),
    ];
    let line = [
        (foot.0 + 20.0 * sin, foot.1 - 20.0 * cos, 1.0),
        (foot.0, foot.1, 1.0),
    ];
    let set = pair(&revolved(&arc).remove(0), &revolved(&line).remove(0));
    let found = step(&set);
    assert!(narrow(&found), "{found:?}");
    assert!((found.bracket.attained - 1.0 / radius).abs() < 1e-12);
    let [p, q] = found.curvatures_per_mm;
    assert!(
        (p.abs() - 1.0 / radius).abs() < 1e-12 && q.abs() < 1e-12,
        "{found:?}"
    );
}

/// Two quarters of a sphere meet along a meridian that ends at both poles:
/// no step, to round-off, and proved.
#[test]
fn poles_have_their_limit() {
    let s = 0.5_f64.sqrt();
    let ball = revolved(&[(0.0, -2.0, 1.0), (2.0, -2.0, s), (2.0, 0.0, 1.0)]);
    let found = step(&pair(&ball[0], &ball[1]));
    assert!(found.bracket.proved <= FLOOR, "{found:?}");
    // A polynomial dome: tangent plane and curvature of z = -(x^2 + y^2) / 100
    // at the top, cut along a ray.
    let dome = |from: f64, to: f64| {
        net((2, 3), move |u, v| {
            let angle = from * (1.0 - v) + to * v;
            let r = 30.0 * u;
            (
                r * angle.cos(),
                r * angle.sin(),
                if u > 0.9 { -9.0 } else { 0.0 },
            )
        })
    };
    let set = pair(&dome(0.0, 1.0), &dome(0.0, -1.0));
    let topology = Topology::build(&set).unwrap();
    let contact = topology.contacts().iter().find(|c| c.joined).unwrap();
    let meeting = Meeting {
        edges: contact.edges,
        first: contact.first,
        second: contact.second,
    };
    let found = meeting.curvature_step(&set, FLOOR).unwrap();
    assert!(found.bracket.proved.is_finite(), "{found:?}");
}

/// A tip whose curvature grows without limit is not given a bound.
#[test]
fn an_endless_curvature_is_not_bounded() {
    let tip = |side: f64| {
        net((2, 1), move |u, v| {
            let z = if u > 0.4 && u < 0.6 { 0.0 } else { 3.0 * u * v };
            (20.0 * u, side * 15.0 * u * v, z)
        })
    };
    let found = step(&pair(&tip(1.0), &tip(-1.0)));
    assert!(found.bracket.proved >= found.bracket.attained);
}

/// The normal curvature across the seam by the surface's own derivatives, a
/// second way of computing it.
fn sampled(set: &PatchSet, meeting: &Meeting, s: f64) -> Option<f64> {
    let surfaces = meeting
        .edges
        .map(|e| &set.pieces()[e.piece().index()].surface);
    let edges = [0, 1].map(|k| surfaces[k].edge(meeting.edges[k].side()));
    let [at, _] = meeting.at(s);
    let place = edges[0].jet(at);
    let range = [
        meeting.second[0].min(meeting.second[1]),
        meeting.second[0].max(meeting.second[1]),
    ];
    let foot = nearest(&edges[1], &place.point, range).t;
    let along = [place.dt, edges[1].jet(foot).dt];
    let jets = [at, foot].map(|t| t);
    let agree = if meeting.normals_agree(set) {
        1.0
    } else {
        -1.0
    };
    let mut found = [0.0; 2];
    for k in 0..2 {
        let [u, v] = meeting.edges[k].side().at(jets[k]);
        let jet = surfaces[k].jet(u, v);
        let normal = jet.normal()?;
        found[k] = jet.normal_curvature(&normal, &normal.cross(&along[k]))?;
    }
    Some((found[0] - agree * found[1]).abs())
}

/// A patch beside x = 0 with a given edge, bent by chance.
fn beside(case: usize, side: f64, n: usize, weighted: bool) -> BezierPatch {
    let wave = |k: usize, f: f64| (f64::from(u32::try_from(k).unwrap()) * f).sin();
    let f = 1.1 + 0.37 * wave(case, 1.0);
    let m = 2 + case % 2;
    let mut points = vec![];
    for i in 0..=m {
        for j in 0..=n {
            let k = if i == 0 {
                j
            } else {
                j + 7 * i + if side > 0.0 { 50 } else { 90 }
            };
            let real = |k: usize| f64::from(u32::try_from(k).unwrap());
            points.push(Point::new(
                real(i) * 12.0 * side + 1.5 * wave(k, f),
                real(j) * 60.0 / real(n) + 2.0 * wave(k, 2.0 * f),
                4.0 * wave(k, 3.0 * f),
            ));
        }
    }
    let weights = weighted.then(|| (0..points.len()).map(|k| 1.0 + 0.3 * wave(k % (n + 1), f)));
    let weights = weights.map(Iterator::collect);
    BezierPatch::new((m, n), points, weights).unwrap()
}

/// The rows along v raised by so many degrees.
pub(super) fn raised(patch: &BezierPatch, by: usize) -> BezierPatch {
    let (m, n) = patch.degree();
    let rows = (0..=m).flat_map(|i| {
        let row = (0..=n).map(|j| patch.control_point(i, j)).collect();
        let row = BezierCurve::new(row, None)
            .unwrap()
            .elevated(n + by)
            .unwrap();
        row.control_points().collect::<Vec<_>>()
    });
    BezierPatch::new((m, n + by), rows.collect(), None).unwrap()
}

/// 10,000 places never exceed the proved bound, and the bracket is narrow:
/// edges of one parametrisation, of other degree, reversed, moved apart, and
/// cut otherwise.
#[test]
fn sampling_does_not_refute_the_step() {
    for case in 0..20 {
        let weighted = case % 4 == 3;
        let n = 2 + case % 3;
        let a = beside(case, -1.0, n, weighted);
        let mut b = beside(case, 1.0, n, weighted);
        match case % 5 {
            1 if !weighted => b = raised(&b, 2),
            2 => b = b.restrict([0.0, 1.0], [1.0, 0.0]),
            3 => b = b.map(|p| p + crate::scalar::Vector::new(0.03, 0.0, 0.02)),
            4 => b = b.restrict([0.0, 1.0], [-0.2, 1.1]),
            _ => {}
        }
        let set = pair(&a, &b);
        let topology = Topology::build(&set).unwrap();
        let contact = topology
            .contacts()
            .iter()
            .max_by(|p, q| {
                let length = |c: &crate::topology::Contact| c.first[1] - c.first[0];
                length(p).total_cmp(&length(q))
            })
            .unwrap();
        let meeting = Meeting {
            edges: contact.edges,
            first: contact.first,
            second: contact.second,
        };
        let found = meeting.curvature_step(&set, FLOOR).unwrap();
        assert!(narrow(&found), "{case} {found:?}");
        let mut worst = 0.0_f64;
        for k in 0..=10_000 {
            worst = worst.max(sampled(&set, &meeting, f64::from(k) / 10_000.0).unwrap());
        }
        assert!(
            worst <= found.bracket.proved * (1.0 + 1e-9),
            "{case} {worst} {found:?}"
        );
        assert!(
            worst >= found.bracket.attained * (1.0 - 1e-4),
            "{case} {worst} {found:?}"
        );
    }
}

/// A flat sheet beside a bent one: signs follow the first patch's normal.
#[test]
fn curvatures_are_signed() {
    let flat = rectangle([0.0, 10.0], [0.0, 5.0]);
    let bent = net((2, 1), |u, v| {
        (10.0 + 10.0 * u, 5.0 * v, if u > 0.9 { 2.0 } else { 0.0 })
    });
    for flipped in [false, true] {
        let mut set = pair(&bent, &flat);
        set.patches[0].flipped = flipped;
        // S_u = (10, 0, 0) and S_uu = (0, 0, 4) at the edge: 4 / 100, upwards.
        let [p, q] = step(&set).curvatures_per_mm;
        let expected = if flipped { -0.04 } else { 0.04 };
        assert!((p - expected).abs() < 1e-12 && q.abs() < 1e-12, "{p} {q}");
    }
}
