//! Patches of the degrees that vehicles are made of.

use chordwise::bezier::BezierPatch;
use chordwise::scalar::Point;

/// A gently bent sheet, with uneven weights or none.
fn sheet(degree: u32, rational: bool) -> BezierPatch {
    let count = degree + 1;
    let places = || (0..count).flat_map(|i| (0..count).map(move |j| (f64::from(i), f64::from(j))));
    let bend = |x: f64, y: f64| 3.0 * (0.9 * x + 0.4 * y).sin() + 0.5 * x * y;
    let points = places().map(|(x, y)| Point::new(100.0 * x, 100.0 * y, bend(x, y)));
    let weights = rational.then(|| places().map(|(x, y)| 1.0 + 0.2 * x * y).collect());
    let degree = degree as usize;
    BezierPatch::new((degree, degree), points.collect(), weights)
        .expect("counts and weights are right by construction")
}

/// Names and patches.
pub(crate) fn all() -> [(&'static str, BezierPatch); 3] {
    [
        ("bicubic", sheet(3, false)),
        ("degree 5", sheet(5, false)),
        ("rational biquadratic", sheet(2, true)),
    ]
}
