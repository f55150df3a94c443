//! Mirroring and rigid placement.

use super::collector::Collector;
use super::fault::SetFault;
use super::file::{Axis, PlaceEntry};
use crate::scalar::{Point, Vector};
use crate::surface::{Step, cos_sin_deg};

/// A mirroring of one coordinate, then a turn about an axis, then a shift.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Motion {
    mirror: Option<Axis>,
    turn: Option<Turn>,
    shift: Vector,
}

#[derive(Debug, Clone, Copy)]
struct Turn {
    axis: Vector,
    about: Point,
    cos: f64,
    sin: f64,
}

impl Motion {
    /// The motion of an entry whose numbers are finite and whose axis is not
    /// zero.
    pub(crate) fn new(mirror: Option<Axis>, place: Option<&PlaceEntry>) -> Self {
        let place = place.copied().unwrap_or_default();
        let [cos, sin] = cos_sin_deg(place.angle_deg);
        let turns = cos < 1.0 || sin.abs() > 0.0;
        let axis = Vector::from(place.axis.unwrap_or([0.0, 0.0, 1.0]));
        Self {
            mirror,
            turn: turns.then(|| Turn {
                axis: (axis / axis.amax()).normalize(),
                about: Point::from(place.about),
                cos,
                sin,
            }),
            shift: Vector::from(place.shift),
        }
    }

    pub(super) fn is_identity(&self) -> bool {
        self.mirror.is_none() && self.turn.is_none() && self.shift.amax() <= 0.0
    }

    pub(super) fn mirrors(&self) -> bool {
        self.mirror.is_some()
    }

    /// Where a point goes. Points that are bitwise equal stay so; mirroring
    /// changes no digit.
    pub(crate) fn apply(&self, mut point: Point) -> Point {
        // 0 - y rather than -y: a point in the mirror plane must not become -0.
        match self.mirror {
            Some(Axis::X) => point.x = 0.0 - point.x,
            Some(Axis::Y) => point.y = 0.0 - point.y,
            Some(Axis::Z) => point.z = 0.0 - point.z,
            None => {}
        }
        if let Some(turn) = &self.turn {
            // Rodrigues' formula.
            let arm = point - turn.about;
            let along = turn.axis * arm.dot(&turn.axis) * (1.0 - turn.cos);
            let turned = arm * turn.cos + turn.axis.cross(&arm) * turn.sin + along;
            point = turn.about + turned;
        }
        point + self.shift
    }
}

/// Checks the numbers of a rigid motion; `path` leads from the file to a part of
/// the entry that has it.
pub(super) fn check_place(
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
