//! The model under construction: patches and copies, one after the other.

use std::collections::HashMap;

use rayon::prelude::*;

use super::collector::Collector;
use super::diagnostic::{Diagnostic, Finding};
use super::fault::SetFault;
use super::file::{CopyEntry, PatchEntry};
use super::motion::{Motion, check_place};
use super::name::{Names, panel_of};
use super::warning::{self, Warning};
use super::{Panel, PanelId, Patch, PatchId, Piece};
use crate::pace;
use crate::scalar::Point;
use crate::surface::{PieceGrid, Place, PlacedFault, Step};

/// More pieces than this are refused: a run takes 4 kB for each, and 16 GB is what
/// it takes at most unless more is allowed.
const MAX_PIECES: usize = 4_000_000;

/// Entries looked at together, so that a short text that stands for very many pieces
/// is refused before they are all there.
const CHUNK: usize = 256;

/// The model under construction.
#[derive(Debug, Default)]
pub(super) struct Build {
    pub(super) panels: Vec<Panel>,
    pub(super) patches: Vec<Patch>,
    pub(super) pieces: Vec<Piece>,
    pub(super) names: Names,
    pub(super) suggestions: usize,
}

fn patch_path(index: usize, rest: &[Step]) -> Vec<Step> {
    [&[Step::Field("patches"), Step::Item(index)], rest].concat()
}

/// What is found out about one entry on its own.
type Built = Result<(PieceGrid, Vec<Warning>), Vec<PlacedFault>>;

impl Build {
    pub(super) fn patches(
        &mut self,
        entries: Vec<PatchEntry>,
        table: &[Point],
        gap: f64,
        faults: &mut Collector,
    ) -> Vec<Diagnostic> {
        let mut warnings = Vec::new();
        let mut motions = Vec::with_capacity(entries.len());
        for (k, entry) in entries.iter().enumerate() {
            let place = || format!("patch `{}`", entry.name);
            let path = |rest: &[Step]| patch_path(k, rest);
            let good = check_place(entry.place.as_ref(), faults, &place, &path);
            motions.push(good.then(|| Motion::new(entry.mirror, entry.place.as_ref())));
        }
        pace::expect(entries.len() as u64, "patches");
        let mut entries = entries.into_iter();
        let mut start = 0;
        while entries.len() > 0 {
            let chunk: Vec<PatchEntry> = entries.by_ref().take(CHUNK).collect();
            let count = chunk.len();
            let own = &motions[start..start + count];
            let fits = self.chunk((start, chunk), own, (table, gap), faults, &mut warnings);
            if !fits {
                break;
            }
            start += count;
        }
        warnings
    }

    /// Some entries, the first of them by number; `false` where there is no room for
    /// their pieces.
    fn chunk(
        &mut self,
        (first, entries): (usize, Vec<PatchEntry>),
        motions: &[Option<Motion>],
        (table, gap): (&[Point], f64),
        faults: &mut Collector,
        warnings: &mut Vec<Diagnostic>,
    ) -> bool {
        let built: Vec<(PatchEntryRest, Built)> = entries
            .into_par_iter()
            .zip(motions)
            .map(|(entry, motion)| {
                let grid = entry.surface.pieces(table, gap).map(|mut grid| {
                    if let Some(motion) = motion.filter(|motion| !motion.is_identity()) {
                        for piece in &mut grid.pieces {
                            *piece = piece.map(|p| motion.apply(p));
                        }
                    }
                    let warnings = warning::judge(&grid, gap);
                    (grid, warnings)
                });
                pace::step(1);
                (PatchEntryRest::from(entry), grid)
            })
            .collect();
        for (k, ((entry, built), motion)) in built.into_iter().zip(motions).enumerate() {
            let k = first + k;
            let place = format!("patch `{}`", entry.name);
            let name_path = patch_path(k, &[Step::Field("name")]);
            let named = self.check_name(&entry.name, &place, name_path.clone(), faults);
            match built {
                Err(list) => {
                    self.names.note_faulty(&entry.name);
                    for PlacedFault { place: at, fault } in list {
                        let hint = fault.hint();
                        let whole = [vec![Step::Field("surface")], at.0.clone()].concat();
                        let text = if at.0.is_empty() {
                            place.clone()
                        } else {
                            format!("{place}, {at}")
                        };
                        faults.hinted(text, patch_path(k, &whole), fault.into(), hint);
                    }
                }
                Ok((grid, found)) => {
                    for warning in found {
                        warnings.push(Diagnostic {
                            finding: Finding::Warning(warning),
                            place: place.clone(),
                            hint: None,
                            position: None,
                            path: Place(name_path.clone()),
                        });
                    }
                    let mirrored = motion.is_some_and(|motion| motion.mirrors());
                    if !self.room_for(grid.pieces.len(), &place, name_path, faults) {
                        return false;
                    }
                    if named {
                        self.push(entry.name, entry.kind, entry.flip != mirrored, grid);
                    }
                }
            }
        }
        true
    }

    /// Whether the name may be used; it is taken from now on.
    fn check_name(&self, name: &str, place: &str, path: Vec<Step>, faults: &mut Collector) -> bool {
        let fault = if name.is_empty() || name.split('/').any(|part| part.trim().is_empty()) {
            SetFault::EmptyName(name.to_owned())
        } else if self.names.is_taken(name) {
            SetFault::DuplicateName(name.to_owned())
        } else {
            return true;
        };
        faults.fault(place.to_owned(), path, fault);
        false
    }

    fn room_for(
        &self,
        pieces: usize,
        place: &str,
        path: Vec<Step>,
        faults: &mut Collector,
    ) -> bool {
        let total = self.pieces.len().saturating_add(pieces);
        let fits = total <= MAX_PIECES;
        if !fits {
            faults.fault(place.to_owned(), path, SetFault::TooMany(total));
        }
        fits
    }

    fn push(&mut self, name: String, kind: &'static str, flipped: bool, grid: PieceGrid) {
        let id = PatchId::new(self.patches.len());
        let panel_name = panel_of(&name);
        let panel = match self.names.panels.get(panel_name) {
            Some(&panel) => panel,
            None => {
                let panel = PanelId::new(self.panels.len());
                self.names.panels.insert(panel_name.to_owned(), panel);
                self.panels.push(Panel {
                    name: panel_name.to_owned(),
                    patches: Vec::new(),
                    size: None,
                });
                panel
            }
        };
        self.panels[panel.index()].patches.push(id);
        self.names.patches.insert(name.clone(), id);
        let start = self.pieces.len();
        let columns = grid.breaks_v.len() - 1;
        for (at, surface) in grid.pieces.into_iter().enumerate() {
            let (i, j) = (at / columns, at % columns);
            self.pieces.push(Piece {
                patch: id,
                u: [grid.breaks_u[i], grid.breaks_u[i + 1]],
                v: [grid.breaks_v[j], grid.breaks_v[j + 1]],
                surface,
            });
        }
        self.patches.push(Patch {
            name,
            panel,
            kind,
            flipped,
            pieces: start..self.pieces.len(),
            breaks_u: grid.breaks_u,
            breaks_v: grid.breaks_v,
        });
    }

    /// The first copy for whose pieces there is no room, and how many there would be:
    /// found before any is made.
    fn overfull(&self, copies: &[CopyEntry]) -> Option<(usize, usize)> {
        let mut sizes: HashMap<&str, usize> = HashMap::new();
        for patch in &self.patches {
            let panel = &self.panels[patch.panel.index()].name;
            *sizes.entry(panel).or_default() += patch.pieces.len();
            // A patch that is its own panel is one thing.
            if patch.name != *panel {
                *sizes.entry(&patch.name).or_default() += patch.pieces.len();
            }
        }
        let mut total = self.pieces.len();
        for (k, copy) in copies.iter().enumerate() {
            let all = sizes.get(copy.of.as_str()).copied().unwrap_or(0);
            total = total.saturating_add(all);
            if total > MAX_PIECES {
                return Some((k, total));
            }
            *sizes.entry(&copy.name).or_default() += all;
        }
        None
    }

    pub(super) fn copies(&mut self, copies: &[CopyEntry], faults: &mut Collector) {
        if let Some((k, total)) = self.overfull(copies) {
            let path = vec![Step::Field("copies"), Step::Item(k)];
            let place = format!("copy `{}`", copies[k].name);
            faults.fault(place, path, SetFault::TooMany(total));
            return;
        }
        for (k, copy) in copies.iter().enumerate() {
            let place = || format!("copy `{}`", copy.name);
            let path = |rest: &[Step]| [&[Step::Field("copies"), Step::Item(k)], rest].concat();
            let good = check_place(copy.place.as_ref(), faults, &place, &path);
            if !good || self.names.is_incomplete(&copy.of) || self.names.is_faulty(&copy.of) {
                self.names.note_faulty_copy(&copy.name);
            }
            let sources: Vec<PatchId> = if let Some(&panel) = self.names.panels.get(&copy.of) {
                self.panels[panel.index()].patches.clone()
            } else if let Some(&patch) = self.names.patches.get(&copy.of) {
                vec![patch]
            } else {
                self.unknown(
                    &copy.of,
                    "panel or patch",
                    "a copy repeats what stands before it",
                    (place(), path(&[Step::Field("of")])),
                    faults,
                );
                self.names.note_faulty_copy(&copy.name);
                continue;
            };
            if !good {
                continue;
            }
            let motion = Motion::new(copy.mirror, copy.place.as_ref());
            for source in sources {
                let patch = &self.patches[source.index()];
                let rest = patch.name.strip_prefix(&copy.of).unwrap_or("");
                let name = format!("{}{rest}", copy.name);
                let at = path(&[Step::Field("name")]);
                if !self.check_name(&name, &place(), at.clone(), faults)
                    || !self.room_for(patch.pieces.len(), &place(), at, faults)
                {
                    break;
                }
                let grid = PieceGrid {
                    breaks_u: patch.breaks_u.clone(),
                    breaks_v: patch.breaks_v.clone(),
                    pieces: self.pieces[patch.pieces.clone()]
                        .iter()
                        .map(|piece| piece.surface.map(|p| motion.apply(p)))
                        .collect(),
                };
                let flipped = patch.flipped != motion.mirrors();
                self.push(name, patch.kind, flipped, grid);
            }
        }
    }
}

/// What is left of an entry once its surface has become pieces.
struct PatchEntryRest {
    name: String,
    kind: &'static str,
    flip: bool,
}

impl From<PatchEntry> for PatchEntryRest {
    fn from(entry: PatchEntry) -> Self {
        Self {
            kind: entry.surface.kind(),
            name: entry.name,
            flip: entry.flip,
        }
    }
}
