//! Angles in degrees and circular arcs as rational quadratics.
//!
//! ```text
//! e(t) = ((1-t)^2 e_0 + 2 t (1-t) w m + t^2 e_1) / ((1-t)^2 + 2 t (1-t) w + t^2)
//! w = cos(h),   m = (e_0 + e_1) / (1 + cos 2h),   2h the angle from e_0 to e_1
//! ```
//!
//! Weights 1, cos(h), 1 (standard; Farin).

use super::context::Context;
use super::fault::{Step, SurfaceFault};
use super::homogeneous::real;

/// A full turn, in degrees.
pub(super) const TURN: f64 = 360.0;

/// Cosine and sine of an angle in degrees, exact at multiples of 90.
#[must_use]
pub fn cos_sin_deg(degrees: f64) -> [f64; 2] {
    let turned = degrees.rem_euclid(TURN);
    let quadrant = (turned / 90.0).floor();
    let rest = turned - quadrant * 90.0;
    let [c, s] = if rest <= 0.0 {
        [1.0, 0.0]
    } else if rest <= 45.0 {
        let (s, c) = rest.to_radians().sin_cos();
        [c, s]
    } else {
        // The smaller angle's functions are the more exact ones.
        let (c, s) = (90.0 - rest).to_radians().sin_cos();
        [c, s]
    };
    if quadrant < 0.5 {
        [c, s]
    } else if quadrant < 1.5 {
        [-s, c]
    } else if quadrant < 2.5 {
        [-c, -s]
    } else if quadrant < 3.5 {
        [s, -c]
    } else {
        // rem_euclid rounded up to a full turn.
        [c, s]
    }
}

/// One arc of the unit circle of at most 90 degrees: its three control points
/// and the weight of the middle one (the outer two weigh 1).
#[derive(Debug, Clone, Copy)]
pub(super) struct UnitArc {
    pub(super) points: [[f64; 2]; 3],
    pub(super) weight: f64,
}

impl UnitArc {
    pub(super) fn weights(&self) -> [f64; 3] {
        [1.0, self.weight, 1.0]
    }
}

/// The range in equal arcs of at most 90 degrees. The end of one arc is bitwise
/// the start of the next, and the end of a full turn is its start.
pub(super) fn arcs([from, to]: [f64; 2]) -> Vec<UnitArc> {
    let sweep = to - from;
    // A sweep that is a multiple of 90 but for rounding shall not cost an arc more.
    let count = [1, 2, 3, 4]
        .into_iter()
        .find(|&count| sweep <= 90.0 * real(count) * (1.0 + 1e-12))
        .unwrap_or(4);
    let step = sweep / real(count);
    let mut ends: Vec<[f64; 2]> = (0..=count)
        .map(|k| cos_sin_deg(from + sweep * real(k) / real(count)))
        .collect();
    if sweep >= TURN {
        ends[count] = ends[0];
    }
    let [whole, _] = cos_sin_deg(step);
    let [weight, _] = cos_sin_deg(step / 2.0);
    ends.windows(2)
        .map(|pair| {
            let ([c0, s0], [c1, s1]) = (pair[0], pair[1]);
            let middle = [(c0 + c1) / (1.0 + whole), (s0 + s1) / (1.0 + whole)];
            UnitArc {
                points: [pair[0], middle, pair[1]],
                weight,
            }
        })
        .collect()
}

/// Breaks 0 to 1, evenly spaced.
pub(super) fn even_breaks(pieces: usize) -> Vec<f64> {
    (0..=pieces).map(|k| real(k) / real(pieces)).collect()
}

/// A range of at most a full turn; one that misses the turn by rounding only is
/// the full turn.
pub(super) fn range(
    context: &mut Context<'_>,
    (from, to): (f64, f64),
    name: &'static str,
) -> Option<[f64; 2]> {
    let from = context.finite(from, name)?;
    let mut to = context.finite(to, name)?;
    if (to - from - TURN).abs() < 1e-9 {
        to = from + TURN;
    }
    let sweep = to - from;
    if sweep > 1e-6 && sweep <= TURN + 1e-9 && from.abs() <= 1e6 {
        return Some([from, to]);
    }
    context.fault(
        &[Step::Field(name)],
        SurfaceFault::AngleRange {
            name,
            from,
            to,
            most: TURN,
        },
    );
    None
}

#[cfg(test)]
#[allow(clippy::float_cmp, reason = "these values must be exact")]
mod tests {
    use super::*;

    #[test]
    fn quarter_turns_are_exact() {
        for (k, expected) in [[1.0, 0.0], [0.0, 1.0], [-1.0, 0.0], [0.0, -1.0]]
            .into_iter()
            .enumerate()
        {
            for turns in [-2.0, 0.0, 3.0] {
                assert_eq!(cos_sin_deg(90.0 * real(k) + 360.0 * turns), expected);
            }
        }
        assert_eq!(cos_sin_deg(-1e-20), [1.0, 0.0]);
    }

    /// The standard weights of a quarter circle are 1, 1/sqrt 2, 1 (Farin).
    #[test]
    fn a_quarter_circle_has_the_standard_weights() {
        let quarter = arcs([0.0, 90.0]);
        assert_eq!(quarter.len(), 1);
        assert_eq!(quarter[0].weight, std::f64::consts::FRAC_1_SQRT_2);
        assert_eq!(quarter[0].points[1], [1.0, 1.0]);
        let turn = arcs([30.0, 390.0]);
        assert_eq!(turn.len(), 4);
        assert_eq!(turn[3].points[2], turn[0].points[0]);
        assert_eq!(arcs([0.0, 90.1]).len(), 2);
    }
}
