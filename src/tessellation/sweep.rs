//! One pass over the triangles of a piece without weights or poles: the proof
//! most of them need.
//!
//! The bounds are quick ones (`quick`). The verdict is that of `verdict`, with one tilt for all rings of the piece:
//! neighbours are within d of each other, a vertex has at most k triangles, so
//! all that share a corner are within floor(k / 2) d. If then
//!
//! ```text
//! height + (2 sideways + height tan) tan <= chord
//! ```
//!
//! for a triangle away from the border and for its whole ring, both directions
//! are proved. At the border a fan is not closed, so k - 1 steps count there, and
//! b, by how much S may stand beyond a border line, joins as in `verdict`. Along
//! the unit vector away from a line on which or behind which the corners stand,
//! by d_k, and with the error of interpolation -(1/2) sum B_ij l_i l_j + rest,
//! B_ij the second derivative along an edge,
//!
//! ```text
//! b <= max(0, -B_ij . away) / 8 + rest    for an edge ij on the line,
//!      rest                               for a line that T meets in a corner,
//! ```
//!
//! where "on" is less than max(0, -B . away) / 2 off: a corner farther off makes up
//! for its own share of the sum by d_k l_k. What all this cannot prove
//! is left to closer bounds.

use super::border::Border;
use super::field::Field;
use super::fill::Proved;
use super::layout::{INNER, Layout};
use super::quick::{Bound, Quick, ROUNDED_UP, larger, lesser};
use super::triangulation::BORDER;
use super::verdict::LARGEST_TAN;
use super::work::index;
use crate::sampling::Limits;
use crate::scalar::Vector;

/// Where triangles and surface are nearer to one direction than this, as a cosine
/// (41 degrees), they are within a right angle of each other.
const UPRIGHT: f64 = 0.755;

/// What a pass has found.
#[derive(Debug)]
pub(super) struct Sweep {
    /// Figures of the triangles; those of failing ones mean nothing.
    pub(super) figures: Vec<Proved>,
    /// Triangles that are not proved, ascending.
    pub(super) failed: Vec<u32>,
    /// Whether all triangles and the surface (by `field`) look about the same
    /// way: then none faces inwards.
    pub(super) upright: bool,
    /// The triangles with the largest heights, and where in them these are.
    pub(super) highest: Vec<(u32, [f64; 3])>,
}

impl Quick {
    /// Proves what it can. `off` is the distance of a vertex from the piece,
    /// `slack` what rounding adds to every figure.
    pub(super) fn sweep(
        &self,
        layout: &Layout,
        off: &[f64],
        field: &Field,
        limits: &Limits,
        slack: f64,
    ) -> Sweep {
        let mesh = &layout.triangulation;
        let mut bounds = Vec::with_capacity(mesh.triangles.len());
        for corners in &mesh.triangles {
            let places = corners.map(|v| mesh.places[v as usize]);
            let points = corners.map(|v| layout.points[v as usize]);
            let [a, b, c] = corners.map(|v| off[v as usize]);
            bounds.push(self.bound(places, points, larger(a, larger(b, c)) + slack));
        }
        let chord = limits.chord;
        let mut figures: Vec<Proved> = bounds.iter().map(Bound::alone).collect();
        let mut failed = Vec::new();
        if figures.iter().any(|figure| figure.largest() > chord) {
            self.by_rings(layout, &bounds, chord, &mut figures, &mut failed);
        }
        let highest = highest(&bounds).into_iter().map(|t| {
            let places = mesh.triangles[t as usize].map(|v| mesh.places[v as usize]);
            (t, self.peak(places, &bounds[t as usize].normal))
        });
        let highest = highest.collect();
        let upright = |normal: &Vector| normal.dot(&self.normal) > UPRIGHT;
        Sweep {
            upright: bounds.iter().all(|bound| upright(&bound.normal))
                && field.normals().all(upright),
            figures,
            failed,
            highest,
        }
    }

    /// Proves triangles that do not do alone, and finds those that fail.
    fn by_rings(
        &self,
        layout: &Layout,
        bounds: &[Bound],
        chord: f64,
        figures: &mut [Proved],
        failed: &mut Vec<u32>,
    ) {
        let mesh = &layout.triangulation;
        let at_border = |v: u32| layout.vertices[v as usize] != INNER;
        let tan = tilt(layout, bounds).unwrap_or(f64::INFINITY);
        // Vertices beside a triangle that reaches too far.
        let mut bad = vec![false; layout.vertices.len()];
        let mut most = 0.0_f64;
        for (corners, bound) in mesh.triangles.iter().zip(bounds) {
            let mut reach = bound.ringed(tan);
            if corners.iter().any(|&v| at_border(v)) {
                reach = reach.max(bound.edges);
            }
            if reach <= chord {
                most = most.max(reach);
            } else {
                corners.iter().for_each(|&v| bad[v as usize] = true);
            }
        }
        let mut border = None;
        for (t, &corners) in mesh.triangles.iter().enumerate() {
            if figures[t].largest() <= chord {
                continue;
            }
            let bound = &bounds[t];
            let mut height = bound.height;
            let mut good = !corners.iter().any(|&v| bad[v as usize]);
            if good && corners.into_iter().any(at_border) {
                let border = border.get_or_insert_with(|| Border::new(layout));
                let places = corners.map(|v| mesh.places[v as usize]);
                let bends = self.bends(places);
                match border.beyond(layout, corners, bound, &bends) {
                    Some(beyond) => height = height.hypot(beyond),
                    None => good = false,
                }
            }
            let to_mesh = (height + bound.sideways * tan) * ROUNDED_UP;
            if good && to_mesh <= chord {
                figures[t] = Proved {
                    to_mesh,
                    to_surface: most,
                };
            } else {
                failed.push(index(t));
            }
        }
    }
}

/// The tangent of the largest tilt between triangles that share a corner;
/// `None` where rings prove nothing.
fn tilt(layout: &Layout, bounds: &[Bound]) -> Option<f64> {
    let mesh = &layout.triangulation;
    let mut fans = vec![0_u32; layout.points.len()];
    let (mut cosine, mut altitude, mut reach) = (1.0_f64, f64::INFINITY, 0.0_f64);
    for (t, corners) in mesh.triangles.iter().enumerate() {
        for (i, &v) in corners.iter().enumerate() {
            fans[v as usize] += 1;
            let other = mesh.neighbours[t][i];
            if other != BORDER {
                cosine = lesser(cosine, bounds[t].normal.dot(&bounds[other as usize].normal));
            }
        }
        altitude = lesser(altitude, bounds[t].altitude_squared);
        reach = larger(reach, larger(bounds[t].sideways, bounds[t].edges));
    }
    let steps = |(v, fan): (usize, &u32)| match layout.vertices[v] {
        INNER => fan / 2,
        _ => fan.saturating_sub(1),
    };
    let steps = fans.iter().enumerate().map(steps).max().unwrap_or(0);
    // A rounding of the cosine counts as an angle of 1e-7.
    let step = cosine.clamp(-1.0, 1.0).acos() + 1e-7;
    let tan = (f64::from(steps) * step).min(1.5).tan();
    (tan <= LARGEST_TAN && 4.0 * reach * reach <= altitude).then_some(tan)
}

/// Triangles looked at for true deviations.
const LOOKED_AT: usize = 16;

fn highest(bounds: &[Bound]) -> Vec<u32> {
    let mut all: Vec<u32> = (0..bounds.len()).map(index).collect();
    if all.len() > LOOKED_AT {
        let height = |t: &u32| bounds[*t as usize].height;
        let order = |a: &u32, b: &u32| height(b).total_cmp(&height(a)).then(a.cmp(b));
        all.select_nth_unstable_by(LOOKED_AT, order);
        all.truncate(LOOKED_AT);
        all.sort_unstable();
    }
    all
}
