//! What every triangle must keep to.

/// The limits of one run, in the set's unit and radians.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Limits {
    /// Largest distance between mesh and surface, both ways.
    pub chord: f64,
    /// The part of the chord that inner triangles are laid out for; the
    /// certificate holds them to `chord` itself.
    pub(crate) interior: f64,
    /// Largest turn of the surface normal between corners of a triangle.
    pub normal_rad: Option<f64>,
    /// Largest edge of a triangle.
    pub max_edge: Option<f64>,
    /// Whether vertices are taken out again where the rest can still be proved:
    /// fewer triangles for a multiple of the time.
    pub thin: bool,
}

/// Inner triangles are laid out for this part of the chord: the rest is for
/// the Hessian's change over a triangle, which the layout does not see.
const LAYOUT: f64 = 0.97;

impl Limits {
    /// Limits for a chord tolerance, and the others where asked for.
    #[must_use]
    pub fn new(chord: f64, normal_rad: Option<f64>, max_edge: Option<f64>) -> Self {
        Self {
            chord,
            interior: chord * LAYOUT,
            normal_rad,
            max_edge,
            thin: false,
        }
    }

    /// Whether the chord alone rules.
    pub(crate) fn shape_is_free(&self) -> bool {
        self.normal_rad.is_none() && self.max_edge.is_none()
    }

    /// What a length says of a triangle beside its deviation: the chord where
    /// the length is just allowed, more where it is too long, growing with its
    /// square as deviations do. Zero where no largest edge is asked for.
    pub(crate) fn length_error(&self, length: f64) -> f64 {
        self.max_edge
            .map_or(0.0, |longest| self.chord * (length / longest).powi(2))
    }

    /// The same for a turn of the normal, in radians.
    pub(crate) fn turn_error(&self, turn: f64) -> f64 {
        self.normal_rad
            .map_or(0.0, |most| self.chord * (turn / most).powi(2))
    }
}
