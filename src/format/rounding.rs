//! Single precision: by how much it moves points, and from which origin.

use super::{Format, FormatError};
use crate::mesh::Mesh;
use crate::scalar::{Point, Tolerance, Vector};

/// A fraction of the chord tolerance that rounding must not exceed.
const REFUSED_ABOVE: f64 = 0.1;

/// A fraction of the chord tolerance from which a local origin is used: small
/// enough for nobody to miss what is lost, and large enough for parts near the
/// set's own origin to keep their coordinates.
const LOCAL_ABOVE: f64 = 0.01;

/// Coordinates in single precision, relative to an origin.
#[derive(Debug, Clone, Copy)]
pub(super) struct Rounding {
    /// Exact in single precision.
    pub(super) origin: Vector,
    /// Upper bound of the distance between a point and what is stored of it.
    pub(super) largest: f64,
}

impl Rounding {
    /// Coordinates as they are.
    pub(super) fn plain(mesh: &Mesh) -> Self {
        Self::from_origin(mesh, Vector::zeros())
    }

    /// Coordinates as they are if that is fine enough, else relative to the
    /// middle of the mesh's box.
    pub(super) fn local(mesh: &Mesh, chord: Tolerance) -> Self {
        let plain = Self::plain(mesh);
        if plain.largest <= LOCAL_ABOVE * chord.get() {
            return plain;
        }
        let bound = |pick: fn(f64, f64) -> f64, from: f64| {
            mesh.points
                .iter()
                .fold(Vector::repeat(from), |m, p| m.zip_map(&p.coords, pick))
        };
        let low = bound(f64::min, f64::INFINITY);
        let high = bound(f64::max, f64::NEG_INFINITY);
        let middle = low.zip_map(&high, |low, high| f64::from(single(0.5 * (low + high))));
        let local = Self::from_origin(mesh, middle);
        if local.largest < plain.largest {
            local
        } else {
            plain
        }
    }

    fn from_origin(mesh: &Mesh, origin: Vector) -> Self {
        let mut rounding = Self {
            origin,
            largest: 0.0,
        };
        let largest = mesh
            .points
            .iter()
            .map(|p| rounding.moved(p))
            .fold(0.0, f64::max);
        // A difference of neighbours is exact and the norm good to a few units
        // in the last place; adding an origin rounds by half of one.
        let added = if origin == Vector::zeros() {
            0.0
        } else {
            let reach = mesh.points.iter().map(|p| p.coords.amax());
            2.0 * f64::EPSILON * reach.fold(0.0, f64::max)
        };
        if largest > 0.0 || added > 0.0 {
            rounding.largest = ((largest + added) * (1.0 + 8.0 * f64::EPSILON)).next_up();
        }
        rounding
    }

    fn moved(&self, p: &Point) -> f64 {
        let stored = Vector::from(self.singles(p).map(f64::from));
        let moved = p.coords - (stored + self.origin);
        let scale = moved.amax();
        if scale > 0.0 && scale.is_finite() {
            scale * (moved / scale).norm()
        } else {
            scale
        }
    }

    /// What is stored of a point.
    pub(super) fn singles(&self, p: &Point) -> [f32; 3] {
        let local = p.coords - self.origin;
        [single(local.x), single(local.y), single(local.z)]
    }

    /// Refuses what exceeds a tenth of the chord tolerance.
    pub(super) fn check(
        self,
        mesh: &Mesh,
        format: Format,
        chord: Tolerance,
    ) -> Result<Self, FormatError> {
        if self.largest <= REFUSED_ABOVE * chord.get() {
            Ok(self)
        } else {
            Err(FormatError::Rounding {
                format,
                rounding: self.largest,
                chord: chord.get(),
                unit: mesh.unit,
            })
        }
    }
}

/// The nearest single, or an infinity, which the check above refuses.
#[allow(
    clippy::cast_possible_truncation,
    reason = "rounding is what is meant, and its size is measured"
)]
pub(super) fn single(value: f64) -> f32 {
    value as f32
}
