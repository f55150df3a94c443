//! A proved mesh that is passed on part by part and never held as a whole.
//!
//! Seams are sampled beforehand, so parts fit together however they are made;
//! what needs the whole mesh (strips, its closedness by edges, a deviation measured
//! against all of it) is not found.

use std::time::Instant;

use super::job::{Ready, batches};
use super::rough::Size;
use super::{Budget, Mesh, MeshError, Stages};
use crate::patch_set::{PatchSet, PieceId};
use crate::sampling::Limits;
use crate::topology::Topology;

/// A mesh has about this many triangles for the size of its pieces at most (see
/// `rough`).
const OVER_SIZE: f64 = 2.5;

/// Pieces are filled in batches of about this size together: threads have enough to
/// do, and some 60 MB hold it.
const BATCH: f64 = 250_000.0;

/// What is known of a mesh that was passed on.
#[derive(Debug)]
pub struct Streamed {
    /// Who meets whom.
    pub topology: Topology,
    /// Triangles.
    pub triangles: u64,
    /// Patches with triangles.
    pub patches: usize,
    /// Largest distance of the surface from the mesh: proved.
    pub proved_to_mesh: f64,
    /// Largest distance of the mesh from the surface: proved.
    pub proved_to_surface: f64,
    /// How few triangles would do (see [`floor`](crate::tessellation::floor)).
    pub floor: f64,
    /// Seconds by stage; those of `tessellation` include what `take` did.
    pub seconds: Stages,
}

impl Streamed {
    /// Meshes the pieces for which `wanted` holds, as
    /// [`Meshed::within`](super::Meshed::within) does, and gives `take` some patches
    /// at a time, in the set's order, of which a mesh as a whole would have the same
    /// triangles. Memory is bounded by what some hundred thousand triangles take, or the
    /// largest piece.
    ///
    /// # Errors
    /// [`MeshError`] says which stage failed, where and why; or what `take` returns.
    pub fn new<E: From<MeshError>>(
        set: &PatchSet,
        limits: &Limits,
        budget: &Budget,
        wanted: impl Fn(PieceId) -> bool + Sync,
        mut stage: impl FnMut(&'static str),
        mut take: impl FnMut(&Mesh) -> Result<(), E>,
    ) -> Result<Self, E> {
        let ready = Ready::new(set, limits, budget, &wanted, (false, held), &mut stage)?;
        let mut seconds = ready.seconds;
        stage("tessellating, proving and writing");
        let clock = Instant::now();
        let (mut triangles, mut patches) = (0, 0);
        let (mut to_mesh, mut to_surface) = (0.0_f64, 0.0_f64);
        let mut last = None;
        ready.fill((set, limits, budget), &wanted, BATCH, |_, filled| {
            for piece in filled.pieces.iter().flatten() {
                to_mesh = to_mesh.max(piece.proved.to_mesh);
                to_surface = to_surface.max(piece.proved.to_surface);
            }
            let mesh = Mesh::assemble_telling(set, &ready.samples, &filled, false, |_| ());
            triangles += mesh.triangles.len() as u64;
            // A patch of many pieces may go on in the next batch.
            let mut names = mesh.parts.iter().map(|part| Some(part.name.clone()));
            patches += names.clone().filter(|name| *name != last).count();
            last = names.next_back().unwrap_or(last.take());
            take(&mesh)
        })?;
        if triangles == 0 {
            return Err(E::from(MeshError::Empty));
        }
        seconds.tessellation = clock.elapsed().as_secs_f64();
        Ok(Self {
            topology: ready.topology,
            triangles,
            patches,
            proved_to_mesh: to_mesh,
            proved_to_surface: to_surface,
            floor: ready.floor,
            seconds,
        })
    }

    /// The larger proved bound of the two directions.
    #[must_use]
    pub fn proved(&self) -> f64 {
        self.proved_to_mesh.max(self.proved_to_surface)
    }
}

/// Triangles in memory at a time: those of the largest batch.
fn held(triangles: f64, sizes: &[Size]) -> f64 {
    let of = |batch: std::ops::Range<usize>| -> f64 {
        sizes[batch].iter().map(|size| size.whole()).sum()
    };
    let largest = batches(sizes, BATCH)
        .into_iter()
        .map(of)
        .fold(0.0, f64::max);
    triangles.min(OVER_SIZE * largest)
}
