//! The stretches of a seam that fail.
//!
//! The figure is taken at 129 places a contact and where it is largest, and the
//! ends of what is beyond the tolerance are found by halving: sampled, so a
//! stretch far shorter than a hundredth may be missed beside the worst one.

use super::angle::{Meeting, Sides};
use super::curvature::Bends;
use super::figure::{Finding, Place};
use super::matched::Matched;
use super::place::{length, place};
use crate::patch_set::{PatchSet, SeamLimits};
use crate::topology::Contact;

/// Steps along a contact.
const STEPS: u8 = 128;

/// A stretch along which a figure is beyond its tolerance.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Failing {
    /// Where it begins.
    pub from: Place,
    /// Where it ends.
    pub to: Place,
    /// Its length along the first edge (quadrature), in the set's unit.
    pub length: f64,
}

/// The failing stretches of a seam, along its first edge.
pub(super) fn failing(
    set: &PatchSet,
    contacts: &[&Contact],
    finding: Finding,
    limits: &SeamLimits,
) -> Vec<Failing> {
    let mut found: Vec<Failing> = Vec::new();
    for contact in contacts {
        let meeting = Meeting::of(contact);
        let matched = Matched::new(&meeting, set);
        let (limit, worst, value): (f64, f64, Box<dyn Fn(f64) -> f64>);
        match finding {
            Finding::Break | Finding::Crease => {
                let angle = meeting.angle_of(set, &matched);
                let sides = Sides::new(&meeting, set, &matched);
                limit = limits.tangent_deg.value.to_radians();
                worst = matched.on_curve(angle.at[0]);
                value = Box::new(move |s| sides.angle_at(s, None).map_or(0.0, |found| found.0));
            }
            Finding::Curvature => {
                let bends = Bends::new(&meeting, set, &matched);
                let per_mm = 1.0 / set.unit().in_mm();
                let tolerance = set.tolerances().curvature_per_mm;
                limit = tolerance.map_or(f64::INFINITY, |t| t.get()) / per_mm;
                let step = meeting.curvature_of(set, &matched, 0.01 * limit);
                worst = step.map_or(0.5, |step| matched.on_curve(step.at[0]));
                value = Box::new(move |s| bends.at(s, None).map_or(0.0, |found| found.0));
            }
            Finding::Gap => {
                limit = limits.gap.value;
                worst = matched.on_curve(contact.gap_at);
                value = Box::new(|s| matched.distance(s).0);
            }
            Finding::Tangent | Finding::Open | Finding::Apart => return found,
        }
        let mut places: Vec<f64> = (0..=STEPS)
            .map(|k| f64::from(k) / f64::from(STEPS))
            .collect();
        places.push(worst.clamp(0.0, 1.0));
        places.sort_by(f64::total_cmp);
        let beyond: Vec<bool> = places.iter().map(|&s| value(s) > limit).collect();
        let mut k = 0;
        while k < places.len() {
            if !beyond[k] {
                k += 1;
                continue;
            }
            let start = k;
            while k < places.len() && beyond[k] {
                k += 1;
            }
            let from = match start.checked_sub(1) {
                Some(before) => edge_of([places[before], places[start]], &value, limit),
                None => 0.0,
            };
            let to = match places.get(k) {
                Some(&after) => edge_of([after, places[k - 1]], &value, limit),
                None => 1.0,
            };
            let ends = [from, to].map(|s| matched.on_edges([s, matched.foot(s, None)]));
            let stretch = Failing {
                from: place(set, contact.edges, ends[0]),
                to: place(set, contact.edges, ends[1]),
                length: length(set, contact.edges[0], [ends[0][0], ends[1][0]]),
            };
            extend(&mut found, stretch, limits.gap.value);
        }
    }
    found
}

/// The place between one within the limit and one beyond it.
fn edge_of([mut within, mut beyond]: [f64; 2], value: &dyn Fn(f64) -> f64, limit: f64) -> f64 {
    for _ in 0..40 {
        let middle = within.midpoint(beyond);
        if value(middle) > limit {
            beyond = middle;
        } else {
            within = middle;
        }
    }
    beyond
}

/// Adds a stretch, or lengthens the last one where it goes on.
fn extend(found: &mut Vec<Failing>, next: Failing, near: f64) {
    match found.last_mut() {
        Some(last) if (last.to.point - next.from.point).norm() <= near => {
            last.to = next.to;
            last.length += next.length;
        }
        _ => found.push(next),
    }
}
