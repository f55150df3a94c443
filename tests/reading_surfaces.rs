//! Every kind of surface is exact: its points lie where the analytic surface
//! has them, to 1e-12 of its size, at any axis and range.
#![allow(
    clippy::unwrap_used,
    clippy::float_cmp,
    reason = "a panic is how a test fails, and exact values are meant"
)]

use std::f64::consts::{FRAC_1_SQRT_2, PI};

use chordwise::bezier::{BezierPatch, Side};
use chordwise::scalar::{Point, Vector};
use chordwise::surface::*;

const AXIS: [f64; 3] = [1.0, -2.0, 0.5];
const CENTER: [f64; 3] = [10.0, -4.0, 7.0];
const START: [f64; 3] = [0.3, 0.4, 2.0];

fn grid(surface: &Surface) -> PieceGrid {
    surface.pieces(&[], 1e-3).unwrap()
}

/// Samples of all pieces: the patch's parameters, the point, S_u x S_v.
fn samples(grid: &PieceGrid) -> Vec<([f64; 2], Point, Vector)> {
    let columns = grid.breaks_v.len() - 1;
    let mut found = Vec::new();
    for (at, piece) in grid.pieces.iter().enumerate() {
        let (i, j) = (at / columns, at % columns);
        for k in 0..=8 {
            for l in 0..=8 {
                let (s, t) = (f64::from(k) / 8.0, f64::from(l) / 8.0);
                let u = grid.breaks_u[i] * (1.0 - s) + grid.breaks_u[i + 1] * s;
                let v = grid.breaks_v[j] * (1.0 - t) + grid.breaks_v[j + 1] * t;
                let jet = piece.jet(s, t);
                found.push(([u, v], jet.point, jet.cross()));
            }
        }
    }
    found
}

/// Distance from the axis, height along it, and the unit vector away from it.
fn around(p: &Point) -> (f64, f64, Vector) {
    let axis = Vector::from(AXIS).normalize();
    let arm = p - Point::from(CENTER);
    let height = arm.dot(&axis);
    let away = arm - axis * height;
    (away.norm(), height, away / away.norm().max(1e-300))
}

fn area(grid: &PieceGrid) -> f64 {
    // Gauss-Legendre with five points in each direction on 4 x 4 parts.
    let a = (5.0 + 2.0 * (10.0_f64 / 7.0).sqrt()).sqrt() / 3.0;
    let b = (5.0 - 2.0 * (10.0_f64 / 7.0).sqrt()).sqrt() / 3.0;
    let wa = (322.0 - 13.0 * 70.0_f64.sqrt()) / 900.0;
    let wb = (322.0 + 13.0 * 70.0_f64.sqrt()) / 900.0;
    let rule = [(-a, wa), (-b, wb), (0.0, 128.0 / 225.0), (b, wb), (a, wa)];
    let mut sum = 0.0;
    for piece in &grid.pieces {
        for i in 0..4 {
            for j in 0..4 {
                for (x, wx) in rule {
                    for (y, wy) in rule {
                        let u = (f64::from(i) + 0.5 + 0.5 * x) / 4.0;
                        let v = (f64::from(j) + 0.5 + 0.5 * y) / 4.0;
                        sum += wx * wy / 64.0 * piece.jet(u, v).cross().norm();
                    }
                }
            }
        }
    }
    sum
}

fn sphere(longitude_deg: (f64, f64), latitude_deg: (f64, f64)) -> Surface {
    Surface::Sphere(Sphere {
        center: CENTER,
        axis: AXIS,
        start: Some(START),
        radius: 3.0,
        longitude_deg,
        latitude_deg,
    })
}

#[test]
fn spheres_are_spheres() {
    for (longitude, latitude, pieces) in [
        ((0.0, 360.0), (-90.0, 90.0), 8),
        ((-30.0, 65.5), (10.0, 80.0), 2),
        ((17.0, 377.0), (-90.0, 0.0), 4),
    ] {
        let grid = grid(&sphere(longitude, latitude));
        assert_eq!(grid.pieces.len(), pieces);
        for (_, point, cross) in samples(&grid) {
            let arm = point - Point::from(CENTER);
            assert!((arm.norm() - 3.0).abs() < 3e-12);
            assert!(cross.dot(&arm) > -1e-9, "outward");
        }
        // Handbook: the area of a zone is 2 pi R^2 (sin b - sin a) by longitude.
        let zone = latitude.1.to_radians().sin() - latitude.0.to_radians().sin();
        let expected = (longitude.1 - longitude.0).to_radians() * 9.0 * zone;
        assert!((area(&grid) / expected - 1.0).abs() < 1e-9);
    }
}

#[test]
fn cylinders_cones_and_tori_are_exact() {
    let cylinder = grid(&Surface::Cylinder(Cylinder {
        center: CENTER,
        axis: AXIS,
        start: None,
        radius: 2.0,
        height: 5.0,
        angle_deg: (0.0, 360.0),
    }));
    assert_eq!(cylinder.pieces.len(), 4);
    for ([_, v], point, cross) in samples(&cylinder) {
        let (radius, height, away) = around(&point);
        assert!((radius - 2.0).abs() < 2e-12 && (height - 5.0 * v).abs() < 1e-12);
        assert!(cross.dot(&away) > 0.0);
    }
    assert!((area(&cylinder) / (2.0 * PI * 2.0 * 5.0) - 1.0).abs() < 1e-10);

    let cone = grid(&Surface::Cone(Cone {
        center: CENTER,
        axis: AXIS,
        start: Some(START),
        radius: 2.0,
        top_radius: 0.0,
        height: 5.0,
        angle_deg: (20.0, 200.0),
    }));
    assert_eq!(cone.pieces.len(), 2);
    for (_, point, cross) in samples(&cone) {
        let (radius, height, away) = around(&point);
        assert!((radius - 2.0 * (1.0 - height / 5.0)).abs() < 2e-12);
        assert!(cross.dot(&away) > -1e-9);
    }

    let torus = grid(&Surface::Torus(Torus {
        center: CENTER,
        axis: AXIS,
        start: None,
        major: 4.0,
        minor: 1.5,
        angle_deg: (0.0, 360.0),
        tube_deg: (0.0, 360.0),
    }));
    // Handbook: the torus is 16 rational biquadratic pieces, area 4 pi^2 R r.
    assert_eq!(torus.pieces.len(), 16);
    for (_, point, cross) in samples(&torus) {
        let (radius, height, away) = around(&point);
        let axis = Vector::from(AXIS).normalize();
        assert!(((radius - 4.0).hypot(height) - 1.5).abs() < 5e-12);
        assert!(cross.dot(&(away * (radius - 4.0) + axis * height)) > 0.0);
    }
    assert!((area(&torus) / (4.0 * PI * PI * 4.0 * 1.5) - 1.0).abs() < 1e-9);
    for piece in &torus.pieces {
        assert_eq!(piece.degree(), (2, 2));
    }
}

/// Standard (Farin, from memory): the octant of the unit sphere in homogeneous
/// form, rows (0,0,-1,1)(s,0,-s,s)(1,0,0,1) / (0,0,-s,s)(1/2,1/2,-1/2,1/2)(s,s,0,s)
/// / (0,0,-1,1)(0,s,-s,s)(0,1,0,1), s = 1/sqrt 2.
#[test]
fn an_octant_has_the_standard_net() {
    let octant = grid(&Surface::Sphere(Sphere {
        longitude_deg: (0.0, 90.0),
        latitude_deg: (-90.0, 0.0),
        ..Sphere::default()
    }));
    let s = FRAC_1_SQRT_2;
    let rows = [
        [[0.0, 0.0, -1.0, 1.0], [s, 0.0, -s, s], [1.0, 0.0, 0.0, 1.0]],
        [[0.0, 0.0, -s, s], [0.5, 0.5, -0.5, 0.5], [s, s, 0.0, s]],
        [[0.0, 0.0, -1.0, 1.0], [0.0, s, -s, s], [0.0, 1.0, 0.0, 1.0]],
    ];
    let patch = &octant.pieces[0];
    for (i, row) in rows.iter().enumerate() {
        for (j, h) in row.iter().enumerate() {
            let (p, w) = (patch.control_point(i, j), patch.weight(i, j));
            let found = [p.x * w, p.y * w, p.z * w, w];
            for (a, b) in found.iter().zip(h) {
                assert!((a - b).abs() < 4e-16, "{i} {j}: {found:?}");
            }
        }
    }
    let middle = patch.eval(0.5, 0.5);
    assert!((middle - Point::new(0.5, 0.5, -s)).norm() < 4e-16);
}

#[test]
fn a_revolution_keeps_its_profile_and_its_radii() {
    let profile = BezierPoints {
        points: Some(vec![
            [13.0, -4.0, 7.0],
            [15.0, -3.0, 9.0],
            [12.0, -6.0, 10.0],
            [14.0, -5.0, 12.0],
        ]),
        weights: Some(vec![1.0, 0.5, 2.0, 1.0]),
        indexed: None,
    };
    let turned = grid(&Surface::Revolution(Box::new(Revolution {
        profile: Curve::Bezier(profile.clone()),
        center: CENTER,
        axis: AXIS,
        angle_deg: (0.0, 250.0),
    })));
    assert_eq!(turned.pieces.len(), 3);
    let points = profile.points.unwrap().into_iter().map(Point::from);
    let curve = chordwise::bezier::BezierCurve::new(points.collect(), profile.weights).unwrap();
    for ([u, v], point, _) in samples(&turned) {
        let (radius, height, away) = around(&point);
        let (r, h, start) = around(&curve.eval(v));
        assert!((radius - r).abs() < 1e-12 * 20.0 && (height - h).abs() < 1e-12 * 20.0);
        if u <= 0.0 {
            assert!((point - curve.eval(v)).norm() < 1e-12);
        }
        if u >= 1.0 {
            let angle = away.dot(&start).acos().to_degrees();
            assert!((angle - 110.0).abs() < 1e-9);
        }
    }
}

fn is_closed(patch: &BezierPatch, side: Side) -> bool {
    let edge = patch.edge(side);
    let start = edge.control_point(0);
    let far = edge.control_points().any(|p| (p - start).norm() > 1e-3);
    far && (edge.control_point(edge.degree()) - start).norm() <= 1e-3
}

#[test]
fn no_piece_has_an_edge_that_closes() {
    let loops = [
        // A closed profile: a droplet, turned; and a tube of one Bezier row.
        Surface::Revolution(Box::new(Revolution {
            profile: Curve::Bezier(BezierPoints {
                points: Some(vec![
                    [20.0, 0.0, 0.0],
                    [30.0, 0.0, 10.0],
                    [30.0, 0.0, -10.0],
                    [20.0, 0.0, 0.0],
                ]),
                ..BezierPoints::default()
            }),
            center: [0.0; 3],
            axis: [0.0, 0.0, 1.0],
            angle_deg: (0.0, 90.0),
        })),
        Surface::Bezier(BezierNet {
            net: Some(vec![
                vec![[0.0, 0.0, 0.0], [0.0, 0.0, 9.0]],
                vec![[9.0, 9.0, 0.0], [9.0, 9.0, 9.0]],
                vec![[-9.0, 9.0, 0.0], [-9.0, 9.0, 9.0]],
                vec![[0.0, 0.0, 0.0], [0.0, 0.0, 9.0]],
            ]),
            ..BezierNet::default()
        }),
        sphere((0.0, 360.0), (-90.0, 90.0)),
    ];
    for (surface, pieces) in loops.iter().zip([2, 2, 8]) {
        let grid = grid(surface);
        assert_eq!(grid.pieces.len(), pieces);
        for piece in &grid.pieces {
            for side in Side::ALL {
                assert!(!is_closed(piece, side));
            }
        }
    }
}

#[test]
fn turns_close_bit_by_bit_and_poles_are_points() {
    // 360.1 is not 0.1 again when a turn is taken off it.
    let ball = grid(&sphere((0.1, 360.1), (-90.0, 90.0)));
    for j in 0..2 {
        // Columns of pieces: u = 0 .. 1 in four arcs, two in v.
        assert_eq!(
            ball.pieces[j].edge(Side::U0),
            ball.pieces[6 + j].edge(Side::U1)
        );
    }
    let mut south = ball
        .pieces
        .iter()
        .step_by(2)
        .flat_map(|piece| piece.edge(Side::V0).control_points().collect::<Vec<_>>());
    let pole = south.next().unwrap();
    for point in south {
        assert!((point - pole).norm() < 4e-15, "{point} {pole}");
    }
}

/// A profile that begins on an oblique axis, but for rounding, makes a pole.
#[test]
fn a_profile_point_on_the_axis_is_a_pole() {
    for k in 1..20 {
        let on_axis = Point::from(CENTER) + Vector::from(AXIS) * (f64::from(k) * 0.17);
        let off_axis = on_axis + Vector::from(START);
        let bowl = grid(&Surface::Revolution(Box::new(Revolution {
            profile: line(on_axis.into(), off_axis.into()),
            center: CENTER,
            axis: AXIS,
            angle_deg: (0.0, 300.0),
        })));
        for piece in &bowl.pieces {
            for i in [0, 2] {
                assert_eq!(piece.control_point(i, 0), on_axis);
            }
        }
    }
}

fn line(from: [f64; 3], to: [f64; 3]) -> Curve {
    Curve::Line(Line { from, to })
}

fn arc(center: [f64; 3], axis: [f64; 3], start: [f64; 3], angle_deg: (f64, f64)) -> Curve {
    Curve::Arc(Arc {
        center,
        axis,
        start: Some(start),
        radius: 40.0,
        angle_deg,
    })
}

#[test]
fn a_ruled_surface_is_straight_between_its_curves() {
    let spline = Curve::BSpline(BSplinePoints {
        degree: 3,
        knots: vec![0.0, 0.0, 0.0, 0.0, 1.0, 3.0, 3.0, 3.0, 3.0],
        points: Some(vec![
            [0.0, 0.0, 0.0],
            [10.0, 5.0, 0.0],
            [20.0, -5.0, 4.0],
            [30.0, 0.0, 4.0],
            [40.0, 0.0, 0.0],
        ]),
        ..BSplinePoints::default()
    });
    let ruled = grid(&Surface::Ruled(Box::new(Ruled {
        from: spline,
        to: arc(
            [20.0, 0.0, 50.0],
            [0.0, 1.0, 0.0],
            [-1.0, 0.0, 0.0],
            (0.0, 180.0),
        ),
    })));
    // Breaks at 1/3 from the knots and 1/2 from the arcs.
    assert_eq!(ruled.breaks_u.len(), 4);
    for piece in &ruled.pieces {
        assert_eq!(piece.degree(), (3, 1));
        for k in 0..=8 {
            let u = f64::from(k) / 8.0;
            let top = piece.eval(u, 1.0) - Point::new(20.0, 0.0, 50.0);
            assert!((top.norm() - 40.0).abs() < 1e-12 && top.y.abs() < 1e-12);
            let (a, b, m) = (piece.eval(u, 0.0), piece.eval(u, 1.0), piece.eval(u, 0.3));
            assert!((m - a).cross(&(b - a)).norm() < 1e-10);
        }
    }
}

/// The formula of Coons 1967, evaluated straight from the four curves.
#[test]
fn a_coons_patch_is_the_blend_of_its_curves() {
    let cubic = |a: [f64; 3], b: [f64; 3], c: [f64; 3], d: [f64; 3]| {
        let points = vec![a, b, c, d];
        let exact = points.iter().map(|p| Point::from(*p)).collect();
        let curve = Curve::Bezier(BezierPoints {
            points: Some(points),
            ..BezierPoints::default()
        });
        let exact = chordwise::bezier::BezierCurve::new(exact, None).unwrap();
        (curve, exact)
    };
    let (v0, c0) = cubic(
        [0.0; 3],
        [3.0, 1.0, 2.0],
        [7.0, -1.0, 2.0],
        [10.0, 0.0, 0.0],
    );
    let (v1, c1) = cubic(
        [0.0, 8.0, 1.0],
        [2.0, 9.0, 3.0],
        [8.0, 9.0, 1.0],
        [11.0, 9.0, 2.0],
    );
    let (u0, d0) = cubic([0.0; 3], [1.0, 2.0, 4.0], [-1.0, 5.0, 4.0], [0.0, 8.0, 1.0]);
    let (u1, d1) = cubic(
        [10.0, 0.0, 0.0],
        [12.0, 3.0, 1.0],
        [12.0, 6.0, 1.0],
        [11.0, 9.0, 2.0],
    );
    let coons = grid(&Surface::Coons(Box::new(Coons { u0, u1, v0, v1 })));
    let lerp = |a: Point, b: Point, t: f64| a.coords * (1.0 - t) + b.coords * t;
    for ([u, v], point, _) in samples(&coons) {
        let corners = lerp(c0.eval(0.0), c0.eval(1.0), u) * (1.0 - v)
            + lerp(c1.eval(0.0), c1.eval(1.0), u) * v;
        let blend = lerp(c0.eval(u), c1.eval(u), v) + lerp(d0.eval(v), d1.eval(v), u) - corners;
        assert!((point.coords - blend).norm() < 1e-13 * 10.0);
    }
}

#[test]
fn a_rational_coons_patch_keeps_its_boundary_curves() {
    // Two half circles as boundaries, and a conic with unequal end weights.
    let conic = BezierPoints {
        points: Some(vec![[0.0, 0.0, 0.0], [5.0, 50.0, 20.0], [0.0, 100.0, 0.0]]),
        weights: Some(vec![1.0, 1.5, 4.0]),
        indexed: None,
    };
    let points = conic.points.clone().unwrap().into_iter().map(Point::from);
    let exact =
        chordwise::bezier::BezierCurve::new(points.collect(), conic.weights.clone()).unwrap();
    let half = |y| {
        arc(
            [40.0, y, 0.0],
            [0.0, 1.0, 0.0],
            [-1.0, 0.0, 0.0],
            (0.0, 180.0),
        )
    };
    let coons = grid(&Surface::Coons(Box::new(Coons {
        u0: Curve::Bezier(conic),
        u1: line([80.0, 0.0, 0.0], [80.0, 100.0, 0.0]),
        v0: half(0.0),
        v1: half(100.0),
    })));
    assert_eq!(coons.pieces.len(), 2);
    for ([u, v], point, _) in samples(&coons) {
        if v <= 0.0 || v >= 1.0 {
            let arm = point - Point::new(40.0, 100.0 * v, 0.0);
            assert!((arm.norm() - 40.0).abs() < 1e-12 && arm.y.abs() < 1e-12);
        }
        if u <= 0.0 {
            // t = d1 s / (d0 (1 - s) + d1 s) with d = weight^(-1/2): 1 and 1/2.
            let t = 0.5 * v / ((1.0 - v) + 0.5 * v);
            assert!((point - exact.eval(t)).norm() < 1e-12);
        }
    }
    let (left, right) = (&coons.pieces[0], &coons.pieces[1]);
    assert_eq!(left.edge(Side::U1), right.edge(Side::U0));
}
