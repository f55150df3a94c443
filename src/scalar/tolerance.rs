//! A tolerance is positive and finite; no other value can be built.

use thiserror::Error;

/// A positive, finite number of length units, degrees or 1/length.
#[derive(Debug, Clone, Copy, PartialEq, PartialOrd)]
pub struct Tolerance(f64);

/// A number that cannot serve as a tolerance.
#[derive(Debug, Clone, Copy, PartialEq, Error)]
#[error("{0} is no tolerance; a tolerance must be positive and finite")]
pub struct ToleranceError(pub f64);

impl Tolerance {
    /// Accepts positive finite values.
    ///
    /// # Errors
    /// [`ToleranceError`] for zero, negative, infinite or NaN values.
    pub fn new(value: f64) -> Result<Self, ToleranceError> {
        if value.is_finite() && value > 0.0 {
            Ok(Self(value))
        } else {
            Err(ToleranceError(value))
        }
    }

    /// The number itself.
    #[must_use]
    pub fn get(self) -> f64 {
        self.0
    }
}
