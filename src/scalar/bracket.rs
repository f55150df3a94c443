//! A figure as the tool states it: an upper bound that is proved, and a value
//! that is attained.

use serde::Serialize;

/// `attained <= true value <= proved`.
///
/// `proved` is an upper bound by theorem, rounded outward; `attained` is the
/// value at one real place of the geometry, so a lower bound of the worst.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct Bracket {
    /// Upper bound, proved.
    pub proved: f64,
    /// Value at a real place, so at most the true figure.
    pub attained: f64,
}

impl Bracket {
    /// Zero, known exactly.
    pub const ZERO: Self = Self {
        proved: 0.0,
        attained: 0.0,
    };

    /// The bracket of the larger of two figures.
    #[must_use]
    pub fn max(self, other: Self) -> Self {
        Self {
            proved: self.proved.max(other.proved),
            attained: self.attained.max(other.attained),
        }
    }
}
