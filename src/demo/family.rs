//! Surfaces with a known best: the family that triangle counts are judged on.
//!
//! Each member is small, exact (its pieces are Bezier nets, nothing is fitted)
//! and stands for one thing a tessellator can waste triangles on.

use crate::patch_set::{PatchEntry, PatchSet, SetFile};
use crate::surface::{BezierNet, Cone, Cylinder, Sphere, Surface, Torus};

/// A member of the family.
#[derive(Debug)]
pub struct Member {
    /// Its name.
    pub name: &'static str,
    /// The set.
    pub set: PatchSet,
    /// Chord tolerances in mm and the largest ratio of triangles to the floor
    /// wanted at each.
    pub goals: &'static [(f64, f64)],
}

/// All members.
#[must_use]
pub fn family() -> Vec<Member> {
    vec![
        member(
            "smooth panel",
            panel(&SMOOTH_KNOTS, &crown(&SMOOTH_KNOTS)),
            &[(0.1, 1.55), (0.01, 1.35), (0.001, 1.25)],
        ),
        member(
            "ridge panel",
            panel(&RIDGE_KNOTS, &ridge()),
            &[(0.1, 1.75), (0.01, 1.5)],
        ),
        member(
            "sphere",
            vec![("sphere".to_owned(), sphere())],
            &[(0.1, 1.8), (0.01, 1.5)],
        ),
        member(
            "saddle",
            vec![("saddle".to_owned(), saddle())],
            &[(0.001, 1.2)],
        ),
        member(
            "turned paraboloid",
            vec![("bowl".to_owned(), turned_paraboloid())],
            &[(0.001, 1.1)],
        ),
        member(
            "quarter cylinder",
            vec![("shell".to_owned(), quarter_cylinder())],
            &[(0.01, 1.22)],
        ),
        member(
            "cone",
            vec![("cone".to_owned(), cone())],
            &[(0.05, 1.22), (0.001, 1.1)],
        ),
        member(
            "half torus",
            vec![("ring".to_owned(), half_torus())],
            &[(0.05, 1.8)],
        ),
        member(
            "uneven flat",
            vec![("flat".to_owned(), uneven_flat())],
            &[(0.1, 1.0)],
        ),
        member(
            "three-sided cap",
            vec![("cap".to_owned(), cap())],
            &[(0.01, 1.7)],
        ),
    ]
}

fn member(
    name: &'static str,
    patches: Vec<(String, Surface)>,
    goals: &'static [(f64, f64)],
) -> Member {
    let patches = patches
        .into_iter()
        .map(|(name, surface)| PatchEntry::new(name, surface))
        .collect();
    let file = SetFile {
        patches,
        ..SetFile::new(name)
    };
    let set = PatchSet::build(file)
        .expect("members of the family are valid by construction")
        .set;
    Member { name, set, goals }
}

const SMOOTH_KNOTS: [f64; 9] = [
    -450.0, -337.5, -225.0, -112.5, 0.0, 112.5, 225.0, 337.5, 450.0,
];
const RIDGE_KNOTS: [f64; 9] = [-450.0, -200.0, -20.0, -3.64, -1.6, 1.6, 3.64, 200.0, 450.0];

/// Second derivatives of a crown of 1.5 m radius with gentle unevenness.
fn crown(knots: &[f64]) -> Vec<f64> {
    knots
        .iter()
        .map(|x| -(1.0 + 0.12 * (x * 0.011).sin()) / 1500.0)
        .collect()
}

/// The crown, and a ridge of 15 mm radius that turns 20 degrees.
fn ridge() -> Vec<f64> {
    let mut second = crown(&RIDGE_KNOTS);
    second[4] = -1.0 / 15.0;
    second[5] = -1.0 / 15.0;
    second
}

/// 8 x 8 bicubics, 0.9 m square: z = p(x) + q(y), both cubic splines with the
/// given second derivatives at the knots (q: a crown of 2.2 m radius).
fn panel(x_knots: &[f64; 9], x_second: &[f64]) -> Vec<(String, Surface)> {
    let y_second: Vec<f64> = SMOOTH_KNOTS
        .iter()
        .map(|y| -(1.0 + 0.12 * (y * 0.009).cos()) / 2200.0)
        .collect();
    let along_x = ordinates(x_knots, x_second);
    let along_y = ordinates(&SMOOTH_KNOTS, &y_second);
    let third = |knots: &[f64], k: usize, i: usize| {
        let [a, b] = [knots[k], knots[k + 1]];
        [a, a + (b - a) / 3.0, b - (b - a) / 3.0, b][i]
    };
    let mut patches = Vec::new();
    for (k, p) in along_x.iter().enumerate() {
        for (l, q) in along_y.iter().enumerate() {
            let row = |i: usize| {
                (0..4)
                    .map(|j| {
                        [
                            third(x_knots, k, i),
                            third(&SMOOTH_KNOTS, l, j),
                            p[i] + q[j],
                        ]
                    })
                    .collect()
            };
            patches.push((
                format!("panel/{}", k * 8 + l + 1),
                bezier((0..4).map(row).collect(), None),
            ));
        }
    }
    patches
}

/// Bezier ordinates of the cubic spline with these second derivatives at the
/// knots, zero value and slope at the middle knot.
fn ordinates(knots: &[f64], second: &[f64]) -> Vec<[f64; 4]> {
    let count = knots.len();
    let (mut value, mut slope) = (vec![0.0; count], vec![0.0; count]);
    let middle = count / 2;
    // f over one interval: value + slope t + a t^2 / 2 + (b - a) t^3 / (6 h).
    for k in middle..count - 1 {
        let h = knots[k + 1] - knots[k];
        value[k + 1] = value[k] + slope[k] * h + h * h * (2.0 * second[k] + second[k + 1]) / 6.0;
        slope[k + 1] = slope[k] + h * (second[k] + second[k + 1]) / 2.0;
    }
    for k in (0..middle).rev() {
        let h = knots[k + 1] - knots[k];
        value[k] =
            value[k + 1] - slope[k + 1] * h + h * h * (2.0 * second[k + 1] + second[k]) / 6.0;
        slope[k] = slope[k + 1] - h * (second[k] + second[k + 1]) / 2.0;
    }
    (0..count - 1)
        .map(|k| {
            let h = knots[k + 1] - knots[k];
            [
                value[k],
                value[k] + slope[k] * h / 3.0,
                value[k + 1] - slope[k + 1] * h / 3.0,
                value[k + 1],
            ]
        })
        .collect()
}

fn bezier(net: Vec<Vec<[f64; 3]>>, weights: Option<Vec<Vec<f64>>>) -> Surface {
    Surface::Bezier(BezierNet {
        net: Some(net),
        weights,
        ..BezierNet::default()
    })
}

fn sphere() -> Surface {
    Surface::Sphere(Sphere {
        center: [0.0; 3],
        axis: [0.0, 0.0, 1.0],
        start: None,
        radius: 100.0,
        longitude_deg: (0.0, 360.0),
        latitude_deg: (-90.0, 90.0),
    })
}

fn quarter_cylinder() -> Surface {
    Surface::Cylinder(Cylinder {
        center: [0.0; 3],
        axis: [0.0, 0.0, 1.0],
        start: None,
        radius: 100.0,
        height: 300.0,
        angle_deg: (0.0, 90.0),
    })
}

/// Straight to a tip, along whose collapsed edge the normal turns.
fn cone() -> Surface {
    Surface::Cone(Cone {
        center: [0.0; 3],
        axis: [0.0, 0.0, 1.0],
        start: None,
        radius: 60.0,
        top_radius: 0.0,
        height: 90.0,
        angle_deg: (0.0, 360.0),
    })
}

/// Bent one way outside and both ways inside.
fn half_torus() -> Surface {
    Surface::Torus(Torus {
        center: [0.0; 3],
        axis: [0.0, 0.0, 1.0],
        start: None,
        major: 200.0,
        minor: 50.0,
        angle_deg: (0.0, 180.0),
        tube_deg: (0.0, 360.0),
    })
}

/// A net whose z is the quadratic form (a, b; b, c) / 2 over a square of 200 mm.
fn quadratic([a, b, c]: [f64; 3]) -> Surface {
    let at = [-100.0, 0.0, 100.0];
    // Blossom of x^2 between the ends is their product.
    let square = [1e4, -1e4, 1e4];
    let row = |i: usize| {
        (0..3)
            .map(|j| {
                [
                    at[i],
                    at[j],
                    a / 2.0 * square[i] + b * at[i] * at[j] + c / 2.0 * square[j],
                ]
            })
            .collect()
    };
    bezier((0..3).map(row).collect(), None)
}

fn saddle() -> Surface {
    quadratic([0.0, 1e-3, 0.0])
}

fn turned_paraboloid() -> Surface {
    let (k1, k2) = (1.0 / 200.0, 1.0 / 2000.0);
    let (c, s) = (30.0_f64.to_radians().cos(), 30.0_f64.to_radians().sin());
    quadratic([
        k1 * c * c + k2 * s * s,
        (k1 - k2) * s * c,
        k1 * s * s + k2 * c * c,
    ])
}

/// A flat square whose parameters run strongly unevenly; its edges are straight.
fn uneven_flat() -> Surface {
    let at = [0.0, 5.0, 160.0, 200.0];
    let row = |i: usize| (0..4).map(|j| [at[i], 200.0 - at[3 - j], 0.0]).collect();
    bezier((0..4).map(row).collect(), None)
}

/// A three-sided cap of a sphere of 400 mm radius, about 200 mm across: the
/// part of an octant round a pole, one edge collapsed.
fn cap() -> Surface {
    Surface::Sphere(Sphere {
        center: [0.0; 3],
        axis: [0.0, 0.0, 1.0],
        start: None,
        radius: 400.0,
        longitude_deg: (0.0, 60.0),
        latitude_deg: (61.0, 90.0),
    })
}
