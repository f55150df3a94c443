//! Names of patches and panels, and the nearest to a mistyped one.

use std::collections::BTreeMap;

use super::{PanelId, PatchId};

/// The panel of a patch: the part of its name before the last slash.
pub(super) fn panel_of(name: &str) -> &str {
    name.rfind('/').map_or(name, |slash| &name[..slash])
}

/// All names of a set.
#[derive(Debug, Default)]
pub(super) struct Names {
    pub(super) patches: BTreeMap<String, PatchId>,
    pub(super) panels: BTreeMap<String, PanelId>,
}

impl Names {
    /// The patch or panel name most like `wanted`.
    pub(super) fn nearest(&self, wanted: &str, panels_too: bool) -> Option<&str> {
        let patches = self.patches.keys().map(String::as_str);
        let panels = self.panels.keys().map(String::as_str);
        let panels = panels.filter(|_| panels_too);
        nearest(wanted, patches.chain(panels))
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
