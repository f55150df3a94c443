//! The parts of mending on their own.

use super::basis::Basis;
use super::smallest::{Condition, smallest};
use crate::patch_set::PatchSet;
use crate::scalar::Vector;

/// Shares of control points give what the surface gives: value and first
/// derivatives of a rational B-spline with knots of its own.
#[test]
fn shares_sum_up_to_the_surface() {
    let knots = [
        vec![0.0, 0.0, 0.0, 0.0, 1.5, 2.0, 2.0, 4.0, 4.0, 4.0, 4.0],
        vec![-1.0, 0.0, 0.0, 1.0, 3.0, 3.0, 4.0],
    ];
    let (rows, columns) = (7, 4);
    let chance = |k: usize, f: f64| (f64::from(u32::try_from(k).unwrap()) * f).sin();
    let points: Vec<[f64; 3]> = (0..rows * columns)
        .map(|k| [1.1, 2.3, 3.7].map(|f| 50.0 * chance(k + 1, f)))
        .collect();
    let weights: Vec<f64> = (0..rows * columns)
        .map(|k| 1.0 + 0.4 * chance(k, 0.7))
        .collect();
    let list = |of: &dyn Fn(usize) -> String| -> String {
        let rows: Vec<String> = (0..rows)
            .map(|i| {
                let row: Vec<String> = (0..columns).map(|j| of(i * columns + j)).collect();
                format!("[{}]", row.join(", "))
            })
            .collect();
        format!("[{}]", rows.join(", "))
    };
    let net = list(&|k| {
        format!(
            "({:?}, {:?}, {:?})",
            points[k][0], points[k][1], points[k][2]
        )
    });
    let text = format!(
        "(patches: [(name: \"a\", surface: BSpline(degree: (3, 2), knots: ({:?}, {:?}), net: {net}, weights: {}))])",
        knots[0],
        knots[1],
        list(&|k| format!("{:?}", weights[k])),
    );
    let set = PatchSet::from_ron(&text, "x").unwrap().set;
    let basis = Basis {
        degree: [3, 2],
        knots,
        weights,
        columns,
    };
    for piece in set.pieces() {
        for (u, v) in [(0.0, 0.0), (0.3, 0.8), (1.0, 0.5), (1.0, 1.0)] {
            let jet = piece.surface.jet(u, v);
            let shares = basis.at(
                piece.patch_parameters([0.5, 0.5]),
                piece.patch_parameters([u, v]),
            );
            let sum = |k: usize| {
                let terms = shares.iter();
                terms.fold(Vector::zeros(), |sum, share| {
                    sum + Vector::from(points[share.index]) * share.r[k]
                })
            };
            let wide = [piece.u[1] - piece.u[0], piece.v[1] - piece.v[0]];
            assert!((sum(0) - jet.point.coords).norm() < 1e-11);
            assert!((sum(1) * wide[0] - jet.du).norm() < 1e-9);
            assert!((sum(2) * wide[1] - jet.dv).norm() < 1e-9);
        }
    }
}

fn condition(terms: &[(usize, [f64; 3])], value: f64) -> Condition {
    Condition {
        terms: terms.iter().map(|(k, c)| (*k, Vector::from(*c))).collect(),
        value,
    }
}

/// Two points asked to close a gap of 0.6 go half of it each; three conditions
/// on one point that contradict each other are missed as little as can be.
#[test]
fn displacements_are_the_smallest_there_are() {
    let rows = [condition(
        &[(0, [1.0, 0.0, 0.0]), (1, [-1.0, 0.0, 0.0])],
        0.6,
    )];
    let found = smallest(&rows, 2);
    assert!((found[0] - Vector::new(0.3, 0.0, 0.0)).norm() < 1e-12);
    assert!((found[1] + found[0]).norm() < 1e-12);
    let rows = [1.0, 2.0, 6.0].map(|value| condition(&[(0, [0.0, 2.0, 0.0])], value));
    let found = smallest(&rows, 1);
    // The mean of 1, 2 and 6, over 2.
    assert!((found[0] - Vector::new(0.0, 1.5, 0.0)).norm() < 1e-9);
}
