//! The four sides of a patch.

use std::fmt;

use serde::{Deserialize, Serialize};

/// A side of the unit square of parameters. `U0` is the edge u = 0, which runs
/// in v; the order `U0 < U1 < V0 < V1` decides between edges.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize, Deserialize)]
pub enum Side {
    /// u = 0.
    U0,
    /// u = 1.
    U1,
    /// v = 0.
    V0,
    /// v = 1.
    V1,
}

impl Side {
    /// All sides in their order.
    pub const ALL: [Self; 4] = [Self::U0, Self::U1, Self::V0, Self::V1];

    /// The parameters (u, v) of place `t` on this side, `t` running with the
    /// free parameter.
    #[must_use]
    pub fn at(self, t: f64) -> [f64; 2] {
        match self {
            Self::U0 => [0.0, t],
            Self::U1 => [1.0, t],
            Self::V0 => [t, 0.0],
            Self::V1 => [t, 1.0],
        }
    }

    /// Position in [`Side::ALL`].
    #[must_use]
    pub fn index(self) -> usize {
        self as usize
    }
}

impl fmt::Display for Side {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(["U0", "U1", "V0", "V1"][self.index()])
    }
}
