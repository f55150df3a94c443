//! A mended set, and what was done to it.

use std::fmt;
use std::ops::Range;

use thiserror::Error;

use super::net::Nets;
use super::plan::{Plan, is_touch};
use crate::continuity::{End, Survey, SurveyedSeam, Verdict};
use crate::patch_set::{Faults, Locator, PatchSet, SetFile};
use crate::scalar::{Point, Tolerance, Vector};
use crate::topology::{Topology, TopologyError};

/// Why a set cannot be mended.
#[derive(Debug, Error)]
pub enum MendingError {
    /// The text is no set.
    #[error("{0}")]
    Faults(Faults),
    /// The edges do not make a topology, before or after.
    #[error(transparent)]
    Topology(#[from] TopologyError),
    /// A seam that was as demanded would not be any more.
    #[error(
        "{between} | {and}: would not be as demanded any more; nothing is mended, try a smaller limit"
    )]
    Spoilt {
        /// A patch and its edge.
        between: String,
        /// The other patch and its edge.
        and: String,
    },
}

/// Why a seam is left alone.
#[derive(Debug, Clone, PartialEq)]
pub enum Reason {
    /// Its patches are of kinds without a control net.
    NoNet,
    /// Its edges lie beyond the search distance.
    Apart,
    /// Its angle is that of a crease.
    Crease,
    /// Steps of curvature are not mended.
    Curvature,
    /// A point would have to move by this, beyond the limit.
    Limit(f64),
    /// The conditions at a corner cannot be met at once.
    Corner {
        /// Where.
        at: Point,
        /// The patches that meet there.
        patches: Vec<String>,
    },
    /// The conditions along it cannot be met.
    Conditions {
        /// Where they are missed most.
        at: Point,
    },
}

impl fmt::Display for Reason {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let place = |at: &Point| format!("({:.3}, {:.3}, {:.3})", at.x, at.y, at.z);
        match self {
            Self::NoNet => f.write_str("its patches have no control net"),
            Self::Apart => f.write_str("its edges lie beyond the search distance"),
            Self::Crease => f.write_str("its angle is that of a crease"),
            Self::Curvature => f.write_str("steps of curvature are not mended"),
            Self::Limit(by) => write!(f, "a point would move by {by:.4}, beyond the limit"),
            Self::Corner { at, patches } => write!(
                f,
                "the conditions at the corner {} of {} cannot be met at once",
                place(at),
                patches.join(", ")
            ),
            Self::Conditions { at } => {
                write!(f, "the conditions at {} cannot be met", place(at))
            }
        }
    }
}

/// How far the control points of a patch moved.
#[derive(Debug, Clone, PartialEq)]
pub struct PatchMove {
    /// The patch.
    pub patch: String,
    /// How many of its control points moved.
    pub points: usize,
    /// The largest move: a proved bound of how far the surface moved.
    pub largest: f64,
}

/// A seam before and after.
#[derive(Debug, Clone)]
pub struct MendedSeam {
    /// Before.
    pub before: SurveyedSeam,
    /// After.
    pub after: SurveyedSeam,
}

/// The outcome.
#[derive(Debug)]
pub struct Mending {
    /// The text with the moved points; the same text where none moved.
    pub text: String,
    /// The mended set.
    pub set: PatchSet,
    /// Patches with moved points, the largest move first.
    pub moves: Vec<PatchMove>,
    /// Points of the file that moved.
    pub points: usize,
    /// Seams that were not as demanded and now are, worst first.
    pub mended: Vec<MendedSeam>,
    /// Seams that are left alone, and why, worst first.
    pub left: Vec<(SurveyedSeam, Reason)>,
    /// What the mended set's own seam check finds.
    pub findings: usize,
}

impl Mending {
    /// Mends the seams of a set that are not as demanded by moving control
    /// points by no more than `limit`.
    ///
    /// # Errors
    /// [`MendingError`] where nothing can be done soundly.
    pub fn of(text: &str, source_name: &str, limit: Tolerance) -> Result<Self, MendingError> {
        let bare = text.strip_prefix('\u{feff}').unwrap_or(text);
        let mark = &text[..text.len() - bare.len()];
        let file = SetFile::from_ron(bare, source_name).map_err(MendingError::Faults)?;
        let read = |text: &str| {
            let reading = PatchSet::from_ron(text, source_name).map_err(MendingError::Faults)?;
            Ok::<PatchSet, MendingError>(reading.set)
        };
        let set = read(bare)?;
        let topology = Topology::build(&set)?;
        let survey = Survey::of(&set, &topology);
        let mut nets = Nets::new(&file, &set);
        let mut plan = Plan::new(&set, &topology, &survey, &nets);
        let moves = plan.carry_out(&mut nets, limit.get());
        let new = rewritten(bare, &nets, &moves);
        let after = read(&new)?;
        let again = Survey::of(&after, &Topology::build(&after)?);
        let now = |seam: &SurveyedSeam| {
            let found = again.seams.iter();
            found
                .clone()
                .find(|s| (s.between, s.and) == (seam.between, seam.and))
        };
        for seam in plan.seams() {
            let standing = now(seam).map_or(Verdict::Fault, |s| s.verdict);
            let named = |(patch, edge): End| {
                let patch = &set.patches()[patch.index()];
                format!("{} {}", patch.name, edge.label(patch))
            };
            let spoilt = seam.verdict == Verdict::Met && standing != Verdict::Met;
            if spoilt && !is_touch(&set, seam) {
                return Err(MendingError::Spoilt {
                    between: named(seam.between),
                    and: named(seam.and),
                });
            }
        }
        let seams = plan.seams();
        let mut mended = Vec::new();
        let mut left: Vec<(usize, Reason)> = plan.left.clone().into_iter().collect();
        for k in plan.mended() {
            match now(&seams[k]) {
                Some(after) if after.verdict == Verdict::Met => mended.push(MendedSeam {
                    before: seams[k].clone(),
                    after: after.clone(),
                }),
                other => {
                    let at = other.unwrap_or(&seams[k]).figure().at.point;
                    left.push((k, Reason::Conditions { at }));
                }
            }
        }
        left.sort_by_key(|(k, _)| *k);
        Ok(Self {
            text: format!("{mark}{new}"),
            moves: by_patch(&set, &nets, &moves),
            points: moves.iter().filter(|m| m.norm() > 0.0).count(),
            mended,
            left: left
                .into_iter()
                .map(|(k, reason)| (seams[k].clone(), reason))
                .collect(),
            findings: again.findings(),
            set: after,
        })
    }

    /// The largest move of a control point.
    #[must_use]
    pub fn largest(&self) -> f64 {
        self.moves.iter().map(|m| m.largest).fold(0.0, f64::max)
    }
}

fn by_patch(set: &PatchSet, nets: &Nets, moves: &[Vector]) -> Vec<PatchMove> {
    let mut found: Vec<PatchMove> = Vec::new();
    for (patch, net) in set.patches().iter().zip(&nets.list) {
        let Some(net) = net else { continue };
        let own = net.sources.iter().map(|s| moves[*s].norm());
        let largest = own.clone().fold(0.0, f64::max);
        if largest > 0.0 {
            found.push(PatchMove {
                patch: patch.name.clone(),
                points: own.filter(|m| *m > 0.0).count(),
                // Placing and printing may round.
                largest: largest * (1.0 + 1e-12),
            });
        }
    }
    found.sort_by(|a, b| {
        b.largest
            .total_cmp(&a.largest)
            .then_with(|| a.patch.cmp(&b.patch))
    });
    found
}

/// The text with every moved point written anew, all else as it was.
fn rewritten(text: &str, nets: &Nets, moves: &[Vector]) -> String {
    let moved = nets
        .written
        .iter()
        .zip(moves)
        .filter(|(_, by)| by.norm() > 0.0);
    let locator = Locator::new(text);
    let mut edits: Vec<(Range<usize>, Point)> = moved
        .map(|((place, point), by)| (locator.locate(place), point + by))
        .collect();
    edits.sort_by_key(|(range, _)| range.start);
    let mut new = String::with_capacity(text.len() + 16 * edits.len());
    let mut at = 0;
    for (range, p) in edits {
        new.push_str(&text[at..range.start]);
        new.push_str(&format!("({}, {}, {})", p.x, p.y, p.z));
        at = range.end;
    }
    new.push_str(&text[at..]);
    new
}
