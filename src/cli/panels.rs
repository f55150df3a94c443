//! Panels as named on the command line.

use thiserror::Error;

use crate::patch_set::{PanelId, PatchSet};

/// A name that is no panel of the set.
#[derive(Debug, Error)]
#[error("--panel {name}: the set has no such panel{}; {}", hint(.nearest), list(.all))]
pub(crate) struct NoPanel {
    name: String,
    nearest: Option<String>,
    all: Vec<String>,
}

fn hint(nearest: &Option<String>) -> String {
    nearest
        .as_ref()
        .map_or_else(String::new, |name| format!(", did you mean `{name}`?"))
}

/// The panels there are, as far as a line or two can hold them.
fn list(all: &[String]) -> String {
    const SHOWN: usize = 12;
    let names: Vec<String> = all.iter().take(SHOWN).map(|n| format!("`{n}`")).collect();
    let more = match all.len().saturating_sub(SHOWN) {
        0 => String::new(),
        more => format!(" and {more} more"),
    };
    let verb = if all.len() == 1 {
        "panel is"
    } else {
        "panels are"
    };
    format!("its {verb} {}{more}", names.join(", "))
}

/// The panels of these names; `None` for no names, which means all.
///
/// # Errors
/// [`NoPanel`] for the first name the set does not have.
pub(crate) fn panels(set: &PatchSet, names: &[String]) -> Result<Option<Vec<PanelId>>, NoPanel> {
    if names.is_empty() {
        return Ok(None);
    }
    let find = |name: &String| {
        set.panels()
            .iter()
            .position(|panel| panel.name == *name)
            .map(PanelId::new)
            .ok_or_else(|| NoPanel {
                name: name.clone(),
                nearest: nearest(set, name),
                all: set.panels().iter().map(|p| p.name.clone()).collect(),
            })
    };
    names.iter().map(find).collect::<Result<_, _>>().map(Some)
}

fn nearest(set: &PatchSet, name: &str) -> Option<String> {
    let mut best: Option<(f64, &str)> = None;
    for panel in set.panels() {
        let likeness = strsim::jaro_winkler(name, &panel.name);
        if likeness > best.map_or(0.75, |(most, _)| most) {
            best = Some((likeness, &panel.name));
        }
    }
    best.map(|(_, name)| name.to_owned())
}
