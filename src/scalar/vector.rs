//! The one place where the vector library is named.

/// A place in space, in the set's length unit.
pub type Point = nalgebra::Point3<f64>;

/// A direction or a difference of places, in the set's length unit.
pub type Vector = nalgebra::Vector3<f64>;

/// The angle between two directions of any length, 0 to pi; accurate for small
/// angles too.
pub(crate) fn angle_rad(a: &Vector, b: &Vector) -> f64 {
    a.cross(b).norm().atan2(a.dot(b))
}
