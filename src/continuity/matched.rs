//! The common stretch of two edges as two curves on one parameter.

use super::angle::Meeting;
use crate::bezier::BezierCurve;
use crate::patch_set::PatchSet;
use crate::scalar::Point;
use crate::topology::{Stretch, difference_bound, nearest_from};

/// Both edges of a meeting, cut to the stretch and in standard form.
#[derive(Debug)]
pub(super) struct Matched {
    /// The curves on 0 to 1, running the same way.
    pub(super) curves: [BezierCurve; 2],
    /// A point near both, for coordinates.
    pub(super) origin: Point,
    /// Changes of parameter, see [`super::strip::Strip::reparametrised`].
    pub(super) lambda: [f64; 2],
    meeting: Meeting,
    /// Largest difference of the two at equal parameters.
    apart: f64,
    /// Below this the edges are one curve of one parametrisation.
    same: f64,
}

impl Matched {
    pub(super) fn new(meeting: &Meeting, set: &PatchSet) -> Self {
        let ranges = [meeting.first, meeting.second];
        let cut = |k: usize| {
            let edge = meeting.edges[k];
            let curve = set.pieces()[edge.piece().index()].surface.edge(edge.side());
            let range = ranges[k];
            Stretch {
                curve: &curve,
                range,
            }
            .cut()
        };
        let curves = [cut(0), cut(1)];
        let origin = curves[0].control_point(0);
        let lambda = curves.each_ref().map(to_standard);
        let [first, second] = curves;
        let curves = [
            reparametrised(first, lambda[0]),
            reparametrised(second, lambda[1]),
        ];
        let apart = difference_bound(&curves[0], &curves[1]);
        let largest = curves[0]
            .control_points()
            .map(|p: Point| p.coords.amax())
            .fold(0.0, f64::max);
        Self {
            same: largest * 1e-12 + curves[0].chord_bound() * 1e-12,
            curves,
            origin,
            lambda,
            meeting: *meeting,
            apart,
        }
    }

    /// Whether equal parameters are nearest points all along.
    pub(super) fn aligned(&self) -> bool {
        self.apart <= self.same
    }

    /// The parameter on the second curve nearest to place `s` of the first.
    pub(super) fn foot(&self, s: f64, guess: Option<f64>) -> f64 {
        if self.aligned() {
            return s;
        }
        let point = self.curves[0].eval(s);
        nearest_from(&self.curves[1], &point, guess.unwrap_or(s), [0.0, 1.0]).t
    }

    /// The parameter on the second edge nearest to a parameter of the first.
    pub(super) fn foot_of_edge(&self, at: f64) -> f64 {
        let s = self.on_curve(at);
        self.on_edges([s, self.foot(s, None)])[1]
    }

    /// The first curve's parameter for one of the first edge.
    pub(super) fn on_curve(&self, at: f64) -> f64 {
        let [from, to] = self.meeting.first;
        let x = (at - from) / (to - from);
        // Back from `parameter_before`.
        x / (x + self.lambda[0] * (1.0 - x))
    }

    /// Distance of place `s` of the first curve from the second, and the
    /// parameter there.
    pub(super) fn distance(&self, s: f64) -> (f64, f64) {
        let t = self.foot(s, None);
        ((self.curves[0].eval(s) - self.curves[1].eval(t)).norm(), t)
    }

    /// Parameters on the curves as parameters of the two edges.
    pub(super) fn on_edges(&self, at: [f64; 2]) -> [f64; 2] {
        let ranges = [self.meeting.first, self.meeting.second];
        [0, 1].map(|k| {
            let x = parameter_before(at[k], self.lambda[k]);
            ranges[k][0] * (1.0 - x) + ranges[k][1] * x
        })
    }
}

/// The change of parameter t = lambda tau / (1 - tau + lambda tau) that makes
/// both end weights of a rational curve equal (Farin, *NURBS*).
fn to_standard(curve: &BezierCurve) -> f64 {
    let n = curve.degree();
    #[allow(clippy::cast_precision_loss, reason = "a degree is at most 15")]
    let root = 1.0 / n as f64;
    if curve.is_rational() {
        (curve.weight(0) / curve.weight(n)).powf(root)
    } else {
        1.0
    }
}

fn parameter_before(tau: f64, lambda: f64) -> f64 {
    lambda * tau / (1.0 - tau + lambda * tau)
}

fn reparametrised(curve: BezierCurve, lambda: f64) -> BezierCurve {
    if !curve.is_rational() {
        return curve;
    }
    let mut factor = 1.0;
    let weights = (0..=curve.degree()).map(|i| {
        let weight = curve.weight(i) * factor;
        factor *= lambda;
        weight
    });
    let weights = weights.collect();
    // Positive finite weights stay so short of overflow.
    BezierCurve::new(curve.control_points().collect(), Some(weights)).unwrap_or(curve)
}
