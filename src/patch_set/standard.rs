//! Tolerance classes, rules by panel pattern, and what each seam is held
//! against.

use std::collections::BTreeMap;

use serde::{Deserialize, Serialize};

use super::{Demand, PanelId, PatchId, PatchSet, SeamEnd};
use crate::bezier::Side;

/// A tolerance class of the trade (common practice): exposed, secondary or
/// hidden surfaces.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Serialize, Deserialize)]
pub enum Class {
    /// Exposed: gap 0.01 mm, angle 0.1 degrees.
    A,
    /// Secondary: gap 0.02 mm, angle 0.2 degrees.
    B,
    /// Hidden: gap 0.05 mm, angle 0.5 degrees.
    C,
}

impl Class {
    /// Largest gap, mm.
    #[must_use]
    pub fn gap_mm(self) -> f64 {
        [0.01, 0.02, 0.05][self as usize]
    }

    /// Largest angle of a tangent seam, degrees.
    #[must_use]
    pub fn tangent_deg(self) -> f64 {
        [0.1, 0.2, 0.5][self as usize]
    }
}

/// Where a tolerance comes from.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum Source {
    /// Nothing is said: the default.
    #[default]
    Default,
    /// A number in the set's `tolerance`, or set by whoever runs the job.
    Set,
    /// The class of the whole set.
    SetClass(Class),
    /// The class of a panel.
    PanelClass(Class, PanelId),
    /// The class stated with the seam's demand.
    SeamClass(Class),
}

impl Source {
    /// The source in words.
    #[must_use]
    pub fn label(self, set: &PatchSet) -> String {
        match self {
            Self::Default => "default".to_owned(),
            Self::Set => "set".to_owned(),
            Self::SetClass(class) => format!("class {class:?}, set"),
            Self::PanelClass(class, panel) => {
                format!(
                    "class {class:?}, panel {}",
                    set.panels()[panel.index()].name
                )
            }
            Self::SeamClass(class) => format!("class {class:?}, seam"),
        }
    }
}

/// A tolerance and where it comes from.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Limit {
    /// Length units of the set, or degrees.
    pub value: f64,
    /// Where it comes from.
    pub source: Source,
}

/// What one seam is held against.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SeamLimits {
    /// Largest gap, in the set's unit.
    pub gap: Limit,
    /// Largest angle of a tangent seam, degrees.
    pub tangent_deg: Limit,
}

/// How a demand came to a seam.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum DemandSource {
    /// Stated in the file, of these two ends by name.
    Stated,
    /// Stated in the file by a pattern of panel names.
    Pattern,
    /// Follows from the angle.
    Inferred,
}

/// One end of a rule by pattern.
#[derive(Debug, Clone, PartialEq)]
pub(crate) enum Matcher {
    /// What is named.
    End(SeamEnd),
    /// All panels the pattern fits, by panel.
    Panels(Vec<bool>),
}

/// A demand by pattern.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct Rule {
    pub(crate) ends: [Matcher; 2],
    pub(crate) demand: Demand,
    pub(crate) class: Option<Class>,
}

/// Classes and rules of a set.
#[derive(Debug, Clone, Default)]
pub(crate) struct Standard {
    /// Where the set's own gap and tangent tolerance come from.
    pub(crate) sources: [Source; 2],
    /// Class of every panel; empty where no panel has one.
    pub(crate) panels: Vec<Option<Class>>,
    /// Classes stated with demands, by both ends ascending.
    pub(crate) class_of: BTreeMap<[SeamEnd; 2], Class>,
    pub(crate) rules: Vec<Rule>,
}

/// Whether a name fits a pattern, in which `*` stands for any run of letters.
pub(super) fn fits(pattern: &str, name: &str) -> bool {
    let mut parts = pattern.split('*');
    let first = parts.next().unwrap_or("");
    let Some(mut rest) = name.strip_prefix(first) else {
        return false;
    };
    let mut parts: Vec<&str> = parts.collect();
    let Some(last) = parts.pop() else {
        return rest.is_empty();
    };
    for part in parts {
        match rest.find(part) {
            Some(at) => rest = &rest[at + part.len()..],
            None => return false,
        }
    }
    rest.len() >= last.len() && rest.ends_with(last)
}

impl PatchSet {
    /// What a seam between two patch edges is held against: its own class
    /// before that of its panels (the stricter of two), before the set's
    /// numbers, the set's class and the defaults. `None` for a side stands for
    /// a line inside the patch.
    #[must_use]
    pub fn seam_limits(
        &self,
        a: (PatchId, Option<Side>),
        b: (PatchId, Option<Side>),
    ) -> SeamLimits {
        let own = SeamLimits {
            gap: Limit {
                value: self.tolerances.gap.get(),
                source: self.standard.sources[0],
            },
            tangent_deg: Limit {
                value: self.tolerances.tangent_deg.get(),
                source: self.standard.sources[1],
            },
        };
        if !self.has_classes() {
            return own;
        }
        let standard = &self.standard;
        let of = |class: Class, source: Source| SeamLimits {
            gap: Limit {
                value: class.gap_mm() / self.unit.in_mm(),
                source,
            },
            tangent_deg: Limit {
                value: class.tangent_deg(),
                source,
            },
        };
        if let (Some(p), Some(q)) = (a.1, b.1) {
            let (a, b) = ((a.0, p), (b.0, q));
            let class = self
                .narrowest(&standard.class_of, a, b)
                .or_else(|| self.rule(a, b).filter(|_| !self.is_named(a, b))?.class);
            if let Some(class) = class {
                return of(class, Source::SeamClass(class));
            }
        }
        let panel = |patch: PatchId| {
            let id = self.patches[patch.index()].panel;
            let class = standard.panels.get(id.index()).copied().flatten();
            class.map_or(own, |class| of(class, Source::PanelClass(class, id)))
        };
        let (p, q) = (panel(a.0), panel(b.0));
        let stricter = |p: Limit, q: Limit| if q.value < p.value { q } else { p };
        SeamLimits {
            gap: stricter(p.gap, q.gap),
            tangent_deg: stricter(p.tangent_deg, q.tangent_deg),
        }
    }

    /// Whether anything is said of classes beyond the set's own.
    pub(crate) fn has_classes(&self) -> bool {
        let own = &self.standard;
        !(own.panels.is_empty() && own.class_of.is_empty())
            || own.rules.iter().any(|rule| rule.class.is_some())
    }

    fn is_named(&self, a: (PatchId, Side), b: (PatchId, Side)) -> bool {
        self.narrowest(&self.demand_of, a, b).is_some()
    }

    /// The first rule by pattern that fits, either way round.
    pub(super) fn rule(&self, a: (PatchId, Side), b: (PatchId, Side)) -> Option<&Rule> {
        let fits = |matcher: &Matcher, (patch, side): (PatchId, Side)| {
            let panel = self.patches[patch.index()].panel;
            match matcher {
                Matcher::Panels(panels) => panels[panel.index()],
                Matcher::End(SeamEnd::Edge(p, s)) => (*p, *s) == (patch, side),
                Matcher::End(SeamEnd::Patch(p)) => *p == patch,
                Matcher::End(SeamEnd::Panel(p)) => *p == panel,
            }
        };
        self.standard.rules.iter().find(|rule| {
            let [p, q] = &rule.ends;
            fits(p, a) && fits(q, b) || fits(p, b) && fits(q, a)
        })
    }
}

#[cfg(test)]
mod tests {
    use super::fits;

    #[test]
    fn a_star_stands_for_any_letters() {
        for (pattern, name, expected) in [
            ("*", "", true),
            ("*", "wing", true),
            ("wing", "wing", true),
            ("wing", "wing left", false),
            ("wing*", "wing left", true),
            ("*left", "wing left", true),
            ("w*g*t", "wing left", true),
            ("w*g*g", "wing", false),
            ("*ing*ing*", "winging", true),
            ("*ing*ing", "wing", false),
        ] {
            assert_eq!(fits(pattern, name), expected, "{pattern} {name}");
        }
    }
}
