//! How far matched points are from the nearest ones, as a turn of the normal.
//!
//! Over a part let D = C2 - C1 at equal parameters, E = max |D|, and
//! f = D . C2', which vanishes at the nearest point. Its derivative along C2
//! is at least m = min |C2'|^2 - E max |C2''|, so the parameter of the nearest
//! point is off by at most max |f| / m (mean value theorem). Where that says
//! nothing, the nearest point is within 2 E, since the matched one is within E.
//! Both leave out of account an edge that comes back to within 2 E of itself.

use super::strip::Strip;
use crate::bezier::bernstein::Bernstein;
use crate::scalar::Vector;

/// Bounds over the whole second edge.
#[derive(Debug)]
pub(super) struct Slip {
    /// Turn of the normal, radians a length unit.
    turn_per_length: f64,
    /// Turn of the normal a unit of parameter, least square of the speed, and
    /// largest acceleration; for polynomial edges.
    by_parameter: Option<[f64; 3]>,
}

fn least(a: &Bernstein<f64>) -> f64 {
    a.0.iter().copied().fold(f64::INFINITY, f64::min)
}

fn longest(a: &Bernstein<Vector>) -> f64 {
    a.0.iter().map(Vector::norm).fold(0.0, f64::max)
}

fn dot(a: &Bernstein<Vector>, b: &Bernstein<Vector>) -> Bernstein<f64> {
    a.product(b, |p: Vector, q: Vector| p.dot(&q))
}

impl Slip {
    /// Bounds over fifteen overlapping parts of the edge.
    pub(super) fn of(strip: &Strip) -> Self {
        let width = 0.125;
        let polynomial = strip.is_polynomial();
        let mut turn_per_length = 0.0_f64;
        let [mut turn_most, mut square_least, mut bend_most] = [0.0_f64, f64::INFINITY, 0.0];
        for k in 0..15 {
            let part = strip.restrict([f64::from(k) / 16.0, f64::from(k + 2) / 16.0]);
            let normal = &part.normal;
            let cross = normal.product(&normal.derivative(), |p, q| p.cross(&q));
            let turn = longest(&cross) / least(&dot(normal, normal)).max(0.0);
            turn_per_length = turn_per_length.max(turn / progress(&part));
            if polynomial {
                let speed = part.place.derivative();
                turn_most = turn_most.max(turn / width);
                square_least = square_least.min(least(&dot(&speed, &speed)) / (width * width));
                bend_most = bend_most.max(longest(&speed.derivative()) / (width * width));
            }
        }
        let sound = |x: f64| if x.is_nan() { f64::INFINITY } else { x };
        Self {
            turn_per_length: sound(turn_per_length),
            by_parameter: polynomial.then_some([sound(turn_most), square_least, bend_most]),
        }
    }

    /// Bound on the turn of the second normal between matched and nearest
    /// points, over a part that is `width` of the second edge's stretch.
    pub(super) fn bound(&self, strips: &[Strip; 2], width: f64) -> f64 {
        let [p, q] = strips;
        let x = p.place.product(&q.weight, |x, w| x * w);
        let y = q.place.product(&p.weight, |x, w| x * w);
        let w = p.weight.product(&q.weight, |v, w| v * w);
        let difference = y.plus(&x, -1.0);
        let apart = difference
            .0
            .iter()
            .zip(&w.0)
            .map(|(d, w)| d.norm() / w)
            .fold(0.0, f64::max);
        let mut bound = 2.0 * apart * self.turn_per_length;
        if let (Some([turn, square, bend]), true) = (self.by_parameter, p.is_polynomial()) {
            let slope = square - apart * bend;
            if slope > 0.0 && width > 0.0 {
                let along = dot(&difference, &q.place.derivative());
                let most = along.0.iter().map(|f| f.abs()).fold(0.0, f64::max) / width;
                bound = bound.min(turn * most / slope);
            }
        }
        if bound.is_nan() { f64::INFINITY } else { bound }
    }
}

/// Least progress along the chord of a part, in length a unit of parameter:
/// (X' w - X w') . chord / w^2.
fn progress(part: &Strip) -> f64 {
    let at = |x: f64| part.place.eval(x) / part.weight.eval(x);
    let chord = at(1.0) - at(0.0);
    let x = Bernstein(
        part.place
            .0
            .iter()
            .map(|x| x.dot(&chord))
            .collect::<Vec<f64>>(),
    );
    let w = &part.weight;
    let times = |a: &Bernstein<f64>, b: &Bernstein<f64>| a.product(b, |p, q| p * q);
    let rate = times(&x.derivative(), w).plus(&times(&x, &w.derivative()), -1.0);
    let heaviest = times(w, w).0.iter().copied().fold(0.0, f64::max);
    (least(&rate) / heaviest).max(0.0) / chord.norm()
}
