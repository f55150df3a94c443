//! The demands of the file, with every name looked up.

use std::collections::BTreeMap;

use super::build::Build;
use super::collector::Collector;
use super::fault::SetFault;
use super::file::{ClassEntry, SeamEndEntry, SeamEntry, SizeEntry};
use super::standard::{Matcher, Rule, fits};
use super::{Class, Demand, SeamDemand, SeamEnd};
use crate::surface::Step;

/// How many unknown names are answered with the most like one: the search for
/// it is linear in the number of names.
const MAX_SUGGESTIONS: usize = 20;

/// What the file says of seams.
#[derive(Debug, Default)]
pub(super) struct Stated {
    /// Demands of two ends by name, in the order of the file.
    pub(super) demands: Vec<SeamDemand>,
    /// The same by their two ends.
    pub(super) demand_of: BTreeMap<[SeamEnd; 2], Demand>,
    /// Classes stated with them.
    pub(super) class_of: BTreeMap<[SeamEnd; 2], Class>,
    /// Demands by pattern.
    pub(super) rules: Vec<Rule>,
}

impl Build {
    /// All demands, every name looked up.
    pub(super) fn seams(&mut self, seams: &[SeamEntry], faults: &mut Collector) -> Stated {
        let mut found = Stated::default();
        for (k, seam) in seams.iter().enumerate() {
            let path = |field| vec![Step::Field("seams"), Step::Item(k), Step::Field(field)];
            let place = || format!("seam {k}");
            let between = self.end(&seam.between, (place(), path("between")), faults);
            let and = self.end(&seam.and, (place(), path("and")), faults);
            let (Some(between), Some(and)) = (between, and) else {
                continue;
            };
            let (between, and) = match (between, and) {
                (Matcher::End(between), Matcher::End(and)) => (between, and),
                (between, and) => {
                    found.rules.push(Rule {
                        ends: [between, and],
                        demand: seam.demand,
                        class: seam.class,
                    });
                    continue;
                }
            };
            if between == and && matches!(and, SeamEnd::Edge(..)) {
                faults.fault(place(), path("and"), SetFault::SelfSeam);
                continue;
            }
            let mut key = [between, and];
            key.sort_unstable();
            if let Some(class) = seam.class {
                found.class_of.insert(key, class);
            }
            match found.demand_of.insert(key, seam.demand) {
                Some(before) if before != seam.demand => {
                    let now = seam.demand;
                    let fault = SetFault::Contradiction { before, now };
                    faults.fault(place(), path("demand"), fault);
                }
                _ => found.demands.push(SeamDemand {
                    between,
                    and,
                    demand: seam.demand,
                }),
            }
        }
        found
    }

    /// The class of every panel; empty where none has one. Later entries go
    /// before earlier ones.
    pub(super) fn classes(
        &mut self,
        entries: &[ClassEntry],
        faults: &mut Collector,
    ) -> Vec<Option<Class>> {
        let mut found = Vec::new();
        for (k, entry) in entries.iter().enumerate() {
            let path = vec![Step::Field("classes"), Step::Item(k), Step::Field("of")];
            let fitting = self.fitting(&entry.of);
            if !fitting.contains(&true) {
                let rule = "a class is of panels the set has";
                let place = format!("class {k}");
                self.unknown(&entry.of, "panel", rule, (place, path), faults);
                continue;
            }
            found.resize(self.panels.len(), None);
            for (class, _) in found.iter_mut().zip(&fitting).filter(|(_, fits)| **fits) {
                *class = Some(entry.class);
            }
        }
        found
    }

    /// Sizes of panels; later entries go before earlier ones.
    pub(super) fn sizes(&mut self, entries: &[SizeEntry], faults: &mut Collector) {
        for (k, entry) in entries.iter().enumerate() {
            let path = |field| vec![Step::Field("sizes"), Step::Item(k), Step::Field(field)];
            let place = || format!("size {k}");
            if !entry.size.is_finite() || entry.size <= 0.0 {
                faults.fault(place(), path("size"), SetFault::Size(entry.size));
            }
            let fitting = self.fitting(&entry.of);
            if !fitting.contains(&true) {
                let rule = "a size is of panels the set has";
                self.unknown(&entry.of, "panel", rule, (place(), path("of")), faults);
            }
            for (panel, _) in self.panels.iter_mut().zip(&fitting).filter(|p| *p.1) {
                panel.size = Some(entry.size);
            }
        }
    }

    /// Which panels fit a name or a pattern.
    fn fitting(&self, pattern: &str) -> Vec<bool> {
        let panels = self.panels.iter();
        panels.map(|panel| fits(pattern, &panel.name)).collect()
    }

    fn end(
        &mut self,
        end: &SeamEndEntry,
        (place, mut path): (String, Vec<Step>),
        faults: &mut Collector,
    ) -> Option<Matcher> {
        let rule = "a seam names what the set has";
        match end {
            SeamEndEntry::Edge(name, side) => {
                if let Some(&patch) = self.names.patches.get(name) {
                    return Some(Matcher::End(SeamEnd::Edge(patch, *side)));
                }
                path.push(Step::Item(0));
                self.unknown(name, "patch", rule, (place, path), faults);
            }
            SeamEndEntry::Any(name) => {
                if let Some(&panel) = self.names.panels.get(name) {
                    return Some(Matcher::End(SeamEnd::Panel(panel)));
                }
                if let Some(&patch) = self.names.patches.get(name) {
                    return Some(Matcher::End(SeamEnd::Patch(patch)));
                }
                if name.contains('*') {
                    let fitting = self.fitting(name);
                    if fitting.contains(&true) {
                        return Some(Matcher::Panels(fitting));
                    }
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
