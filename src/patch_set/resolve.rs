//! From the file as written to the resolved model: every check that is not the
//! parser's. All checks are linear in the size of the file.

use super::build::Build;
use super::collector::Collector;
use super::demand::Stated;
use super::diagnostic::Diagnostic;
use super::fault::SetFault;
use super::file::SetFile;
use super::{PatchSet, Standard, tolerance};
use crate::scalar::{LengthUnit, Point};
use crate::surface::Step;

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
    let Stated {
        demands,
        demand_of,
        class_of,
        rules,
    } = build.seams(&file.seams, &mut faults);
    let standard = Standard {
        sources: tolerance::sources(&file.tolerance),
        panels: build.classes(&file.classes, &mut faults),
        class_of,
        rules,
    };
    build.sizes(&file.sizes, &mut faults);
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
                standard,
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
