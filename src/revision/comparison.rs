//! Two revisions of a set, patch by patch.

use std::collections::BTreeMap;

use rayon::prelude::*;
use thiserror::Error;

use super::course::Course;
use super::distance::{Distance, between};
use super::seams::{SeamChange, seam_changes};
use super::sheet::Sheet;
use crate::patch_set::{Patch, PatchId, PatchSet};
use crate::scalar::{LengthUnit, Tolerance, ToleranceError};
use crate::topology::TopologyError;

/// Distances below this fraction of the sets' size are rounding.
const FLOOR: f64 = 1e-9;

/// Why two sets cannot be compared.
#[derive(Debug, Error)]
pub enum RevisionError {
    /// The units differ.
    #[error("the old set is in {old}, the new one in {new}; both must have one unit")]
    Unit {
        /// The old set's unit.
        old: LengthUnit,
        /// The new set's unit.
        new: LengthUnit,
    },
    /// The sets have no size.
    #[error(transparent)]
    Tolerance(#[from] ToleranceError),
    /// The edges of one of them do not make a topology.
    #[error("{which} set: {error}")]
    Topology {
        /// `old` or `new`.
        which: &'static str,
        /// Why.
        error: TopologyError,
    },
}

/// How a patch is written down.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Description {
    /// Its kind, as in the file.
    pub kind: &'static str,
    /// The largest degrees of its pieces along u and v.
    pub degree: (usize, usize),
    /// Its pieces along u and v.
    pub pieces: (usize, usize),
}

/// How a patch stands.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum PatchState {
    /// Proved to be within the tolerance of what it was.
    Same,
    /// No place is beyond the tolerance, but that is not proved.
    Undecided,
    /// Beyond the tolerance.
    Moved,
}

/// A patch that both revisions have.
#[derive(Debug, Clone, PartialEq)]
pub struct PatchChange {
    /// Its name.
    pub name: String,
    /// How it stands.
    pub state: PatchState,
    /// The distance of the two surfaces.
    pub distance: Distance,
    /// How it was, and is, written down.
    pub description: [Description; 2],
    /// How its parameters run in the new revision.
    pub course: Course,
    /// Whether its outward normal points the other way.
    pub turned_over: bool,
}

impl PatchChange {
    /// Whether kind, degree or pieces are others, or u and v run otherwise.
    #[must_use]
    pub fn is_described_otherwise(&self) -> bool {
        self.description[0] != self.description[1] || self.course != Course::default()
    }
}

/// What changed.
#[derive(Debug, Clone)]
pub struct Comparison {
    /// Beyond this a patch has moved, in the sets' unit.
    pub tolerance: Tolerance,
    /// Whether the tolerance is that of rounding, because none was given.
    pub is_rounding: bool,
    /// Patches of both, the farthest moved first, then by name.
    pub patches: Vec<PatchChange>,
    /// Patches only the new set has, by name.
    pub added: Vec<String>,
    /// Patches only the old set has, by name.
    pub removed: Vec<String>,
    /// Seams that stand otherwise, the worse ones first.
    pub seams: Vec<SeamChange>,
}

impl Comparison {
    /// Compares two revisions. Without a tolerance what moved by more than
    /// rounding (1e-9 of the size) has moved.
    ///
    /// # Errors
    /// [`RevisionError`] where they cannot be compared.
    pub fn of(
        old: &PatchSet,
        new: &PatchSet,
        tolerance: Option<Tolerance>,
    ) -> Result<Self, RevisionError> {
        if old.unit() != new.unit() {
            return Err(RevisionError::Unit {
                old: old.unit(),
                new: new.unit(),
            });
        }
        let floor = FLOOR * old.cuboid().diagonal().max(new.cuboid().diagonal());
        let allowed = match tolerance {
            Some(tolerance) => tolerance,
            None => Tolerance::new(floor)?,
        };
        let by_name = |set: &PatchSet| -> BTreeMap<String, PatchId> {
            let named = set.patches().iter().enumerate();
            named
                .map(|(k, patch)| (patch.name.clone(), PatchId::new(k)))
                .collect()
        };
        let (before, after) = (by_name(old), by_name(new));
        let both: Vec<(&String, [PatchId; 2])> = before
            .iter()
            .filter_map(|(name, p)| Some((name, [*p, *after.get(name)?])))
            .collect();
        let mut patches: Vec<PatchChange> = both
            .par_iter()
            .map(|(name, [p, q])| {
                let patches = [&old.patches()[p.index()], &new.patches()[q.index()]];
                change(name, [old, new], patches, floor, allowed)
            })
            .collect();
        let seams = seam_changes([old, new], &patches)?;
        patches.sort_by(|a, b| {
            let far = |c: &PatchChange| c.distance.bracket.attained;
            let by_distance = far(b).total_cmp(&far(a));
            b.state
                .cmp(&a.state)
                .then(if a.state == PatchState::Same {
                    std::cmp::Ordering::Equal
                } else {
                    by_distance
                })
                .then_with(|| a.name.cmp(&b.name))
        });
        let lacking = |of: &BTreeMap<String, PatchId>, other: &BTreeMap<String, PatchId>| {
            let names = of.keys().filter(|name| !other.contains_key(*name));
            names.cloned().collect::<Vec<_>>()
        };
        Ok(Self {
            tolerance: allowed,
            is_rounding: tolerance.is_none(),
            added: lacking(&after, &before),
            removed: lacking(&before, &after),
            patches,
            seams,
        })
    }

    /// Whether anything beyond the tolerance changed: a patch that moved, came
    /// or went, or is not proved to be the same; a seam whose verdict is
    /// another.
    #[must_use]
    pub fn has_changes(&self) -> bool {
        !self.added.is_empty()
            || !self.removed.is_empty()
            || self.patches.iter().any(|p| p.state != PatchState::Same)
            || self.seams.iter().any(SeamChange::changes_verdict)
    }
}

fn change(
    name: &str,
    sets: [&PatchSet; 2],
    patches: [&Patch; 2],
    floor: f64,
    tolerance: Tolerance,
) -> PatchChange {
    let [old, new] = [0, 1].map(|k| Sheet::new(sets[k], patches[k]));
    let course = Course::between(&old, &new);
    let distance = between(&old, &new, course, floor);
    let figure = distance.bracket;
    PatchChange {
        name: name.to_owned(),
        state: if figure.proved <= tolerance.get() {
            PatchState::Same
        } else if figure.attained <= tolerance.get() {
            PatchState::Undecided
        } else {
            PatchState::Moved
        },
        distance,
        description: [0, 1].map(|k| description(sets[k], patches[k])),
        course,
        turned_over: course.turns_over() != (patches[0].flipped != patches[1].flipped),
    }
}

fn description(set: &PatchSet, patch: &Patch) -> Description {
    let pieces = set.pieces()[patch.pieces.clone()].iter();
    let degree = pieces.fold((0, 0), |most: (usize, usize), piece| {
        let (m, n) = piece.surface.degree();
        (most.0.max(m), most.1.max(n))
    });
    Description {
        kind: patch.kind,
        degree,
        pieces: (patch.breaks_u.len() - 1, patch.breaks_v.len() - 1),
    }
}
