//! What a sized mesh is asked to be, and why none was made.

use thiserror::Error;

use crate::mesh::MeshError;
use crate::topology::TopologyError;

/// The growth ratio unless another one is asked for.
pub const DEFAULT_GROWTH: f64 = 1.2;

/// What a sized mesh is asked for; lengths in the set's unit.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Sizing {
    /// Edge length where nothing asks for a shorter one.
    pub size: f64,
    /// Sizes keep so far above this that no edge is shorter, as far as geometry and
    /// the size let them; edges below it are named.
    pub min_edge: Option<f64>,
    /// Sizes at the two ends of an edge differ by this ratio at most.
    pub growth: f64,
    /// Largest distance between mesh and surface, both ways, if asked for.
    pub chord: Option<f64>,
    /// Largest turn of the surface normal along an edge, radians, if asked for:
    /// it makes sizes, and is not proved.
    pub normal_rad: Option<f64>,
}

impl Sizing {
    /// Edges of one length, with the usual growth.
    #[must_use]
    pub fn new(size: f64) -> Self {
        Self {
            size,
            min_edge: None,
            growth: DEFAULT_GROWTH,
            chord: None,
            normal_rad: None,
        }
    }

    /// Whether every number is one that can be worked with.
    ///
    /// # Errors
    /// [`SizingError`] names the number and the rule.
    pub fn checked(self) -> Result<Self, SizingError> {
        let positive = |x: f64| x.is_finite() && x > 0.0;
        if !positive(self.size) {
            return Err(SizingError::Size(self.size));
        }
        if let Some(least) = self.min_edge.filter(|&e| !positive(e) || e > self.size) {
            return Err(SizingError::MinEdge {
                least,
                size: self.size,
            });
        }
        if !self.growth.is_finite() || !(LEAST_GROWTH..=MOST_GROWTH).contains(&self.growth) {
            return Err(SizingError::Growth(self.growth));
        }
        if let Some(chord) = self.chord.filter(|&c| !positive(c)) {
            return Err(SizingError::Chord(chord));
        }
        Ok(self)
    }
}

/// The least growth ratio that is worked with: below it a mesh would hardly grow at
/// all.
pub const LEAST_GROWTH: f64 = 1.01;

/// Above this growth ratio triangles cannot be near equilateral.
const MOST_GROWTH: f64 = 2.0;

/// Why no sized mesh was made.
#[derive(Debug, Error)]
pub enum SizingError {
    /// The size is no length.
    #[error("size {0}: not a length; a size must be positive and finite")]
    Size(f64),
    /// The smallest edge is no length, or larger than the size.
    #[error(
        "smallest edge {least}: must be positive and not above the size {size}; a smaller one lets the run through"
    )]
    MinEdge {
        /// What was asked for.
        least: f64,
        /// The size.
        size: f64,
    },
    /// The growth ratio is out of range.
    #[error(
        "growth {0}: out of range; a growth ratio must be from {LEAST_GROWTH} to {MOST_GROWTH}"
    )]
    Growth(f64),
    /// The chord is no length.
    #[error("chord {0}: not a length; a chord must be positive and finite")]
    Chord(f64),
    /// The edges do not make a topology.
    #[error(transparent)]
    Topology(#[from] TopologyError),
    /// More would be taken than is allowed, a seam bridges too wide a gap, or
    /// there is nothing to mesh.
    #[error(transparent)]
    Mesh(#[from] MeshError),
    /// A patch has no start of a mesh.
    #[error(
        "patch `{patch}`: its border could not be filled with triangles of the size asked for; a smaller size, or a mended patch, lets the run through"
    )]
    Unfilled {
        /// The patch.
        patch: String,
    },
    /// Refinement ended without proof.
    #[error(
        "patch `{patch}` at (u, v) = ({u:.6}, {v:.6}): the sized mesh could only be proved within {proved:.6e}, rounds with ever smaller sizes: {rounds}; the chord tolerance is {chord:.3e} - a larger chord, or a smaller --min-edge where that rules, lets the run through"
    )]
    Unproved {
        /// The patch.
        patch: String,
        /// The patch's own parameters.
        u: f64,
        /// The patch's own parameters.
        v: f64,
        /// What could be proved.
        proved: f64,
        /// How often it was tried.
        rounds: usize,
        /// What was asked.
        chord: f64,
    },
}
