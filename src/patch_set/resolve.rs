//! From the file as written to the resolved model: every check that is not the
//! parser's. All checks are linear in the size of the file.

use std::collections::BTreeMap;

use rayon::prelude::*;

use super::diagnostic::{Diagnostic, Finding};
use super::fault::SetFault;
use super::file::{CopyEntry, PatchEntry, PlaceEntry, SeamEndEntry, SeamEntry, SetFile};
use super::motion::Motion;
use super::name::{Names, panel_of};
use super::tolerance;
use super::warning::{self, Warning};
use super::{Panel, PanelId, Patch, PatchId, PatchSet, Piece, SeamDemand, SeamEnd};
use crate::bezier::Side;
use crate::scalar::{LengthUnit, Point};
use crate::surface::{MAX_COORDINATE, PieceGrid, Place, PlacedFault, Step};

/// More pieces than this would not fit into memory; refused before it is tried.
const MAX_PIECES: usize = 20_000_000;

/// How many unknown names are answered with the most like one: the search for
/// it is linear in the number of names.
const MAX_SUGGESTIONS: usize = 20;

/// Faults met so far.
#[derive(Debug, Default)]
pub(super) struct Collector {
    pub(super) list: Vec<Diagnostic>,
}

impl Collector {
    pub(super) fn fault(&mut self, place: String, path: Vec<Step>, fault: SetFault) {
        self.hinted(place, path, fault, None);
    }

    fn hinted(&mut self, place: String, path: Vec<Step>, fault: SetFault, hint: Option<String>) {
        self.list.push(Diagnostic {
            finding: Finding::Fault(fault),
            place,
            hint,
            position: None,
            path: Place(path),
        });
    }

    pub(super) fn number(
        &mut self,
        value: f64,
        name: &'static str,
        place: impl Fn() -> (String, Vec<Step>),
    ) -> bool {
        let good = value.abs() <= MAX_COORDINATE;
        if !good {
            let (place, path) = place();
            self.fault(place, path, SetFault::Number { name, value });
        }
        good
    }
}

/// The set and its warnings, or all faults.
pub(super) fn resolve(file: SetFile) -> Result<(PatchSet, Vec<Diagnostic>), Vec<Diagnostic>> {
    let mut faults = Collector::default();
    let unit = LengthUnit::from(file.units);
    let tolerances = tolerance::resolve(&file.tolerance, unit, &mut faults);
    let table = points(&file.points, &mut faults);
    let mut build = Build::default();
    if file.patches.is_empty() {
        faults.fault(String::new(), vec![Step::Field("patches")], SetFault::Empty);
    }
    let gap = tolerances.as_ref().map_or(0.01, |t| t.gap.get());
    let warnings = build.patches(file.patches, &table, gap, &mut faults);
    build.copies(&file.copies, &mut faults);
    let (demands, demand_of) = build.seams(&file.seams, &mut faults);
    match tolerances {
        Some(tolerances) if faults.list.is_empty() => Ok((
            PatchSet {
                name: file.name,
                unit,
                tolerances,
                panels: build.panels,
                patches: build.patches,
                pieces: build.pieces,
                demands,
                demand_of,
            },
            warnings,
        )),
        _ => Err(faults.list),
    }
}

/// The shared points; a faulty one is told of once and stands at the origin.
fn points(list: &[[f64; 3]], faults: &mut Collector) -> Vec<Point> {
    let mut table = Vec::with_capacity(list.len());
    for (k, &[x, y, z]) in list.iter().enumerate() {
        let mut good = true;
        for (axis, (value, name)) in [(x, "x"), (y, "y"), (z, "z")].into_iter().enumerate() {
            good &= faults.number(value, name, || {
                let path = vec![Step::Field("points"), Step::Item(k), Step::Item(axis)];
                (format!("points[{k}]"), path)
            });
        }
        table.push(if good {
            Point::new(x, y, z)
        } else {
            Point::origin()
        });
    }
    table
}

/// The model under construction.
#[derive(Debug, Default)]
struct Build {
    panels: Vec<Panel>,
    patches: Vec<Patch>,
    pieces: Vec<Piece>,
    names: Names,
    suggestions: usize,
}

fn patch_path(index: usize, rest: &[Step]) -> Vec<Step> {
    [&[Step::Field("patches"), Step::Item(index)], rest].concat()
}

/// What is found out about one entry on its own.
type Built = Result<(PieceGrid, Vec<Warning>), Vec<PlacedFault>>;

impl Build {
    fn patches(
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
        let built: Vec<(PatchEntryRest, Built)> = entries
            .into_par_iter()
            .zip(&motions)
            .map(|(entry, motion)| {
                let grid = entry.surface.pieces(table, gap).map(|mut grid| {
                    if let Some(motion) = motion.filter(|motion| !motion.is_identity()) {
                        for piece in &mut grid.pieces {
                            *piece = piece.map(|p| motion.apply(p));
                        }
                    }
                    let warnings = judge(&grid, gap);
                    (grid, warnings)
                });
                (PatchEntryRest::from(entry), grid)
            })
            .collect();
        for (k, ((entry, built), motion)) in built.into_iter().zip(&motions).enumerate() {
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
                    if named && self.room_for(grid.pieces.len(), &place, name_path, faults) {
                        self.push(entry.name, entry.kind, entry.flip != mirrored, grid);
                    }
                }
            }
        }
        warnings
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

    fn copies(&mut self, copies: &[CopyEntry], faults: &mut Collector) {
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

    fn unknown(
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

    fn seams(
        &mut self,
        seams: &[SeamEntry],
        faults: &mut Collector,
    ) -> (Vec<SeamDemand>, BTreeMap<[SeamEnd; 2], super::Demand>) {
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

/// The numbers of a rigid motion.
fn check_place(
    entry: Option<&PlaceEntry>,
    faults: &mut Collector,
    place: &impl Fn() -> String,
    path: &impl Fn(&[Step]) -> Vec<Step>,
) -> bool {
    let Some(entry) = entry else {
        return true;
    };
    let mut good = true;
    let axis = entry.axis.unwrap_or([0.0, 0.0, 1.0]);
    for (field, vector) in [
        ("axis", axis),
        ("about", entry.about),
        ("shift", entry.shift),
    ] {
        for (k, (value, name)) in vector.into_iter().zip(["x", "y", "z"]).enumerate() {
            good &= faults.number(value, name, || {
                let steps = [Step::Field("place"), Step::Field(field), Step::Item(k)];
                (format!("{}, place.{field}", place()), path(&steps))
            });
        }
    }
    let angle = [Step::Field("place"), Step::Field("angle_deg")];
    good &= faults.number(entry.angle_deg, "angle_deg", || (place(), path(&angle)));
    if good && axis.iter().all(|c| c.abs() < f64::MIN_POSITIVE) {
        let steps = [Step::Field("place"), Step::Field("axis")];
        faults.fault(place(), path(&steps), SetFault::ZeroAxis);
        return false;
    }
    good
}

/// The warnings of one patch.
fn judge(grid: &PieceGrid, gap: f64) -> Vec<Warning> {
    let mut found = Vec::new();
    let columns = grid.breaks_v.len() - 1;
    let rows = grid.breaks_u.len() - 1;
    let size = grid.pieces.iter().map(warning::size).fold(0.0, f64::max);
    if size < gap {
        return vec![Warning::Tiny { size, gap }];
    }
    let judged: Vec<_> = grid
        .pieces
        .iter()
        .map(|piece| warning::normals(piece, warning::size(piece)))
        .collect();
    if judged.iter().all(|(flat, _)| *flat) {
        return vec![Warning::ZeroArea];
    }
    for side in Side::ALL {
        let on_side = |at: usize| match side {
            Side::U0 => at / columns == 0,
            Side::U1 => at / columns == rows - 1,
            Side::V0 => at.is_multiple_of(columns),
            Side::V1 => at % columns == columns - 1,
        };
        let mut pieces = grid
            .pieces
            .iter()
            .enumerate()
            .filter(|(at, _)| on_side(*at));
        if pieces.all(|(_, piece)| warning::is_collapsed(piece, side, gap)) {
            found.push(Warning::CollapsedEdge(side));
        }
    }
    let fold = judged.iter().enumerate().find_map(|(at, (_, fold))| {
        let [u, v] = (*fold)?;
        let (i, j) = (at / columns, at % columns);
        let along = |breaks: &[f64], k: usize, t: f64| breaks[k] * (1.0 - t) + breaks[k + 1] * t;
        Some(Warning::NormalReverses {
            u: along(&grid.breaks_u, i, u),
            v: along(&grid.breaks_v, j, v),
        })
    });
    found.extend(fold);
    found
}
