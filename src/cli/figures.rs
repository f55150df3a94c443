//! What a file for solvers says of the surface under a mesh.

use super::draw::deviations;
use crate::format::SurfaceFigures;
use crate::mesh::{Mesh, Nodes};
use crate::patch_set::PatchSet;
use crate::scalar::Tolerance;

/// Figures at the points and of the triangles of a mesh.
#[derive(Debug, Default)]
pub(super) struct Figures {
    nodes: Nodes,
    deviations: Vec<f64>,
}

impl Figures {
    /// The figures of a mesh with evidence; the deviation of each triangle is proved
    /// anew.
    ///
    /// # Errors
    /// Where mesh and set cannot be compared.
    pub(super) fn of(
        set: &PatchSet,
        mesh: &Mesh,
        chord: Tolerance,
    ) -> Result<Self, Box<dyn std::error::Error>> {
        Ok(Self {
            nodes: Nodes::of(set, mesh).unwrap_or_default(),
            deviations: deviations(set, mesh, chord.get())?,
        })
    }

    /// The figures of a sized mesh, whose triangles are proved already.
    pub(super) fn proved(set: &PatchSet, mesh: &Mesh, deviations: Vec<f64>) -> Self {
        Self {
            nodes: Nodes::of(set, mesh).unwrap_or_default(),
            deviations,
        }
    }

    /// As the writer takes them.
    pub(super) fn given(&self) -> SurfaceFigures<'_> {
        SurfaceFigures {
            nodes: Some(&self.nodes),
            deviations: Some(&self.deviations),
        }
    }
}
