//! Straight lines between two curves.

use serde::{Deserialize, Serialize};

use super::context::Context;
use super::curve::Curve;
use super::curve_pieces::common_breaks;
use super::grid::PieceGrid;
use super::homogeneous::project;
use super::kind::piece;

/// A ruled surface: u runs along both curves, v straight from the first to the
/// second. Each curve's parameter is moved to 0..1, the degrees are raised to
/// the larger and all breaks are shared; weights stay as written.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Ruled {
    /// The curve v = 0.
    pub from: Curve,
    /// The curve v = 1.
    pub to: Curve,
}

impl Ruled {
    pub(super) fn grid(&self, context: &mut Context<'_>) -> Option<PieceGrid> {
        let from = context.inside("from", |context| self.from.pieces(context));
        let to = context.inside("to", |context| self.to.pieces(context));
        let (from, to) = (from?.normalised(), to?.normalised());
        let degree = from.degree().max(to.degree());
        let breaks = common_breaks(&from, &to);
        let (from, to) = (from.refined(&breaks, degree), to.refined(&breaks, degree));
        let mut pieces = Vec::with_capacity(from.pieces.len());
        for (a, b) in from.pieces.iter().zip(&to.pieces) {
            let pairs = || a.iter().zip(b).flat_map(|(a, b)| [a, b]);
            let points = pairs().map(project).collect();
            let weights = pairs().map(|h| h.w).collect();
            pieces.push(piece(context, (degree, 1), points, Some(weights))?);
        }
        Some(PieceGrid {
            breaks_u: breaks,
            breaks_v: vec![0.0, 1.0],
            pieces,
        })
    }
}
