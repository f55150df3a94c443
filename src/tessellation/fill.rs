//! One piece: laid out, proved, laid out better, refined until all is proved.

use super::certificate::{Flat, Prover};
use super::field::Field;
use super::finish;
use super::interpolation::SecondDerivatives;
use super::lattice::Ground;
use super::layout::{Layout, layout};
use super::nets::Nets;
use super::planar;
use super::quick::Quick;
use super::sweep::Sweep;
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

impl Proved {
    /// The worst of many.
    pub(super) fn worst(figures: &[Self]) -> Self {
        figures.iter().fold(Self::default(), |worst, figure| Self {
            to_mesh: worst.to_mesh.max(figure.to_mesh),
            to_surface: worst.to_surface.max(figure.to_surface),
        })
    }

    /// The larger of the two.
    pub(super) fn largest(&self) -> f64 {
        self.to_mesh.max(self.to_surface)
    }
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

impl Stuck {
    /// A triangle without area that cannot be left out.
    pub(super) fn uncovered(surface: &BezierPatch, place: [f64; 2]) -> Self {
        Self {
            place,
            point: surface.eval(place[0], place[1]),
            proved: f64::INFINITY,
        }
    }
}

/// Fills one piece with triangles that are proved within the limits: where
/// thinning is asked for, the best of several layouts, thinned.
pub(crate) fn fill(
    surface: &BezierPatch,
    outline: &Outline,
    limits: &Limits,
) -> Result<Filled, Stuck> {
    if !limits.thin {
        return filled(surface, outline, limits);
    }
    let mut best = filled(surface, outline, limits)?;
    for part in WIDER {
        let wider = Limits {
            interior: limits.chord * part,
            ..*limits
        };
        if let Ok(other) = filled(surface, outline, &wider)
            && other.triangles.len() < best.triangles.len()
        {
            best = other;
        }
    }
    Ok(best)
}

/// Parts of the chord that inner triangles are laid out for when thinning: what
/// fails is refined, which may come out at fewer triangles.
const WIDER: [f64; 3] = [0.985, 1.0, 1.03];

/// Fills one piece with triangles that are proved within the limits.
///
/// The layout follows the second derivatives and may come out a hair too wide,
/// which refinement would answer by halving. So the first proof of a layout is
/// looked at as a whole, and the layout made again with what it taught, while
/// more than a few triangles away from the border fail. The most promising
/// layout is then refined.
fn filled(surface: &BezierPatch, outline: &Outline, limits: &Limits) -> Result<Filled, Stuck> {
    if is_curve(surface) {
        return Ok(Filled::empty());
    }
    let prover = Prover::new(surface);
    if prover.slack() > limits.chord {
        // Rounding alone exceeds the chord: no refinement can help.
        return Err(Stuck {
            place: [0.5, 0.5],
            point: surface.eval(0.5, 0.5),
            proved: prover.slack(),
        });
    }
    let nets = Nets::new(surface);
    let field = Field::new(surface, &nets);
    let planar = planar::proof(surface, outline, limits);
    // With weights, rows that end in the sides' samples leave slivers at a border
    // that runs through a strong bend.
    let plain = !surface.is_rational() && !outline.collapsed.contains(&true);
    let coursed = plain && planar.is_none();
    let ground = Ground::new(&field, limits, planar.is_some(), coursed);
    let first = layout(surface, &ground, outline);
    let quick = (coursed && limits.shape_is_free())
        .then(|| Quick::new(surface, &nets))
        .flatten();
    if let Some(quick) = quick {
        let off = first.off(surface);
        let sweep = quick.sweep(&first, &off, &field, limits, prover.slack());
        if sweep.failed.is_empty() && sweep.upright && !limits.thin {
            return swept(surface, first, &sweep);
        }
        if first.inner_share(&sweep.failed) <= FEW {
            let derivatives = SecondDerivatives::new(surface, &nets);
            let work = Work::swept(surface, &field, &derivatives, limits, first, sweep);
            return refined(work, prover, planar);
        }
    }
    let derivatives = SecondDerivatives::new(surface, &nets);
    laid_out_again(
        surface,
        outline,
        ground,
        &derivatives,
        first,
        prover,
        planar,
    )
}

/// A piece the sweep has proved.
fn swept(surface: &BezierPatch, layout: Layout, sweep: &Sweep) -> Result<Filled, Stuck> {
    let candidates = sweep.highest.iter().map(|&(t, peak)| {
        let corners = layout.triangulation.triangles[t as usize];
        let flat = Flat::new(corners.map(|v| layout.points[v as usize]));
        (layout.triangulation.corners(t), flat, peak)
    });
    let attained = finish::attained(surface, candidates);
    let worst = Proved::worst(&sweep.figures);
    layout
        .finish(worst, attained)
        .map_err(|place| Stuck::uncovered(surface, place))
}

/// Refines what has not been proved.
fn refined(mut work: Work, mut prover: Prover, planar: Option<f64>) -> Result<Filled, Stuck> {
    let failed = work.round(&mut prover, planar);
    work.prove(&mut prover, failed, planar)?;
    if work.limits.thin && planar.is_none() {
        work.thin(&mut prover);
    }
    let proved = Proved::worst(&work.figures);
    work.finish(&mut prover, proved)
}

/// Lays a piece out until few triangles fail, and refines these.
fn laid_out_again(
    surface: &BezierPatch,
    outline: &Outline,
    mut ground: Ground,
    derivatives: &SecondDerivatives,
    first: Layout,
    mut prover: Prover,
    planar: Option<f64>,
) -> Result<Filled, Stuck> {
    let (field, limits) = (ground.field, ground.limits);
    let mut best: Option<Trial> = None;
    let mut next = first;
    for _ in 0..LAYOUTS {
        let mut work = Work::new(surface, field, derivatives, limits, next);
        let failed = work.round(&mut prover, planar);
        let inner = work.layout.inner_share(&failed);
        let cost = work.figures.len() + 2 * failed.len();
        let lesson = (inner > FEW).then(|| work.lesson(&mut prover));
        if best.as_ref().is_none_or(|b| cost < b.cost) {
            best = Some(Trial { work, failed, cost });
        }
        let Some(lesson) = lesson else { break };
        ground.correction.learn(lesson.into_iter());
        next = layout(surface, &ground, outline);
    }
    let Trial {
        mut work, failed, ..
    } = best.expect("at least one layout is tried");
    work.prove(&mut prover, failed, planar)?;
    if work.limits.thin && planar.is_none() {
        work.thin(&mut prover);
    }
    let proved = Proved::worst(&work.figures);
    work.finish(&mut prover, proved)
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

impl Filled {
    /// A piece without area, which has no triangles.
    fn empty() -> Self {
        Self {
            places: Vec::new(),
            points: Vec::new(),
            vertices: Vec::new(),
            triangles: Vec::new(),
            proved: Proved::default(),
            attained: Attained {
                distance: 0.0,
                place: [0.5, 0.5],
                point: Point::origin(),
            },
        }
    }
}

/// Control points nearer to a line, or to each other, than this part of the
/// piece's size are on it.
const ON_LINE: f64 = 1e-12;

/// Whether a piece is only a curve or a point: its control points lie on one
/// line, or do not change along one parameter (weights included).
fn is_curve(surface: &BezierPatch) -> bool {
    let origin = surface.control_point(0, 0);
    let far = |p: &Point| (p - origin).norm_squared();
    let farthest = surface
        .control_points()
        .max_by(|a, b| far(a).total_cmp(&far(b)))
        .unwrap_or(origin);
    let axis = farthest - origin;
    let near = ON_LINE * axis.norm();
    let on_line = |p: Point| (p - origin).cross(&axis).norm() <= near * axis.norm();
    if surface.control_points().all(on_line) {
        return true;
    }
    let (m, n) = surface.degree();
    let same = |a: (usize, usize), b: (usize, usize)| {
        let (p, q) = (
            surface.control_point(a.0, a.1),
            surface.control_point(b.0, b.1),
        );
        let (v, w) = (surface.weight(a.0, a.1), surface.weight(b.0, b.1));
        (p - q).norm() <= near && (v - w).abs() <= ON_LINE * v
    };
    let all = |test: &dyn Fn(usize, usize) -> bool| (0..=m).all(|i| (0..=n).all(|j| test(i, j)));
    all(&|i, j| same((i, j), (0, j))) || all(&|i, j| same((i, j), (i, 0)))
}

#[cfg(test)]
mod tests {
    use super::*;

    fn patch(point: impl Fn(f64, f64) -> Point) -> BezierPatch {
        let at = [0.0, 1.0, 2.0];
        let points = at.iter().flat_map(|&u| at.map(|v| point(u, v)));
        BezierPatch::new((2, 2), points.collect(), None).unwrap()
    }

    #[test]
    fn curves_are_told_from_surfaces() {
        assert!(is_curve(&patch(|_, _| Point::new(3.0, 4.0, 5.0))));
        assert!(is_curve(&patch(
            |u, v| Point::new(1.0, 2.0, 3.0) * (u * v + v)
        )));
        assert!(is_curve(&patch(|u, _| Point::new(u, u * u, 0.0))));
        assert!(is_curve(&patch(|_, v| Point::new(v * v, v, 1.0))));
        assert!(!is_curve(&patch(|u, v| Point::new(u, 1e-6 * v, 0.0))));
        assert!(!is_curve(&patch(|u, v| Point::new(u * v, v, 0.0))));
    }
}
