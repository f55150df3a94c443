//! Tolerances: what the file says, and the defaults.

use super::collector::Collector;
use super::fault::SetFault;
use super::file::ToleranceEntry;
use super::{Class, Source, Tolerances};
use crate::scalar::{LengthUnit, Tolerance};
use crate::surface::{MAX_COORDINATE, Step};

/// Default chord tolerance, mm.
pub const DEFAULT_CHORD_MM: f64 = 0.1;
/// Default gap tolerance, mm (exposed surfaces, common practice).
pub const DEFAULT_GAP_MM: f64 = 0.01;
/// Default search distance, in gap tolerances.
pub const DEFAULT_SEARCH_GAPS: f64 = 10.0;
/// Default tangent tolerance, degrees (exposed surfaces, common practice).
pub const DEFAULT_TANGENT_DEG: f64 = 0.1;
/// Default smallest angle of an undeclared crease, degrees.
pub const DEFAULT_CREASE_DEG: f64 = 10.0;

pub(super) fn resolve(
    entry: &ToleranceEntry,
    unit: LengthUnit,
    faults: &mut Collector,
) -> Option<Tolerances> {
    let mut given = |value: Option<f64>, name: &'static str| -> Option<Option<Tolerance>> {
        let Some(value) = value else {
            return Some(None);
        };
        match Tolerance::new(value) {
            Ok(tolerance) if value <= MAX_COORDINATE => Some(Some(tolerance)),
            _ => {
                faults.fault(
                    "tolerance".to_owned(),
                    vec![Step::Field("tolerance"), Step::Field(name)],
                    SetFault::Tolerance { name, value },
                );
                None
            }
        }
    };
    let chord = given(entry.chord, "chord");
    let normal_deg = given(entry.normal_deg, "normal_deg");
    let max_edge = given(entry.max_edge, "max_edge");
    let gap = given(entry.gap, "gap");
    let search = given(entry.search, "search");
    let tangent_deg = given(entry.tangent_deg, "tangent_deg");
    let crease_deg = given(entry.crease_deg, "crease_deg");
    let curvature_per_mm = given(entry.curvature_per_mm, "curvature_per_mm");

    let default = |value: f64| Tolerance::new(value).ok();
    let length = |mm: f64| default(mm / unit.in_mm());
    let class_gap = entry.class.map_or(DEFAULT_GAP_MM, Class::gap_mm);
    let class_tangent = entry.class.map_or(DEFAULT_TANGENT_DEG, Class::tangent_deg);
    let gap = gap?.or(length(class_gap))?;
    let search = match search? {
        Some(search) if search < gap => {
            faults.fault(
                "tolerance".to_owned(),
                vec![Step::Field("tolerance"), Step::Field("search")],
                SetFault::SearchBelowGap {
                    search: search.get(),
                    gap: gap.get(),
                },
            );
            return None;
        }
        Some(search) => search,
        None => default(DEFAULT_SEARCH_GAPS * gap.get())?,
    };
    Some(Tolerances {
        chord: chord?.or(length(DEFAULT_CHORD_MM))?,
        normal_deg: normal_deg?,
        max_edge: max_edge?,
        gap,
        search,
        tangent_deg: tangent_deg?.or(default(class_tangent))?,
        crease_deg: crease_deg?.or(default(DEFAULT_CREASE_DEG))?,
        curvature_per_mm: curvature_per_mm?,
        close_gaps: None,
    })
}

/// Where gap and tangent tolerance come from.
pub(super) fn sources(entry: &ToleranceEntry) -> [Source; 2] {
    [entry.gap, entry.tangent_deg].map(|given| match (given, entry.class) {
        (Some(_), _) => Source::Set,
        (None, Some(class)) => Source::SetClass(class),
        (None, None) => Source::Default,
    })
}
