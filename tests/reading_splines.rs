//! B-spline surfaces against SciPy's evaluation. The values and the script that
//! made them are in `tests/judges/`.
#![allow(
    clippy::unwrap_used,
    clippy::float_cmp,
    reason = "a panic is how a test fails, and exact values are meant"
)]

use chordwise::scalar::Point;
use chordwise::surface::{BSplineNet, PieceGrid, Surface};
use serde_json::Value;

fn numbers(value: &Value) -> Vec<f64> {
    value
        .as_array()
        .unwrap()
        .iter()
        .map(|number| number.as_f64().unwrap())
        .collect()
}

fn rows(value: &Value) -> Vec<Vec<f64>> {
    value.as_array().unwrap().iter().map(numbers).collect()
}

fn point(value: &Value) -> [f64; 3] {
    numbers(value).try_into().unwrap()
}

fn degree(value: &Value) -> usize {
    usize::try_from(value.as_u64().unwrap()).unwrap()
}

/// The point at the patch's own parameters.
fn eval(grid: &PieceGrid, u: f64, v: f64) -> Point {
    let place = |breaks: &[f64], t: f64| {
        let inner = &breaks[1..breaks.len() - 1];
        let k = inner.partition_point(|&b| b <= t);
        (k, (t - breaks[k]) / (breaks[k + 1] - breaks[k]))
    };
    let ((i, u), (j, v)) = (place(&grid.breaks_u, u), place(&grid.breaks_v, v));
    grid.pieces[i * (grid.breaks_v.len() - 1) + j].eval(u, v)
}

#[test]
fn pieces_of_b_splines_have_the_values_scipy_gives() {
    let text = include_str!("judges/bspline_values.json");
    let judged: Value = serde_json::from_str(text).unwrap();
    let cases = judged["cases"].as_array().unwrap();
    assert_eq!(cases.len(), 5);
    for case in cases {
        let net = case["net"].as_array().unwrap();
        let weights = &case["weights"];
        let surface = Surface::BSpline(BSplineNet {
            degree: (degree(&case["degree"][0]), degree(&case["degree"][1])),
            knots: (numbers(&case["knots"][0]), numbers(&case["knots"][1])),
            net: Some(
                net.iter()
                    .map(|row| row.as_array().unwrap().iter().map(point).collect())
                    .collect(),
            ),
            indexed: None,
            weights: (!weights.is_null()).then(|| rows(weights)),
        });
        let grid = surface.pieces(&[], 0.01).unwrap();
        let samples = case["samples"].as_array().unwrap();
        assert_eq!(samples.len(), 63);
        for sample in samples {
            let (u, v) = (sample["u"].as_f64().unwrap(), sample["v"].as_f64().unwrap());
            let expected = Point::from(point(&sample["point"]));
            let distance = (eval(&grid, u, v) - expected).norm();
            // Coordinates are up to 100; both sides round.
            assert!(
                distance < 5e-12,
                "{}: {distance:e} at {u}, {v}",
                case["name"]
            );
        }
    }
}

#[test]
fn neighbouring_pieces_share_their_edge_bit_by_bit() {
    use chordwise::bezier::Side;
    let surface = Surface::BSpline(BSplineNet {
        degree: (1, 3),
        knots: (
            vec![0.0, 0.0, 1.0, 1.0],
            vec![0.0, 0.1, 0.3, 0.7, 1.1, 1.3, 1.9, 2.3, 3.1, 3.7, 4.9, 5.3],
        ),
        net: Some(
            (0..2)
                .map(|i| {
                    (0..8)
                        .map(|j| {
                            let (i, j) = (f64::from(i), f64::from(j));
                            [i * 0.3 + 0.1 * j, j * 0.7, (1.3 * i + j * j).sin()]
                        })
                        .collect()
                })
                .collect(),
        ),
        ..BSplineNet::default()
    });
    let grid = surface.pieces(&[], 1e-6).unwrap();
    assert_eq!(grid.pieces.len(), 5);
    for pair in grid.pieces.windows(2) {
        assert_eq!(pair[0].edge(Side::V1), pair[1].edge(Side::V0));
    }
}
