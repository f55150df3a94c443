//! Numbers and their meaning: vectors, units of length, tolerances, brackets.

mod bracket;
mod cuboid;
mod id;
mod tolerance;
mod unit;
mod vector;

pub use bracket::Bracket;
pub(crate) use cuboid::Cuboid;
pub(crate) use id::id;
pub use tolerance::{Tolerance, ToleranceError};
pub use unit::{Length, LengthError, LengthUnit};
pub(crate) use vector::angle_rad;
pub use vector::{Point, Vector};
