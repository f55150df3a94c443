//! The control nets of a set as written: which point of the file stands behind
//! every control point, and how it is placed.

use std::collections::BTreeMap;

use super::basis::Basis;
use crate::patch_set::{Motion, PatchSet, SetFile, panel_of};
use crate::scalar::{Point, Vector};
use crate::surface::{Place, Step, Surface};

/// The net of one patch.
#[derive(Debug, Clone)]
pub(super) struct Net {
    pub(super) basis: Basis,
    /// The point of the file behind each control point.
    pub(super) sources: Vec<usize>,
    /// What the placing makes of the three unit vectors.
    turned: [Vector; 3],
    /// Where the control points stand now.
    pub(super) points: Vec<Point>,
}

impl Net {
    /// What the placing makes of a displacement.
    pub(super) fn placed(&self, by: &Vector) -> Vector {
        self.turned[0] * by.x + self.turned[1] * by.y + self.turned[2] * by.z
    }

    /// c of c . (placed d) = c' . d.
    pub(super) fn back(&self, c: &Vector) -> Vector {
        Vector::from(self.turned.map(|t| t.dot(c)))
    }
}

/// All nets of a set.
#[derive(Debug, Clone)]
pub(super) struct Nets {
    /// By patch; `None` where a patch has no net.
    pub(super) list: Vec<Option<Net>>,
    /// The points of the file: where each is written, and its coordinates.
    pub(super) written: Vec<(Place, Point)>,
}

impl Nets {
    pub(super) fn new(file: &SetFile, set: &PatchSet) -> Self {
        let mut written: Vec<(Place, Point)> = (0..)
            .zip(&file.points)
            .map(|(k, p)| {
                let place = vec![Step::Field("points"), Step::Item(k)];
                (Place(place), Point::from(*p))
            })
            .collect();
        // What stands behind each name: an entry, and the motions of copies.
        let mut behind: BTreeMap<String, (usize, Vec<Motion>)> = BTreeMap::new();
        let mut order: Vec<String> = Vec::new();
        for (k, entry) in file.patches.iter().enumerate() {
            let motion = Motion::new(entry.mirror, entry.place.as_ref());
            behind.insert(entry.name.clone(), (k, vec![motion]));
            order.push(entry.name.clone());
        }
        for copy in &file.copies {
            let motion = Motion::new(copy.mirror, copy.place.as_ref());
            let is_panel = order.iter().any(|name| panel_of(name) == copy.of);
            let sources: Vec<String> = order
                .iter()
                .filter(|name| {
                    if is_panel {
                        panel_of(name) == copy.of
                    } else {
                        **name == copy.of
                    }
                })
                .cloned()
                .collect();
            for source in sources {
                let rest = source.strip_prefix(&copy.of).unwrap_or("");
                let name = format!("{}{rest}", copy.name);
                let (entry, mut motions) = behind[&source].clone();
                motions.push(motion);
                behind.insert(name.clone(), (entry, motions));
                order.push(name);
            }
        }
        let mut own: Vec<Option<(Basis, Vec<usize>)>> = Vec::new();
        for (k, entry) in file.patches.iter().enumerate() {
            own.push(read(k, &entry.surface, &mut written));
        }
        let list = set
            .patches()
            .iter()
            .map(|patch| {
                let (entry, motions) = behind.get(&patch.name)?;
                let (basis, sources) = own[*entry].clone()?;
                let apply = |p: Point| motions.iter().fold(p, |p, motion| motion.apply(p));
                let origin = apply(Point::origin());
                let turned = [Vector::x(), Vector::y(), Vector::z()]
                    .map(|axis| apply(Point::from(axis)) - origin);
                let points = sources.iter().map(|s| apply(written[*s].1)).collect();
                Some(Net {
                    basis,
                    sources,
                    turned,
                    points,
                })
            })
            .collect();
        Self { list, written }
    }
}

/// The net of an entry; its own points join the list of what is written.
fn read(
    entry: usize,
    surface: &Surface,
    written: &mut Vec<(Place, Point)>,
) -> Option<(Basis, Vec<usize>)> {
    let (net, indexed, weights) = match surface {
        Surface::Bezier(s) => (&s.net, &s.indexed, &s.weights),
        Surface::BSpline(s) => (&s.net, &s.indexed, &s.weights),
        _ => return None,
    };
    let mut sources = Vec::new();
    let (rows, columns);
    if let Some(net) = net {
        (rows, columns) = (net.len(), net.first()?.len());
        for (i, row) in net.iter().enumerate() {
            for (j, point) in row.iter().enumerate() {
                sources.push(written.len());
                let place = vec![
                    Step::Field("patches"),
                    Step::Item(entry),
                    Step::Field("surface"),
                    Step::Field("net"),
                    Step::Item(i),
                    Step::Item(j),
                ];
                written.push((Place(place), Point::from(*point)));
            }
        }
    } else {
        let indexed = indexed.as_ref()?;
        (rows, columns) = (indexed.len(), indexed.first()?.len());
        for index in indexed.iter().flatten() {
            sources.push(usize::try_from(*index).ok()?);
        }
    }
    let clamped = |degree: usize| {
        let mut knots = vec![0.0; degree + 1];
        knots.resize(2 * degree + 2, 1.0);
        knots
    };
    let (degree, knots) = match surface {
        Surface::BSpline(s) => (
            [s.degree.0, s.degree.1],
            [s.knots.0.clone(), s.knots.1.clone()],
        ),
        _ => (
            [rows - 1, columns - 1],
            [clamped(rows - 1), clamped(columns - 1)],
        ),
    };
    let weights = match weights {
        Some(weights) => weights.iter().flatten().copied().collect(),
        None => vec![1.0; rows * columns],
    };
    let basis = Basis {
        degree,
        knots,
        weights,
        columns,
    };
    Some((basis, sources))
}
