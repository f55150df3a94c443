//! One seam: figures, demand, finding, verdict.

use super::angle::Meeting;
use super::failing::{Failing, failing};
use super::figure::{End, Figure, Finding, Place, Verdict};
use super::matched::Matched;
use super::place::place;
use super::standing::{Standing, judge};
use crate::patch_set::{Demand, DemandSource, PatchSet, SeamLimits};
use crate::scalar::Bracket;
use crate::topology::Contact;

/// Curvatures below this, in 1/mm, have no ratio: a radius of a kilometre.
pub const RATIO_FLOOR_PER_MM: f64 = 1e-6;

/// A step of curvature below this over the set's size is as good as none.
pub(super) const CURVATURE_FLOOR: f64 = 1e-6;

/// One seam: all that two patch edges have in common.
#[derive(Debug, Clone)]
pub struct SurveyedSeam {
    /// The edge of lesser patch name and side.
    pub between: End,
    /// The other edge.
    pub and: End,
    /// Length of the common stretch along the first edge (quadrature).
    pub length: f64,
    /// Whether the mesh is joined all along.
    pub joined: bool,
    /// Whether that is so only because wider gaps were to be closed.
    pub bridged: bool,
    /// Whether the stated normals point to one side of the joined surface.
    pub normals_agree: bool,
    /// The gap: Hausdorff distance of the common stretches.
    pub gap: Figure,
    /// The angle of the tangent planes in degrees; `None` for edges apart.
    pub angle_deg: Option<Figure>,
    /// The step of normal curvature in 1/mm; its bracket's upper end is infinite
    /// where the curvature grows without limit.
    pub curvature_per_mm: Option<Figure>,
    /// Both normal curvatures there, in 1/mm, positive where the surface bends
    /// towards the first patch's outward normal.
    pub curvatures_per_mm: Option<[f64; 2]>,
    /// Whether the determinant's coefficients prove the tangent planes equal
    /// all along (see [`super::Angle::by_determinant`]).
    pub by_determinant: bool,
    /// What is demanded.
    pub demand: Demand,
    /// How the demand came to be.
    pub demand_source: DemandSource,
    /// What gap and angle are held against.
    pub limits: SeamLimits,
    /// What the seam is.
    pub finding: Finding,
    /// Whether that is as demanded.
    pub verdict: Verdict,
    /// The figure that decides in units of its tolerance.
    pub severity: f64,
    /// Where the figure that decides is beyond its tolerance; empty unless the
    /// verdict is a fault.
    pub failing: Vec<Failing>,
}

impl SurveyedSeam {
    /// The second curvature over the first where the step is largest; `None`
    /// unless both are at least [`RATIO_FLOOR_PER_MM`].
    #[must_use]
    pub fn curvature_ratio(&self) -> Option<f64> {
        let [p, q] = self.curvatures_per_mm?;
        (p.abs().min(q.abs()) >= RATIO_FLOOR_PER_MM).then(|| q / p)
    }

    /// The figure a fault is about.
    #[must_use]
    pub fn figure(&self) -> &Figure {
        match (self.finding, &self.angle_deg, &self.curvature_per_mm) {
            (Finding::Curvature, _, Some(step)) => step,
            (Finding::Gap | Finding::Apart | Finding::Open, _, _) | (_, None, _) => &self.gap,
            (_, Some(angle), _) => angle,
        }
    }
}

/// All figures of the contacts between two patch edges, and the verdict.
pub(super) fn survey(set: &PatchSet, group: &[(End, End, &Contact)], floor: f64) -> SurveyedSeam {
    let (between, and, _) = group[0];
    let mut length = 0.0;
    let (mut gap, mut angle, mut curvature) = (None, None, None);
    let mut curvatures_per_mm: Option<[f64; 2]> = None;
    let (mut normals_agree, mut by_determinant) = (true, true);
    for (_, _, contact) in group {
        let meeting = Meeting::of(contact);
        let matched = Matched::new(&meeting, set);
        length += super::place::length(set, contact.edges[0], contact.first);
        let foot = matched.foot_of_edge(contact.gap_at);
        raise(&mut gap, contact.gap, || {
            place(set, contact.edges, [contact.gap_at, foot])
        });
        let found = meeting.angle_of(set, &matched);
        by_determinant &= found.by_determinant;
        raise(&mut angle, found.bracket, || {
            place(set, contact.edges, found.at)
        });
        if let Some(step) = meeting.curvature_of(set, &matched, floor) {
            let higher = raise(&mut curvature, step.bracket, || {
                place(set, contact.edges, step.at)
            });
            if higher {
                curvatures_per_mm = Some(step.curvatures_per_mm);
            }
        }
        normals_agree &= meeting.normals_agree(set);
    }
    let gap = gap.expect("a group has a contact");
    let joined = group.iter().all(|(_, _, c)| c.joined);
    let bridged = group.iter().any(|(_, _, c)| c.bridged);
    let sides = [between, and].map(|end| (end.0, end.1.side()));
    let stated = match sides {
        [(a, Some(p)), (b, Some(q))] => set.statement((a, p), (b, q)),
        _ => None,
    };
    let limits = set.seam_limits(sides[0], sides[1]);
    let Standing {
        demand,
        finding,
        verdict,
        severity,
    } = judge(
        set.tolerances(),
        &limits,
        stated.map(|(demand, _)| demand),
        joined && !bridged,
        gap.bracket,
        angle.map_or(Bracket::ZERO, |a: Figure| a.bracket),
        curvature.map(|c: Figure| c.bracket),
    );
    let failing = if verdict == Verdict::Fault {
        let contacts: Vec<&Contact> = group.iter().map(|(_, _, c)| *c).collect();
        failing(set, &contacts, finding, &limits)
    } else {
        Vec::new()
    };
    SurveyedSeam {
        between,
        and,
        length,
        joined,
        bridged,
        normals_agree,
        gap,
        angle_deg: angle,
        curvature_per_mm: curvature,
        curvatures_per_mm,
        by_determinant,
        demand,
        demand_source: stated.map_or(DemandSource::Inferred, |(_, source)| source),
        limits,
        finding,
        verdict,
        severity,
        failing,
    }
}

/// Raises what is held to the larger; whether its place is the new one.
fn raise(held: &mut Option<Figure>, found: Bracket, at: impl Fn() -> Place) -> bool {
    if let Some(figure) = held
        && figure.bracket.attained >= found.attained
    {
        figure.bracket = figure.bracket.max(found);
        return false;
    }
    *held = Some(Figure {
        bracket: held.map_or(found, |figure| figure.bracket.max(found)),
        at: at(),
    });
    true
}
