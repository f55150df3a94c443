//! The bilinearly blended surface of four boundary curves.
//!
//! ```text
//! S(u, v) = (1-v) c0(u) + v c1(u) + (1-u) d0(v) + u d1(v) - B(u, v)
//! ```
//!
//! c0, c1 are the edges v = 0 and v = 1, d0, d1 the edges u = 0 and u = 1, B the
//! bilinear surface of the corners (Coons 1967). Linear functions have their
//! own values as control values, so the formula holds for the control points
//! at u_i, v_j, the evenly spaced parameters of the net.
//!
//! Rational curves are blended in homogeneous form. For that the weights must
//! agree in the corners: every curve is first given end weights of 1, by a
//! common factor and, where its two end weights differ, by a linear-fractional
//! change of its parameter. Neither changes the curve's shape.

use serde::{Deserialize, Serialize};

use super::context::Context;
use super::curve::Curve;
use super::curve_pieces::{CurvePieces, common_breaks};
use super::fault::{MAX_WEIGHT, Step, SurfaceFault};
use super::grid::PieceGrid;
use super::homogeneous::{Lifted, lerp, project, real};
use super::kind::piece;

/// A Coons patch: four curves that meet in the corners within the gap
/// tolerance. Where they do not meet exactly, the ends of `v0` and `v1` stand.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Coons {
    /// The edge u = 0, running in v.
    pub u0: Curve,
    /// The edge u = 1, running in v.
    pub u1: Curve,
    /// The edge v = 0, running in u.
    pub v0: Curve,
    /// The edge v = 1, running in u.
    pub v1: Curve,
}

impl Coons {
    pub(super) fn grid(&self, context: &mut Context<'_>) -> Option<PieceGrid> {
        let mut read = |curve: &Curve, field| {
            let pieces = context.inside(field, |context| curve.pieces(context))?;
            Some(pieces.normalised().with_unit_end_weights())
        };
        let u0 = read(&self.u0, "u0");
        let u1 = read(&self.u1, "u1");
        let v0 = read(&self.v0, "v0");
        let v1 = read(&self.v1, "v1");
        let (mut u0, mut u1, v0, v1) = (u0?, u1?, v0?, v1?);
        if !corners_meet(context, [&u0, &u1], [&v0, &v1]) {
            return None;
        }
        let corners = [v0.ends(), v1.ends()];
        set_ends(&mut u0, corners[0][0], corners[1][0]);
        set_ends(&mut u1, corners[0][1], corners[1][1]);

        let (p, q) = (v0.degree().max(v1.degree()), u0.degree().max(u1.degree()));
        let breaks_u = common_breaks(&v0, &v1);
        let breaks_v = common_breaks(&u0, &u1);
        let along_u = [v0, v1].map(|curve| curve.refined(&breaks_u, p));
        let along_v = [u0, u1].map(|curve| curve.refined(&breaks_v, q));
        let count = (breaks_u.len() - 1).saturating_mul(breaks_v.len() - 1);
        if count > MAX_PIECES {
            context.fault(&[], SurfaceFault::TooManyPieces(count));
            return None;
        }
        let blend = Blend { along_u, along_v };

        let mut pieces = Vec::new();
        for a in 0..breaks_u.len() - 1 {
            for b in 0..breaks_v.len() - 1 {
                let net = blend.net(a, b);
                if let Some(low) = net.iter().find(|h| h.w < 1.0 / MAX_WEIGHT) {
                    context.fault(&[], SurfaceFault::CoonsWeight(low.w));
                    return None;
                }
                let points = net.iter().map(project).collect();
                let weights = net.iter().map(|h| h.w).collect();
                pieces.push(piece(context, (p, q), points, Some(weights))?);
            }
        }
        Some(PieceGrid {
            breaks_u,
            breaks_v,
            pieces,
        })
    }
}

/// Curves with many knots each would multiply; no real panel comes near.
const MAX_PIECES: usize = 10_000;

/// The refined curves: v = 0, v = 1 and u = 0, u = 1.
struct Blend {
    along_u: [CurvePieces; 2],
    along_v: [CurvePieces; 2],
}

impl Blend {
    /// The homogeneous net of piece (a, b), v fastest.
    fn net(&self, a: usize, b: usize) -> Vec<Lifted> {
        let [c0, c1] = &self.along_u;
        let [d0, d1] = &self.along_v;
        let (p, q) = (c0.degree(), d0.degree());
        let corners = [c0.ends(), c1.ends()];
        let us = stations(&c0.breaks, a, p);
        let vs = stations(&d0.breaks, b, q);
        let (last_a, last_b) = (c0.pieces.len() - 1, d0.pieces.len() - 1);
        let mut net = Vec::with_capacity((p + 1) * (q + 1));
        for (i, &u) in us.iter().enumerate() {
            for (j, &v) in vs.iter().enumerate() {
                let (c0, c1) = (c0.pieces[a][i], c1.pieces[a][i]);
                let (d0, d1) = (d0.pieces[b][j], d1.pieces[b][j]);
                // The boundary is copied: there the formula is an identity,
                // and rounding must not part neighbours.
                net.push(if j == 0 && b == 0 {
                    c0
                } else if j == q && b == last_b {
                    c1
                } else if i == 0 && a == 0 {
                    d0
                } else if i == p && a == last_a {
                    d1
                } else {
                    let bilinear = lerp(
                        lerp(corners[0][0], corners[0][1], u),
                        lerp(corners[1][0], corners[1][1], u),
                        v,
                    );
                    lerp(c0, c1, v) + (lerp(d0, d1, u) - bilinear)
                });
            }
        }
        net
    }
}

/// The evenly spaced parameters of a net of `degree` on one piece.
fn stations(breaks: &[f64], piece: usize, degree: usize) -> Vec<f64> {
    let (from, to) = (breaks[piece], breaks[piece + 1]);
    (0..=degree)
        .map(|k| {
            let t = real(k) / real(degree);
            from * (1.0 - t) + to * t
        })
        .collect()
}

fn corners_meet(
    context: &mut Context<'_>,
    along_v: [&CurvePieces; 2],
    along_u: [&CurvePieces; 2],
) -> bool {
    let mut good = true;
    for (v, first) in [(0, "v0"), (1, "v1")] {
        for (u, second) in [(0, "u0"), (1, "u1")] {
            let here = along_u[v].end_points()[u];
            let there = along_v[u].end_points()[v];
            let distance = (here - there).norm();
            let gap = context.gap;
            if distance > gap {
                let number = |side| if side == 0 { 0 } else { 1 };
                context.fault(
                    &[Step::Field(second)],
                    SurfaceFault::CoonsCorner {
                        first,
                        second,
                        u: number(u),
                        v: number(v),
                        distance,
                        gap,
                    },
                );
                good = false;
            }
        }
    }
    good
}

fn set_ends(curve: &mut CurvePieces, start: Lifted, end: Lifted) {
    if let Some(first) = curve.pieces.first_mut().and_then(|piece| piece.first_mut()) {
        *first = start;
    }
    if let Some(last) = curve.pieces.last_mut().and_then(|piece| piece.last_mut()) {
        *last = end;
    }
}
