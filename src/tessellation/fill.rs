//! One piece: laid out, proved, laid out better, refined until all is proved.

use super::certificate::Prover;
use super::correction::Correction;
use super::field::Field;
use super::lattice::Ground;
use super::layout::layout;
use super::planar;
use super::work::Work;
use crate::bezier::BezierPatch;
use crate::sampling::{Limits, Outline};
use crate::scalar::Point;

/// A filled piece.
#[derive(Debug)]
pub struct Filled {
    /// Parameters of the vertices.
    pub places: Vec<[f64; 2]>,
    /// Their places in space.
    pub points: Vec<Point>,
    /// The border vertex each stands for, or `u32::MAX` for an inner one. On a
    /// collapsed side many stand for one.
    pub vertices: Vec<u32>,
    /// Triangles with area, counterclockwise in (u, v).
    pub triangles: Vec<[u32; 3]>,
    /// What was proved for the worst triangle.
    pub proved: Proved,
    /// A true deviation: the largest found at the triangles' peaks.
    pub attained: Attained,
}

/// Proved figures of the worst triangle.
#[derive(Debug, Clone, Copy, Default)]
pub struct Proved {
    /// Largest distance of the surface from the mesh.
    pub to_mesh: f64,
    /// Largest distance of the mesh from the surface.
    pub to_surface: f64,
}

/// A point of the surface and its distance from the triangle over it.
#[derive(Debug, Clone, Copy)]
pub struct Attained {
    /// Distance from the triangle's plane.
    pub distance: f64,
    /// Parameters on the piece.
    pub place: [f64; 2],
    /// The point itself.
    pub point: Point,
}

/// A piece that cannot be held to its limits.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Stuck {
    pub(crate) place: [f64; 2],
    pub(crate) point: Point,
    pub(crate) proved: f64,
}

/// Fills one piece with triangles that are proved within the limits.
///
/// The layout follows the second derivatives and may come out a hair too wide,
/// which refinement would answer by halving. So the first proof of a layout is
/// looked at as a whole, and the layout made again with what it taught, while
/// more than a few triangles away from the border fail. The most promising
/// layout is then refined.
pub(crate) fn fill(
    surface: &BezierPatch,
    outline: &Outline,
    limits: &Limits,
) -> Result<Filled, Stuck> {
    let field = Field::new(surface);
    let planar = planar::proof(surface, outline, limits);
    let mut ground = Ground {
        field: &field,
        limits,
        correction: Correction::none(),
        flat: planar.is_some(),
    };
    let mut prover = Prover::new(surface);
    let mut best: Option<Trial> = None;
    for _ in 0..LAYOUTS {
        let mut work = Work::new(surface, &field, limits, layout(surface, &ground, outline));
        let failed = work.round(&mut prover, planar);
        let inner = work.inner_failing(&failed);
        let cost = work.figures.len() + 2 * failed.len();
        let lesson = (inner > FEW).then(|| work.lesson());
        if best.as_ref().is_none_or(|b| cost < b.cost) {
            best = Some(Trial { work, failed, cost });
        }
        let Some(lesson) = lesson else { break };
        ground.correction.learn(lesson.into_iter());
    }
    let Trial {
        mut work, failed, ..
    } = best.expect("at least one layout is tried");
    let proved = work.prove(&mut prover, failed, planar)?;
    Ok(work.finish(proved))
}

/// Layouts tried at most.
const LAYOUTS: usize = 4;

/// A layout with no more than this share of failing inner triangles is refined
/// without another try.
const FEW: f64 = 0.04;

/// A layout that has been proved once.
struct Trial<'a> {
    work: Work<'a>,
    failed: Vec<u32>,
    /// Triangles, failing ones counted three times: about what refinement
    /// would make of them.
    cost: usize,
}
