//! The demands of the file, with every name looked up.

use std::collections::BTreeMap;

use super::build::Build;
use super::collector::Collector;
use super::fault::SetFault;
use super::file::{SeamEndEntry, SeamEntry};
use super::{Demand, SeamDemand, SeamEnd};
use crate::surface::Step;

/// How many unknown names are answered with the most like one: the search for
/// it is linear in the number of names.
const MAX_SUGGESTIONS: usize = 20;

impl Build {
    /// The demands in the order of the file, and by their two ends.
    pub(super) fn seams(
        &mut self,
        seams: &[SeamEntry],
        faults: &mut Collector,
    ) -> (Vec<SeamDemand>, BTreeMap<[SeamEnd; 2], Demand>) {
        let mut demands = Vec::with_capacity(seams.len());
        let mut demand_of = BTreeMap::new();
        for (k, seam) in seams.iter().enumerate() {
            let path = |field| vec![Step::Field("seams"), Step::Item(k), Step::Field(field)];
            let place = || format!("seam {k}");
            let between = self.end(&seam.between, (place(), path("between")), faults);
            let and = self.end(&seam.and, (place(), path("and")), faults);
            let (Some(between), Some(and)) = (between, and) else {
                continue;
            };
            if between == and && matches!(and, SeamEnd::Edge(..)) {
                faults.fault(place(), path("and"), SetFault::SelfSeam);
                continue;
            }
            let mut key = [between, and];
            key.sort_unstable();
            match demand_of.insert(key, seam.demand) {
                Some(before) if before != seam.demand => {
                    let now = seam.demand;
                    let fault = SetFault::Contradiction { before, now };
                    faults.fault(place(), path("demand"), fault);
                }
                _ => demands.push(SeamDemand {
                    between,
                    and,
                    demand: seam.demand,
                }),
            }
        }
        (demands, demand_of)
    }

    fn end(
        &mut self,
        end: &SeamEndEntry,
        (place, mut path): (String, Vec<Step>),
        faults: &mut Collector,
    ) -> Option<SeamEnd> {
        let rule = "a seam names what the set has";
        match end {
            SeamEndEntry::Edge(name, side) => {
                if let Some(&patch) = self.names.patches.get(name) {
                    return Some(SeamEnd::Edge(patch, *side));
                }
                path.push(Step::Item(0));
                self.unknown(name, "patch", rule, (place, path), faults);
            }
            SeamEndEntry::Any(name) => {
                if let Some(&panel) = self.names.panels.get(name) {
                    return Some(SeamEnd::Panel(panel));
                }
                if let Some(&patch) = self.names.patches.get(name) {
                    return Some(SeamEnd::Patch(patch));
                }
                self.unknown(name, "panel or patch", rule, (place, path), faults);
            }
        }
        None
    }

    /// Tells of a name that is not there, unless its own fault is told already.
    pub(super) fn unknown(
        &mut self,
        name: &str,
        what: &'static str,
        rule: &'static str,
        (place, path): (String, Vec<Step>),
        faults: &mut Collector,
    ) {
        if self.names.is_faulty(name) {
            return;
        }
        let nearest = if self.suggestions < MAX_SUGGESTIONS {
            self.suggestions += 1;
            self.names.nearest(name, what != "patch")
        } else {
            None
        };
        let hint = nearest.map(|nearest| format!("did you mean `{nearest}`?"));
        let fault = SetFault::UnknownName {
            name: name.to_owned(),
            what,
            rule,
        };
        faults.hinted(place, path, fault, hint);
    }
}
