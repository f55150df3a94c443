//! Collecting the faults of one surface while it is built.

use super::fault::{MAX_COORDINATE, MAX_WEIGHT, Place, PlacedFault, Step, SurfaceFault};
use crate::scalar::{Point, Vector};

/// What a surface is built with, and the faults met so far. Every check
/// records its fault and goes on, so that one run names them all.
#[derive(Debug)]
pub(super) struct Context<'a> {
    /// The set's shared points.
    pub(super) table: &'a [Point],
    /// The gap tolerance.
    pub(super) gap: f64,
    prefix: Vec<Step>,
    pub(super) faults: Vec<PlacedFault>,
}

impl<'a> Context<'a> {
    pub(super) fn new(table: &'a [Point], gap: f64) -> Self {
        Self {
            table,
            gap,
            prefix: Vec::new(),
            faults: Vec::new(),
        }
    }

    /// Runs `build` with all its faults placed below `field`.
    pub(super) fn inside<T>(
        &mut self,
        field: &'static str,
        build: impl FnOnce(&mut Self) -> T,
    ) -> T {
        self.prefix.push(Step::Field(field));
        let result = build(self);
        self.prefix.pop();
        result
    }

    pub(super) fn fault(&mut self, at: &[Step], fault: SurfaceFault) {
        let mut place = self.prefix.clone();
        place.extend_from_slice(at);
        self.faults.push(PlacedFault {
            place: Place(place),
            fault,
        });
    }

    fn number(&mut self, value: f64, name: &'static str, at: impl Fn() -> Vec<Step>) -> bool {
        let fault = if !value.is_finite() {
            SurfaceFault::NotFinite { name, value }
        } else if value.abs() > MAX_COORDINATE {
            SurfaceFault::TooLarge { name, value }
        } else {
            return true;
        };
        self.fault(&at(), fault);
        false
    }

    /// A finite number of sensible size.
    pub(super) fn finite(&mut self, value: f64, name: &'static str) -> Option<f64> {
        self.number(value, name, || vec![Step::Field(name)])
            .then_some(value)
    }

    /// A positive length.
    pub(super) fn positive(&mut self, value: f64, name: &'static str) -> Option<f64> {
        let value = self.finite(value, name)?;
        if value > 0.0 {
            return Some(value);
        }
        self.fault(
            &[Step::Field(name)],
            SurfaceFault::NotPositive { name, value },
        );
        None
    }

    /// A knot, at its place in the list.
    pub(super) fn knot(&mut self, value: f64, at: impl Fn() -> Vec<Step>) -> bool {
        self.number(value, "knot", at)
    }

    /// A point of a net or of a field, at `at`.
    pub(super) fn point(
        &mut self,
        [x, y, z]: [f64; 3],
        at: impl Fn() -> Vec<Step>,
    ) -> Option<Point> {
        let mut good = true;
        for (axis, (value, name)) in [(x, "x"), (y, "y"), (z, "z")].into_iter().enumerate() {
            good &= self.number(value, name, || {
                let mut place = at();
                place.push(Step::Item(axis));
                place
            });
        }
        good.then(|| Point::new(x, y, z))
    }

    /// A point given in a field of its own.
    pub(super) fn place(&mut self, value: [f64; 3], name: &'static str) -> Option<Point> {
        self.point(value, || vec![Step::Field(name)])
    }

    /// A direction that is not zero, as given.
    pub(super) fn direction(&mut self, value: [f64; 3], name: &'static str) -> Option<Vector> {
        let direction = self.place(value, name)?.coords;
        if direction.norm() > f64::MIN_POSITIVE {
            return Some(direction);
        }
        self.fault(&[Step::Field(name)], SurfaceFault::ZeroDirection(name));
        None
    }

    /// A weight, at its place in the list.
    pub(super) fn weight(&mut self, value: f64, at: impl Fn() -> Vec<Step>) -> Option<f64> {
        if (1.0 / MAX_WEIGHT..=MAX_WEIGHT).contains(&value) {
            return Some(value);
        }
        self.fault(&at(), SurfaceFault::Weight(value));
        None
    }

    /// An entry of the point table.
    pub(super) fn indexed(&mut self, index: u64, at: impl Fn() -> Vec<Step>) -> Option<Point> {
        let found = usize::try_from(index)
            .ok()
            .and_then(|index| self.table.get(index));
        if let Some(point) = found {
            return Some(*point);
        }
        let len = self.table.len();
        self.fault(&at(), SurfaceFault::Index { index, len });
        None
    }
}
