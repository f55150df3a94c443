//! Rows of points that make the optimal triangles: the sheared lattice.
//!
//! On a surface whose heights have the constant Hessian (A, B; B, C) in row
//! parameter p and cross parameter q, the triangles of largest area at error e
//! stand in rows along p with the step h and the row distance k:
//!
//! ```text
//! A C - B^2 > 0:  A h^2 = 6 e,   k^2 = 4.5 e |A| / (A C - B^2)          (equilateral in the metric)
//! A C - B^2 < 0:  A h^2 <= 8 e,  k^2 = (A^2 h^2 / 4 + 64 e^2 / h^2) / (B^2 - A C)
//! ```
//!
//! each row shifted against the last by s, conjugate direction plus half a
//! step. Areas: (3 sqrt 3 / 2) e / sqrt K and 2 sqrt 5 e / sqrt(-K), the limits
//! of Pottmann, Krasauskas, Hamann, Joy and Seibold (2000). The hyperbolic row
//! follows from asking that one sloping edge has Q = 8 e and the other -8 e;
//! there h is free, and is taken so that edges are short (`saddle_step`).

use super::correction::Correction;
use super::field::{Bend, Field};
use crate::sampling::{Limits, ratio};
use crate::scalar::Vector;

/// Samples along a row, and of rows.
pub(super) const SAMPLES: usize = 8;

/// A step of the lattice along a parameter line may leave the straight line
/// sideways by this multiple of the chord. The mesh does not care, but the
/// proof of a triangle pays for it with the tilt of its neighbours.
const WANDER: f64 = 3.0;

/// A h^2 / e and (C - B^2 / A) k^2 / e of the optimal lattice where K > 0.
const EQUILATERAL: [f64; 2] = [6.0, 4.5];

/// The same for triangles as wide as high (2 e is the squared circumradius:
/// k = h = 1.6 sqrt 2e), 1.5 % smaller: rows and columns are then as far apart as the
/// samples of the sides, whichever way they run.
const EVEN: [f64; 2] = [5.12, 5.12];

/// Where K < 0 and rows end freely, they stand nearer together by this: they get
/// out of step with one another, and at 0.894 of the best distance no triangle
/// between them has more than its 8 e however they stand. By trial half of that
/// is best: a torus takes a seventh fewer triangles, all told.
const OUT_OF_STEP: f64 = 0.95;

/// Edges along rows count a little more there: triangles about as wide as high
/// suit the samples of the sides best, by trial on a saddle.
const ALONG_ROWS: f64 = 1.2;

/// Row steps looked at where K < 0: down to this part of the longest, and how
/// closely.
const SHORTEST: f64 = 1e-3;
const THIRDS: usize = 14;

/// Which parameter the rows run along.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Along {
    /// Rows of constant v.
    U,
    /// Rows of constant u.
    V,
}

impl Along {
    /// (u, v) of row parameter p and cross parameter q.
    pub(super) fn place(self, p: f64, q: f64) -> [f64; 2] {
        match self {
            Self::U => [p, q],
            Self::V => [q, p],
        }
    }

    /// (p, q) of a place.
    pub(super) fn split(self, [u, v]: [f64; 2]) -> (f64, f64) {
        match self {
            Self::U => (u, v),
            Self::V => (v, u),
        }
    }
}

/// Local lattice: row step, row distance and shift, in parameters.
#[derive(Debug, Clone, Copy)]
pub(super) struct Step {
    /// Steps per unit of p (1 / h); zero where the row is straight.
    pub(super) rows_step: f64,
    /// Rows per unit of q (1 / k); zero where the surface is straight across.
    pub(super) rows_cross: f64,
    /// (A, B, C) of the heights in (p, q).
    pub(super) form: [f64; 3],
    /// The error it is laid out for.
    pub(super) e: f64,
}

impl Step {
    fn new(bend: &Bend, along: Along, ground: &Ground, correction: f64) -> Self {
        let (limits, flat) = (ground.limits, ground.flat);
        let [along_row, across] = if ground.coursed { EVEN } else { EQUILATERAL };
        let [l, m, n] = bend.form;
        let (form, first) = match along {
            Along::U => ([l, m, n], bend.first),
            Along::V => ([n, m, l], [bend.first[1], bend.first[0]]),
        };
        let [a, b, c] = form;
        let (size_p, size_q) = (first[0].norm(), first[1].norm());
        let e = limits.interior / correction;
        let determinant = a * c - b * b;
        // Below this the second form is rounding beside its own entries.
        let floor = 1e-12 * (a * a + b * b + c * c);
        let (mut rows_step, mut rows_cross) = if determinant > floor {
            (
                (a.abs() / (along_row * e)).sqrt(),
                (determinant / (across * e * a.abs())).sqrt(),
            )
        } else if determinant < -floor {
            let together = if ground.coursed { 1.0 } else { OUT_OF_STEP };
            let h = saddle_step(form, first, e);
            (1.0 / h, 1.0 / (saddle_distance(form, e, h) * together))
        } else {
            // Straight in one direction: steps only where the heights bend.
            ((a.abs() / (8.0 * e)).sqrt(), (c.abs() / (8.0 * e)).sqrt())
        };
        let wander = if flat { [0.0; 2] } else { wander(bend, along) };
        rows_step = rows_step.max((wander[0] / (8.0 * WANDER * e)).sqrt());
        rows_cross = rows_cross.max((wander[1] / (8.0 * WANDER * e)).sqrt());
        if let Some(turn) = limits.normal_rad {
            rows_step = rows_step.max(turn_rate(bend, along.place(1.0, 0.0)) / (0.9 * turn));
            rows_cross = rows_cross.max(turn_rate(bend, along.place(0.0, 1.0)) / (0.75 * turn));
        }
        if let Some(edge) = limits.max_edge {
            rows_step = rows_step.max(size_p / (0.95 * edge));
            rows_cross = rows_cross.max(size_q / (0.8 * edge));
        }
        Self {
            rows_step,
            rows_cross,
            form,
            e,
        }
    }

    /// The shift of p that carries a point of one row to a point of the row
    /// `gap` further in q.
    pub(super) fn shift(&self, gap: f64) -> f64 {
        let ([a, b, c], e) = (self.form, self.e);
        let h = 1.0 / self.rows_step;
        let determinant = a * c - b * b;
        if determinant >= 0.0 || b.abs() <= 1e-9 * (a.abs() + c.abs()) && a * c >= 0.0 {
            let conjugate = if a.abs() > 1e-12 * (b.abs() + c.abs()) {
                b / a
            } else {
                0.0
            };
            return h / 2.0 - conjugate * gap;
        }
        saddle_shift(self.form, e, h, gap)
    }
}

/// The row distance k where K < 0, for rows with the step h.
fn saddle_distance([a, b, c]: [f64; 3], e: f64, h: f64) -> f64 {
    let square = (a * h).powi(2) / 4.0 + (8.0 * e / h).powi(2);
    (square / (b * b - a * c)).sqrt()
}

/// The shift from one row to another `gap` further where K < 0: one sloping edge
/// has Q = 8 e, the other -8 e.
fn saddle_shift([a, b, c]: [f64; 3], e: f64, h: f64, gap: f64) -> f64 {
    let lean = 8.0 * e / h * b.signum();
    if a.abs() > 1e-6 * b.abs() * gap / h {
        h / 2.0 + (lean - b * gap) / a
    } else {
        h / 2.0 - 4.0 * e * c / (h * b * b)
    }
}

/// The row step h where K < 0: the one whose triangles have the least sum of
/// squared edges, with A h^2 <= 8 e and no longer than the piece. By heights all
/// are equally good; long edges leave the straight line sideways.
fn saddle_step(form: [f64; 3], first: [Vector; 2], e: f64) -> f64 {
    let squares = |h: f64| {
        let k = saddle_distance(form, e, h);
        let along = first[0] * h;
        let sloping = first[0] * saddle_shift(form, e, h, k) + first[1] * k;
        let sloping = sloping.norm_squared() + (sloping - along).norm_squared();
        ALONG_ROWS * along.norm_squared() + sloping
    };
    let longest = (8.0 * e / form[0].abs()).sqrt().min(1.0);
    let (mut low, mut high) = (longest * SHORTEST, longest);
    // The sum falls, then grows; its logarithm's thirds close in on the least.
    for _ in 0..THIRDS {
        let third = (high / low).cbrt();
        if squares(low * third) < squares(high / third) {
            high /= third;
        } else {
            low *= third;
        }
    }
    high
}

/// How fast the parameter lines in p and q leave the straight line sideways in
/// the surface: |S_pp . (n x S_p)| / |S_p|, and the same in q.
fn wander(bend: &Bend, along: Along) -> [f64; 2] {
    let sideways = |first: &Vector, second: &Vector| {
        let size = first.norm();
        if size > 0.0 {
            (second.dot(&bend.normal.cross(first)) / size).abs()
        } else {
            0.0
        }
    };
    let u = sideways(&bend.first[0], &bend.second[0]);
    let v = sideways(&bend.first[1], &bend.second[2]);
    match along {
        Along::U => [u, v],
        Along::V => [v, u],
    }
}

/// |dn| for a unit step of the parameters along `direction`.
fn turn_rate(bend: &Bend, direction: [f64; 2]) -> f64 {
    let [du, dv] = direction;
    let [l, m, n] = bend.form;
    // Weingarten: n_u = -(shape operator) in the basis S_u, S_v.
    let (e, f, g) = (
        bend.first[0].norm_squared(),
        bend.first[0].dot(&bend.first[1]),
        bend.first[1].norm_squared(),
    );
    // At a pole one side is rounding, and all that is divided by it.
    if e.min(g) <= 1e-18 * e.max(g) {
        let (bent, squared) = if e < g { (n * dv, g) } else { (l * du, e) };
        return if squared > 0.0 {
            bent.abs() / squared.sqrt()
        } else {
            0.0
        };
    }
    let determinant = e * g - f * f;
    if determinant <= 1e-18 * e * g {
        return 0.0;
    }
    let (p, q) = (l * du + m * dv, m * du + n * dv);
    ((p * p * g - 2.0 * p * q * f + q * q * e) / determinant)
        .max(0.0)
        .sqrt()
}

/// What a layout is made on: the surface's bend, the limits, and what earlier
/// layouts have taught.
#[derive(Debug)]
pub(super) struct Ground<'a> {
    pub(super) field: &'a Field<'a>,
    /// The bend on a grid of samples, u-major.
    pub(super) bends: Vec<Bend>,
    pub(super) limits: &'a Limits,
    pub(super) correction: Correction,
    /// Whether the piece is proved as a plane, where steps need not follow how
    /// the parameters run.
    pub(super) flat: bool,
    /// Whether rows end in samples of the sides.
    pub(super) coursed: bool,
}

impl<'a> Ground<'a> {
    /// Ground no layout has been made on yet.
    pub(super) fn new(field: &'a Field<'a>, limits: &'a Limits, flat: bool, coursed: bool) -> Self {
        let samples = || 0..=SAMPLES;
        let places =
            samples().flat_map(|i| samples().map(move |j| [ratio(i, SAMPLES), ratio(j, SAMPLES)]));
        Self {
            field,
            bends: places.map(|place| field.at(place)).collect(),
            limits,
            correction: Correction::none(),
            flat,
            coursed,
        }
    }

    pub(super) fn step(&self, bend: &Bend, along: Along, place: [f64; 2]) -> Step {
        let correction = self.correction.at(place);
        Step::new(bend, along, self, correction)
    }
}

#[cfg(test)]
mod pole_tests {
    use super::*;

    /// At a pole the rate at which normals turn was rounding divided by
    /// rounding: more memory was asked for than there is in the world.
    #[test]
    fn normals_turn_no_faster_at_a_pole_than_beside_it() {
        let radius = 500.0;
        let side = |x: f64, y: f64| [Vector::new(x, 0.0, 0.0), Vector::new(0.0, y, 0.0)];
        let bend = |first: [Vector; 2], l: f64| Bend {
            normal: Vector::new(0.0, 0.0, 1.0),
            first,
            second: [Vector::zeros(); 3],
            form: [l, 0.0, radius],
        };
        // Beside the pole, and at it, where rounding is left of S_u and of L.
        let beside = bend(side(0.1, radius), 0.01 / radius);
        let at = bend(side(1e-14, radius), 1e-13);
        for (direction, most) in [([1.0, 0.0], 1e-3), ([0.0, 1.0], 1.001)] {
            assert!(turn_rate(&beside, direction) <= most);
            assert!(turn_rate(&at, direction) <= most);
        }
    }
}
