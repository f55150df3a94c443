//! Which seams are mended together, and what that takes.

use std::collections::BTreeMap;

use super::joint::{Joint, Miss};
use super::mended::Reason;
use super::net::Nets;
use super::smallest::damped;
use crate::continuity::{End, Finding, Survey, SurveyedSeam, Verdict, patch_edge};
use crate::patch_set::{Demand, PatchSet};
use crate::scalar::Vector;
use crate::topology::{Contact, Topology};

/// Rounds of setting up and solving the conditions.
const ROUNDS: usize = 16;

/// What is left of a condition counts as met below this, in tolerances.
const MET: f64 = 0.05;

/// Seams with less than this, in tolerances, are closed to rounding.
const AJAR: f64 = 1e-3;

/// Moves below this, in gap tolerances, are not made.
const LEAST: f64 = 1e-5;

/// Seams, conditions, and what is to be done.
pub(super) struct Plan<'a> {
    set: &'a PatchSet,
    survey: &'a Survey,
    joints: Vec<Joint>,
    /// Which joints are to be mended.
    targets: Vec<usize>,
    /// Points of the file that must not move.
    frozen: Vec<bool>,
    /// Seams that are left alone, and why.
    pub(super) left: BTreeMap<usize, Reason>,
}

impl<'a> Plan<'a> {
    pub(super) fn new(
        set: &'a PatchSet,
        topology: &Topology,
        survey: &'a Survey,
        nets: &Nets,
    ) -> Self {
        let mut groups: BTreeMap<(End, End), Vec<&Contact>> = BTreeMap::new();
        for contact in topology.contacts() {
            let [a, b] = contact.edges.map(|e| patch_edge(set, e));
            groups.entry((a, b)).or_default().push(contact);
        }
        let mut plan = Self {
            set,
            survey,
            joints: Vec::new(),
            targets: Vec::new(),
            frozen: vec![false; nets.written.len()],
            left: BTreeMap::new(),
        };
        for (k, seam) in survey.seams.iter().enumerate() {
            let contacts = groups.remove(&(seam.between, seam.and)).unwrap_or_default();
            if seam.demand == Demand::Open || is_touch(set, seam) {
                continue;
            }
            let is_tangent = seam.angle_deg.is_some_and(|angle| {
                matches!(seam.demand, Demand::G1 | Demand::G2)
                    && angle.bracket.attained < set.tolerances().crease_deg.get()
            });
            let joint = Joint::new(set, nets, (Some(k), is_tangent), seam.limits, &contacts);
            if seam.verdict != Verdict::Met {
                match refusal(seam, &joint, nets) {
                    Some(reason) => {
                        plan.left.insert(k, reason);
                    }
                    None => plan.targets.push(plan.joints.len()),
                }
            } else if seam.demand == Demand::G2 && set.tolerances().curvature_per_mm.is_some() {
                plan.freeze(nets, seam);
            }
            plan.joints.push(joint);
        }
        // Lines inside patches, smooth and not listed.
        for ((a, b), contacts) in groups {
            if a.0 == b.0 && contacts.iter().all(|c| c.joined) {
                let limits = set.seam_limits((a.0, a.1.side()), (b.0, b.1.side()));
                plan.joints
                    .push(Joint::new(set, nets, (None, true), limits, &contacts));
            }
        }
        plan
    }

    /// Keeps three rows of points beside a seam whose curvature is judged.
    fn freeze(&mut self, nets: &Nets, seam: &SurveyedSeam) {
        for (patch, edge) in [seam.between, seam.and] {
            let (Some(net), Some(side)) = (&nets.list[patch.index()], edge.side()) else {
                continue;
            };
            let columns = net.basis.columns;
            let rows = net.sources.len() / columns;
            for (k, source) in net.sources.iter().enumerate() {
                let (i, j) = (k / columns, k % columns);
                let row = [i, rows - 1 - i, j, columns - 1 - j][side.index()];
                if row <= 2 {
                    self.frozen[*source] = true;
                }
            }
        }
    }

    /// Moves points until all targets are met, or left alone.
    pub(super) fn carry_out(&mut self, nets: &mut Nets, limit: f64) -> Vec<Vector> {
        let mut moves = vec![Vector::zeros(); nets.written.len()];
        let sources: Vec<Vec<usize>> = self.joints.iter().map(|j| j.sources(nets)).collect();
        let mut users: Vec<Vec<usize>> = vec![Vec::new(); nets.written.len()];
        for (joint, list) in sources.iter().enumerate() {
            list.iter().for_each(|s| users[*s].push(joint));
        }
        for group in groups(&self.targets, &sources, &users) {
            self.mend(&group, &sources, &users, nets, limit, &mut moves);
        }
        moves
    }

    /// Mends the targets of one group, the hopeless ones left out one by one.
    fn mend(
        &mut self,
        group: &[usize],
        sources: &[Vec<usize>],
        users: &[Vec<usize>],
        nets: &mut Nets,
        limit: f64,
        moves: &mut [Vector],
    ) {
        let mut targets = group.to_vec();
        // What is as demanded keeps its figures, unless that contradicts what is
        // mended round a corner: then its gaps close, too.
        let mut closes_all = false;
        while !targets.is_empty() {
            let closing = if closes_all {
                self.widened(&targets, sources, users)
            } else {
                targets.clone()
            };
            let (free, joints) = self.neighbourhood(&closing, sources, users);
            let before: Vec<_> = nets
                .list
                .iter()
                .map(|n| n.as_ref().map(|n| n.points.clone()))
                .collect();
            let found = self.solve(&closing, &free, &joints, nets);
            let largest = found.iter().map(Vector::norm).fold(0.0, f64::max);
            let worst = joints
                .iter()
                .map(|&j| (self.joints[j].miss(nets, targets.contains(&j)), j))
                .max_by(|a, b| a.0.units.total_cmp(&b.0.units));
            let missed = worst.filter(|(miss, _)| miss.units > MET);
            let Some((dropped, reason)) = (match missed {
                Some((miss, joint)) => Some(self.hopeless(&miss, joint, &targets, &joints, nets)),
                None if largest > limit => {
                    let far = free
                        .iter()
                        .zip(&found)
                        .max_by(|a, b| a.1.norm().total_cmp(&b.1.norm()))
                        .map_or(0, |(source, _)| *source);
                    let at = targets.iter().position(|t| sources[*t].contains(&far));
                    Some((at.unwrap_or(0), Reason::Limit(largest)))
                }
                None => None,
            }) else {
                for (source, by) in free.iter().zip(found) {
                    moves[*source] += by;
                }
                return;
            };
            for (net, points) in nets.list.iter_mut().zip(before) {
                if let (Some(net), Some(points)) = (net, points) {
                    net.points = points;
                }
            }
            if missed.is_some() && !closes_all {
                closes_all = true;
                continue;
            }
            closes_all = false;
            let joint = targets.remove(dropped);
            if let Some(seam) = self.joints[joint].seam {
                self.left.insert(seam, reason);
            }
        }
    }

    /// The target to leave out where the conditions cannot be met.
    fn hopeless(
        &self,
        miss: &Miss,
        joint: usize,
        targets: &[usize],
        joints: &[usize],
        nets: &Nets,
    ) -> (usize, Reason) {
        let own = targets.iter().position(|t| *t == joint);
        let worst = || {
            let of = |t: &usize| self.joints[*t].miss(nets, true).units;
            (0..targets.len())
                .max_by(|a, b| of(&targets[*a]).total_cmp(&of(&targets[*b])))
                .unwrap_or(0)
        };
        let reason = if miss.is_end {
            let near = 20.0 * self.set.tolerances().search.get();
            let mut patches: Vec<usize> = joints
                .iter()
                .flat_map(|j| self.joints[*j].patches_at(nets, &miss.at, near))
                .collect();
            patches.sort_unstable();
            patches.dedup();
            let names = patches.iter().map(|p| self.set.patches()[*p].name.clone());
            Reason::Corner {
                at: miss.at,
                patches: names.collect(),
            }
        } else {
            Reason::Conditions { at: miss.at }
        };
        (own.unwrap_or_else(worst), reason)
    }

    /// The targets, and all seams around that are as demanded but not closed to
    /// rounding, as far as they hang together.
    fn widened(
        &self,
        targets: &[usize],
        sources: &[Vec<usize>],
        users: &[Vec<usize>],
    ) -> Vec<usize> {
        let mut closing = targets.to_vec();
        loop {
            let (_, joints) = self.neighbourhood(&closing, sources, users);
            let more: Vec<usize> = joints
                .into_iter()
                .filter(|j| !closing.contains(j) && self.is_ajar(*j))
                .collect();
            if more.is_empty() {
                return closing;
            }
            closing.extend(more);
        }
    }

    /// Whether a joint is as demanded, but not closed to rounding.
    fn is_ajar(&self, joint: usize) -> bool {
        let joint = &self.joints[joint];
        let is_met = joint
            .seam
            .is_none_or(|s| self.survey.seams[s].verdict == Verdict::Met);
        is_met && joint.opening > AJAR
    }

    /// The points that may move, and the joints that have a say: the targets,
    /// what touches them, and what touches that.
    fn neighbourhood(
        &self,
        targets: &[usize],
        sources: &[Vec<usize>],
        users: &[Vec<usize>],
    ) -> (Vec<usize>, Vec<usize>) {
        let unique = |mut list: Vec<usize>| {
            list.sort_unstable();
            list.dedup();
            list
        };
        let of =
            |joints: &[usize]| unique(joints.iter().flat_map(|j| sources[*j].clone()).collect());
        let touching =
            |points: &[usize]| unique(points.iter().flat_map(|s| users[*s].clone()).collect());
        let ring = touching(&of(targets));
        let mut free = of(&ring);
        let joints = touching(&free);
        free.retain(|s| !self.frozen[*s]);
        (free, joints)
    }

    /// Solves, and moves the nets; the displacements of the free points.
    fn solve(
        &self,
        closing: &[usize],
        free: &[usize],
        joints: &[usize],
        nets: &mut Nets,
    ) -> Vec<Vector> {
        let mut total = vec![Vector::zeros(); free.len()];
        let least = LEAST * self.set.tolerances().gap.get();
        for round in 0..ROUNDS {
            let column = |source: usize| free.binary_search(&source).ok();
            let mut rows = Vec::new();
            for joint in joints {
                let to_nothing = closing.contains(joint);
                self.joints[*joint].conditions(nets, &column, to_nothing, &mut rows);
            }
            let step = damped(rows, free.len());
            let largest = step.iter().map(Vector::norm).fold(0.0, f64::max);
            for (sum, by) in total.iter_mut().zip(&step) {
                *sum += by;
            }
            shift(nets, free, &step);
            if largest <= least && round > 0 {
                break;
            }
        }
        // What hardly moves stays what it is in the file.
        let mut back = vec![Vector::zeros(); free.len()];
        for (sum, back) in total.iter_mut().zip(&mut back) {
            if sum.norm() <= least {
                *back = -*sum;
                *sum = Vector::zeros();
            }
        }
        shift(nets, free, &back);
        total
    }

    /// The survey's seams that were to be mended and are not left alone.
    pub(super) fn mended(&self) -> Vec<usize> {
        let seams = self.targets.iter().filter_map(|j| self.joints[*j].seam);
        seams.filter(|s| !self.left.contains_key(s)).collect()
    }

    /// The seams of the survey.
    pub(super) fn seams(&self) -> &'a [SurveyedSeam] {
        &self.survey.seams
    }
}

/// Moves the control points behind which the free points stand.
fn shift(nets: &mut Nets, free: &[usize], by: &[Vector]) {
    for net in nets.list.iter_mut().flatten() {
        for k in 0..net.sources.len() {
            if let Ok(at) = free.binary_search(&net.sources[k]) {
                let placed = net.placed(&by[at]);
                net.points[k] += placed;
            }
        }
    }
}

/// Whether edges do no more than touch near a corner: no seam to be kept.
pub(super) fn is_touch(set: &PatchSet, seam: &SurveyedSeam) -> bool {
    seam.finding != Finding::Apart && seam.length <= 2.0 * set.tolerances().search.get()
}

/// Why a seam is not mended at all.
fn refusal(seam: &SurveyedSeam, joint: &Joint, nets: &Nets) -> Option<Reason> {
    match seam.finding {
        Finding::Apart => Some(Reason::Apart),
        Finding::Crease if matches!(seam.demand, Demand::G1 | Demand::G2) => Some(Reason::Crease),
        Finding::Curvature => Some(Reason::Curvature),
        _ if !joint.has_net(nets) => Some(Reason::NoNet),
        _ => None,
    }
}

/// Targets that have a say in the same points, together.
fn groups(targets: &[usize], sources: &[Vec<usize>], users: &[Vec<usize>]) -> Vec<Vec<usize>> {
    let mut group_of: BTreeMap<usize, usize> = BTreeMap::new();
    let mut parent: Vec<usize> = (0..targets.len()).collect();
    fn root(parent: &[usize], mut k: usize) -> usize {
        while parent[k] != k {
            k = parent[k];
        }
        k
    }
    for (k, target) in targets.iter().enumerate() {
        for joint in sources[*target].iter().flat_map(|s| &users[*s]) {
            for source in &sources[*joint] {
                let other = *group_of.entry(*source).or_insert(k);
                let (a, b) = (root(&parent, other), root(&parent, k));
                parent[a.max(b)] = a.min(b);
            }
        }
    }
    let mut found: BTreeMap<usize, Vec<usize>> = BTreeMap::new();
    for (k, target) in targets.iter().enumerate() {
        found.entry(root(&parent, k)).or_default().push(*target);
    }
    found.into_values().collect()
}
