//! Names of patches and panels, and the nearest to a mistyped one.

use std::collections::{BTreeMap, BTreeSet};

use super::{PanelId, PatchId};

/// The panel of a patch: the part of its name before the last slash.
pub(crate) fn panel_of(name: &str) -> &str {
    name.rfind('/').map_or(name, |slash| &name[..slash])
}

/// All names of a set.
#[derive(Debug, Default)]
pub(super) struct Names {
    pub(super) patches: BTreeMap<String, PatchId>,
    pub(super) panels: BTreeMap<String, PanelId>,
    /// Patches that are named but cannot be built, and their panels: what
    /// refers to them is not a fault of its own.
    faulty_patches: BTreeSet<String>,
    faulty_panels: BTreeSet<String>,
    /// Copies that could not be made whole: any patch of theirs may be missing.
    faulty_copies: BTreeSet<String>,
}

impl Names {
    /// Remembers a patch that cannot be built.
    pub(super) fn note_faulty(&mut self, name: &str) {
        self.faulty_patches.insert(name.to_owned());
        self.faulty_panels.insert(panel_of(name).to_owned());
    }

    /// Remembers a copy that is not, or not wholly, made.
    pub(super) fn note_faulty_copy(&mut self, name: &str) {
        self.faulty_copies.insert(name.to_owned());
    }

    /// Whether a patch has this name.
    pub(super) fn is_taken(&self, name: &str) -> bool {
        self.patches.contains_key(name) || self.faulty_patches.contains(name)
    }

    /// Whether the name belongs to something whose own fault is told already.
    pub(super) fn is_faulty(&self, name: &str) -> bool {
        self.faulty_patches.contains(name)
            || self.faulty_panels.contains(name)
            || self.faulty_copies.contains(name)
            || self.faulty_copies.contains(panel_of(name))
    }

    /// Whether a panel lacks some of its patches.
    pub(super) fn is_incomplete(&self, panel: &str) -> bool {
        self.faulty_panels.contains(panel) || self.faulty_copies.contains(panel)
    }

    /// The patch or panel name most like `wanted`.
    pub(super) fn nearest(&self, wanted: &str, panels_too: bool) -> Option<&str> {
        let patches = self.patches.keys().chain(&self.faulty_patches);
        let panels = self.panels.keys().chain(&self.faulty_panels);
        let panels = panels.filter(|_| panels_too);
        nearest(wanted, patches.chain(panels).map(String::as_str))
    }
}

/// The candidate most like `wanted`, if it is like it at all (Jaro and Winkler's
/// likeness above 0.75); the first of equals.
pub(super) fn nearest<'a>(
    wanted: &str,
    candidates: impl IntoIterator<Item = &'a str>,
) -> Option<&'a str> {
    let mut best: Option<(f64, &str)> = None;
    let lower = wanted.to_lowercase();
    for candidate in candidates {
        let likeness = strsim::jaro_winkler(&lower, &candidate.to_lowercase());
        if likeness > best.map_or(0.75, |(most, _)| most) {
            best = Some((likeness, candidate));
        }
    }
    best.map(|(_, candidate)| candidate)
}
