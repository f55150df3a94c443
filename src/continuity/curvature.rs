//! The difference of normal curvature across a seam, bracketed.
//!
//! Taken along n x t, t the seam's tangent: once the tangent planes agree, one
//! direction that is not the seam's own settles all (the linkage curve theorem,
//! Pegna and Wolter 1992). Both curvatures are counted towards the first
//! patch's outward normal. Over a part of the seam each is a polynomial with a
//! proved remainder ([`super::bend`], [`super::taylor`]), the second one at the
//! place nearest to the first's ([`super::follow`]); the difference of the two
//! is bounded by its Bernstein coefficients. The part with the largest bound is
//! halved until the bound meets what is attained.

use super::angle::Meeting;
use super::bend::Bend;
use super::follow::Follow;
use super::matched::Matched;
use crate::patch_set::PatchSet;
use crate::scalar::Bracket;

/// Parts after which a bracket stays as wide as it is.
const PARTS: usize = 64;

/// A bracket stops being narrowed at this ratio.
const RATIO: f64 = 1.015;

/// The largest difference, and where.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CurvatureStep {
    /// |k1 - k2| in 1/mm; `proved` is infinite where nothing could be proved,
    /// as at a tip where the curvature grows without limit.
    pub bracket: Bracket,
    /// Both normal curvatures where it is attained, in 1/mm, positive where the
    /// surface bends towards the first patch's outward normal.
    pub curvatures_per_mm: [f64; 2],
    /// The parameters on both edges.
    pub at: [f64; 2],
}

/// Both sides of a meeting.
pub(super) struct Bends<'a> {
    bends: [Bend; 2],
    matched: &'a Matched,
}

struct Part {
    s: [f64; 2],
    t: [f64; 2],
    upper: f64,
}

/// Values at one place: difference, both curvatures, both parameters.
pub(super) type Values = (f64, [f64; 2], [f64; 2]);

impl Meeting {
    /// The largest step of normal curvature; `None` where no place has a
    /// tangent plane and a curvature on both sides. Differences below `floor`,
    /// in 1/length of the set's unit, are not told from zero.
    #[must_use]
    pub fn curvature_step(&self, set: &PatchSet, floor: f64) -> Option<CurvatureStep> {
        self.curvature_of(set, &Matched::new(self, set), floor)
    }

    pub(super) fn curvature_of(
        &self,
        set: &PatchSet,
        matched: &Matched,
        floor: f64,
    ) -> Option<CurvatureStep> {
        let found = Bends::new(self, set, matched).bracket(floor)?;
        let per_mm = 1.0 / set.unit().in_mm();
        Some(CurvatureStep {
            bracket: Bracket {
                proved: found.bracket.proved * per_mm,
                attained: found.bracket.attained * per_mm,
            },
            curvatures_per_mm: found.curvatures_per_mm.map(|k| k * per_mm),
            at: found.at,
        })
    }
}

impl<'a> Bends<'a> {
    pub(super) fn new(meeting: &Meeting, set: &PatchSet, matched: &'a Matched) -> Self {
        let ranges = [meeting.first, meeting.second];
        let agree = if meeting.normals_agree(set) {
            1.0
        } else {
            -1.0
        };
        let bend = |k: usize| {
            let edge = meeting.edges[k];
            let surface = &set.pieces()[edge.piece().index()].surface;
            let flipped = set.patch_of(edge.piece()).flipped;
            let outward = if flipped { -1.0 } else { 1.0 } * if k == 0 { 1.0 } else { agree };
            let bend = Bend::new(surface, edge.side(), &matched.origin, outward);
            bend.restrict(ranges[k]).reparametrised(matched.lambda[k])
        };
        Self {
            bends: [bend(0), bend(1)],
            matched,
        }
    }

    /// The values at place `s` of the first edge, in the set's unit.
    pub(super) fn at(&self, s: f64, guess: Option<f64>) -> Option<Values> {
        let t = self.matched.foot(s, guess);
        let both = [self.bends[0].value(s)?, self.bends[1].value(t)?];
        Some(((both[0] - both[1]).abs(), both, [s, t]))
    }

    /// The bound over a part, and the place where the difference seems largest.
    fn bound(&self, follow: Option<&Follow>, s: [f64; 2], t: [f64; 2]) -> (f64, f64) {
        let models = || {
            let first = self.bends[0].restrict(s).model()?;
            let second = match follow {
                None => self.bends[1].restrict(s).model()?,
                Some(follow) => {
                    let guess = t[0].midpoint(t[1]);
                    let (area, y) = follow.over(&self.matched.curves, s, guess)?;
                    self.bends[1].restrict(area).model_at(&y)?
                }
            };
            Some(first.plus(&second, -1.0))
        };
        match models() {
            Some(step) => {
                let peak = s[0].midpoint(s[1]) + 0.5 * (s[1] - s[0]) * step.peak();
                let most = step.most();
                (if most.is_nan() { f64::INFINITY } else { most }, peak)
            }
            None => (f64::INFINITY, s[0].midpoint(s[1])),
        }
    }

    fn bracket(&self, floor: f64) -> Option<CurvatureStep> {
        let follow = (!self.matched.aligned())
            .then(|| Follow::new(&self.matched.curves, &self.matched.origin));
        let mut best: Option<Values> = None;
        let mut raise = |found: Option<Values>| {
            if let Some(found) = found
                && best.is_none_or(|best| found.0 > best.0)
            {
                best = Some(found);
            }
            best.map_or(0.0, |best| best.0)
        };
        if self.bends.iter().any(|bend| !bend.bounded) {
            // Nothing to prove: the largest of some places inside.
            for k in 1..=15 {
                raise(self.at(f64::from(k) / 16.0, None));
            }
            let (attained, both, at) = best?;
            return Some(CurvatureStep {
                bracket: Bracket {
                    proved: f64::INFINITY,
                    attained,
                },
                curvatures_per_mm: both,
                at: self.matched.on_edges(at),
            });
        }
        for s in [0.0, 0.5, 1.0] {
            raise(self.at(s, None));
        }
        let (upper, peak) = self.bound(follow.as_ref(), [0.0, 1.0], [0.0, 1.0]);
        let mut attained = raise(self.at(peak, None));
        let mut parts = vec![Part {
            s: [0.0, 1.0],
            t: [0.0, 1.0],
            upper,
        }];
        let mut proved = f64::INFINITY;
        while let Some(worst) =
            (0..parts.len()).max_by(|&i, &j| parts[i].upper.total_cmp(&parts[j].upper))
        {
            proved = parts[worst].upper;
            if proved <= (attained * RATIO).max(floor) || parts.len() >= PARTS {
                break;
            }
            let part = parts.swap_remove(worst);
            let s = part.s[0].midpoint(part.s[1]);
            let t = self.matched.foot(s, Some(part.t[0].midpoint(part.t[1])));
            for (s, t) in [
                ([part.s[0], s], [part.t[0], t]),
                ([s, part.s[1]], [t, part.t[1]]),
            ] {
                let (upper, peak) = self.bound(follow.as_ref(), s, t);
                let x = (peak - s[0]) / (s[1] - s[0]);
                attained = raise(self.at(peak, Some(t[0] * (1.0 - x) + t[1] * x)));
                let upper = upper.min(part.upper);
                parts.push(Part { s, t, upper });
            }
        }
        let (attained, both, at) = best?;
        Some(CurvatureStep {
            bracket: Bracket {
                proved: proved.max(attained),
                attained,
            },
            curvatures_per_mm: both,
            at: self.matched.on_edges(at),
        })
    }
}
