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

/// How far rounding in the file can move any point of a box, never more than
/// the tenth of the chord tolerance above which nothing is written. A mesh held
/// to the chord less this is within the chord still when it is read back.
///
/// A coordinate x is rounded by at most half a unit in the last of 24 binary
/// places of the largest |x|; a local origin lies in the middle of the box.
pub(super) fn reserve(format: Format, low: Point, high: Point, chord: Tolerance) -> f64 {
    // The norms that are compared with it are rounded themselves.
    let bound = |reach: f64| 3.0_f64.sqrt() * half_unit(reach) * (1.0 + 1e-12);
    let reach = low.coords.amax().max(high.coords.amax()) * (1.0 + 1e-12);
    let plain = bound(reach);
    let moved = match format {
        Format::Obj | Format::Ply | Format::Vtu => 0.0,
        Format::Stl => plain,
        Format::Glb => {
            // The origin is a single too, so not quite the middle; taking it
            // off and adding it rounds.
            let half = 0.5 * (high - low).amax() + half_unit(reach);
            let local = bound(half * (1.0 + 1e-12)) + 4.0 * f64::EPSILON * reach;
            plain.min(local.max(LOCAL_ABOVE * chord.get()))
        }
    };
    moved.min(REFUSED_ABOVE * chord.get())
}

/// Half the distance of the singles at a value.
fn half_unit(value: f64) -> f64 {
    // Below this singles lose places; what they lose is less than this.
    let value = value.max(f64::from(f32::MIN_POSITIVE));
    let power_of_two = f64::from_bits(value.to_bits() >> 52 << 52);
    power_of_two * 0.5 * f64::from(f32::EPSILON)
}

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

#[cfg(test)]
mod tests {
    use super::*;
    use crate::mesh::{Mesh, Part};
    use crate::scalar::LengthUnit;

    fn mesh(points: Vec<Point>) -> Mesh {
        Mesh {
            name: String::new(),
            unit: LengthUnit::Millimetre,
            panels: vec!["p".to_owned()],
            points,
            vertices: Vec::new(),
            triangles: Vec::new(),
            parts: Vec::<Part>::new(),
            evidence: None,
            corner_parts: None,
        }
    }

    #[test]
    fn half_a_unit_is_that_of_the_singles() {
        for value in [1.0, 1.5, 1.999_999, 2.0, 1023.0, 1024.0, 3e-5, 7e8] {
            let below = single(value);
            let unit = f64::from(below.next_up()) - f64::from(below);
            approx::assert_relative_eq!(half_unit(value), unit / 2.0, max_relative = 1e-12);
        }
    }

    #[test]
    fn no_point_moves_further_than_what_is_set_aside() {
        use proptest::prelude::*;
        let coordinate = || -2e3..2e3_f64;
        let point =
            || (coordinate(), coordinate(), coordinate()).prop_map(|(x, y, z)| Point::new(x, y, z));
        let case = (
            prop::collection::vec(point(), 2..40),
            1e-3..1.0_f64,
            -1e4..1e4_f64,
        );
        proptest!(|((points, chord, far) in case)| {
            let chord = Tolerance::new(chord).unwrap();
            let points: Vec<Point> = points.iter().map(|p| p + Vector::new(far, 0.0, 0.0)).collect();
            let bound = |pick: fn(f64, f64) -> f64, from: f64| {
                Point::from(points.iter().fold(Vector::repeat(from), |m, p| m.zip_map(&p.coords, pick)))
            };
            let (low, high) = (bound(f64::min, f64::INFINITY), bound(f64::max, f64::NEG_INFINITY));
            let mesh = mesh(points);
            let most = |moved: f64| moved.min(REFUSED_ABOVE * chord.get());
            let stl = Rounding::plain(&mesh).largest;
            prop_assert!(most(stl) <= reserve(Format::Stl, low, high, chord));
            let glb = Rounding::local(&mesh, chord).largest;
            prop_assert!(most(glb) <= reserve(Format::Glb, low, high, chord));
            prop_assert!(reserve(Format::Ply, low, high, chord) <= 0.0);
        });
    }
}
