//! Pieces as one surface: places that may be moved from piece to piece.
//!
//! A vertex knows its piece and (u, v) there, so it lies on the surface whatever
//! is done to it. It moves by Gauss-Newton steps towards a target,
//!
//! ```text
//! min over (a, b) of |S + a S_u + b S_v - target|
//! ```
//!
//! and where a step leaves the unit square it goes on in the piece across the
//! seam, if that may be crossed; else it ends on the border.

use super::kept::Seams;
use crate::bezier::Side;
use crate::patch_set::{PatchSet, PieceId};
use crate::scalar::{Point, Vector};
use crate::topology::{EdgeId, Span, Topology};

/// Seams crossed by one move at most.
const CROSSINGS: usize = 24;

/// The longest step in a parameter: beyond it a first derivative says nothing.
const LONGEST: f64 = 0.5;

/// Where on which piece.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Place {
    /// Index of the piece.
    pub(super) piece: u32,
    /// Parameters on its unit square.
    pub(super) uv: [f64; 2],
}

/// A place with the surface there.
#[derive(Debug, Clone, Copy)]
pub(super) struct Spot {
    pub(super) place: Place,
    pub(super) point: Point,
    /// S_u and S_v.
    pub(super) du: Vector,
    pub(super) dv: Vector,
}

/// The surfaces of a set and the seams that may be crossed.
pub(super) struct Atlas<'a> {
    pub(super) set: &'a PatchSet,
    pub(super) topology: &'a Topology,
    pub(super) seams: &'a Seams,
}

/// The span that holds parameter `t` of an edge.
fn span_at(topology: &Topology, edge: EdgeId, t: f64) -> Option<(usize, &Span)> {
    let range = topology.edges()[edge.index()].spans.clone();
    let spans = &topology.spans()[range.clone()];
    let at = spans
        .partition_point(|span| span.t[1] < t)
        .min(spans.len().checked_sub(1)?);
    Some((range.start + at, &spans[at]))
}

/// The parameter on another use of a seam that lies at the same fraction of it.
pub(super) fn carried(from: &Span, to: &Span, t: f64) -> f64 {
    let along = ((t - from.t[0]) / (from.t[1] - from.t[0])).clamp(0.0, 1.0);
    let along = if from.reversed == to.reversed {
        along
    } else {
        1.0 - along
    };
    to.t[0] * (1.0 - along) + to.t[1] * along
}

impl Atlas<'_> {
    /// The surface at a place.
    pub(super) fn spot(&self, place: Place) -> Spot {
        let surface = &self.set.pieces()[place.piece as usize].surface;
        let (point, du, dv) = surface.frame(place.uv[0], place.uv[1]);
        Spot {
            place,
            point,
            du,
            dv,
        }
    }

    /// 1 where the outward normal is S_u x S_v, else -1.
    pub(super) fn outward(&self, piece: u32) -> f64 {
        if self.set.patch_of(PieceId::new(piece as usize)).flipped {
            -1.0
        } else {
            1.0
        }
    }

    /// The outward normal at a spot, not of unit length; zero at a pole.
    pub(super) fn normal(&self, spot: &Spot) -> Vector {
        spot.du.cross(&spot.dv) * self.outward(spot.place.piece)
    }

    /// The place across a border, where it may be crossed.
    fn across(&self, piece: u32, side: Side, t: f64) -> Option<Place> {
        let edge = EdgeId::of(PieceId::new(piece as usize), side);
        let (index, span) = span_at(self.topology, edge, t)?;
        if self.seams.is_kept(span.seam) {
            return None;
        }
        let seam = &self.topology.seams()[span.seam.index()];
        let other = seam.spans.iter().find(|id| id.index() != index)?;
        let other = &self.topology.spans()[other.index()];
        let uv = other.edge.side().at(carried(span, other, t));
        Some(Place {
            piece: u32::try_from(other.edge.piece().index()).expect("pieces are counted in u32"),
            uv,
        })
    }

    /// Moves towards a target by so many steps, from piece to piece.
    pub(super) fn toward(&self, from: &Spot, target: &Point, steps: usize) -> Spot {
        let mut spot = *from;
        let (mut crossed, mut done) = (0, 0);
        while done < steps {
            let Some(step) = spot.step(&(target - spot.point)) else {
                break;
            };
            let [u, v] = spot.place.uv;
            let piece = spot.place.piece;
            let Some((fraction, side)) = exit([u, v], step) else {
                spot = self.spot(Place {
                    piece,
                    uv: [u + step[0], v + step[1]],
                });
                done += 1;
                continue;
            };
            let along = match side {
                Side::U0 | Side::U1 => v + fraction * step[1],
                Side::V0 | Side::V1 => u + fraction * step[0],
            };
            let next = self.across(piece, side, along.clamp(0.0, 1.0));
            if let Some(place) = next.filter(|_| crossed < CROSSINGS) {
                crossed += 1;
                spot = self.spot(place);
            } else {
                let uv = [u + step[0], v + step[1]].map(|t| t.clamp(0.0, 1.0));
                spot = self.spot(Place { piece, uv });
                done += 1;
            }
        }
        spot
    }
}

impl Spot {
    /// (a, b) of the step a S_u + b S_v nearest to `direction`.
    fn step(&self, direction: &Vector) -> Option<[f64; 2]> {
        let (e, f, g) = (
            self.du.norm_squared(),
            self.du.dot(&self.dv),
            self.dv.norm_squared(),
        );
        let determinant = e * g - f * f;
        if determinant <= e * g * 1e-12 || determinant <= 0.0 {
            return None;
        }
        let (p, q) = (direction.dot(&self.du), direction.dot(&self.dv));
        let step = [(p * g - q * f) / determinant, (q * e - p * f) / determinant];
        let largest = step[0].abs().max(step[1].abs());
        if !largest.is_finite() {
            return None;
        }
        let scale = (LONGEST / largest).min(1.0);
        Some(step.map(|s| s * scale))
    }
}

/// The fraction of a step at which it leaves the unit square, and where.
fn exit([u, v]: [f64; 2], [a, b]: [f64; 2]) -> Option<(f64, Side)> {
    let mut found: Option<(f64, Side)> = None;
    for (side, at, step, end) in [
        (Side::U0, u, a, 0.0),
        (Side::U1, u, a, 1.0),
        (Side::V0, v, b, 0.0),
        (Side::V1, v, b, 1.0),
    ] {
        let outside = if end > 0.5 {
            at + step > 1.0
        } else {
            at + step < 0.0
        };
        if outside {
            let fraction = ((end - at) / step).clamp(0.0, 1.0);
            if found.is_none_or(|(f, _)| fraction < f) {
                found = Some((fraction, side));
            }
        }
    }
    found
}
