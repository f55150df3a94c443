//! `tessellate --size`: what is asked of a mesh by size and shape.

use clap::Args;

use super::making::Job;
use crate::sampling::Limits;
use crate::scalar::Length;
use crate::sizing::{DEFAULT_GROWTH, LEAST_GROWTH, Sizing};

/// Sizes as typed.
#[derive(Debug, Args)]
pub(super) struct SizingArguments {
    /// Mesh by size and shape: near-equilateral triangles with edges of this length,
    /// or shorter where the chord, the normal angle or the file asks for it. The
    /// chord is held if it is given here
    #[arg(long, value_name = "LENGTH", allow_negative_numbers = true,
          conflicts_with_all = ["thin", "stream", "dry_run", "max_edge"])]
    size: Option<Length>,

    /// Smallest size of edges, with --size; shorter ones are named
    #[arg(
        long,
        value_name = "LENGTH",
        allow_negative_numbers = true,
        requires = "size"
    )]
    min_edge: Option<Length>,

    /// Largest ratio of the sizes at the two ends of an edge, with --size
    /// [default: 1.2]
    #[arg(
        long,
        value_name = "RATIO",
        allow_negative_numbers = true,
        requires = "size"
    )]
    growth: Option<f64>,
}

/// The growth ratio of a mesh that is so many times finer: sizes then rise as steeply
/// in relation to the shape, over shorter edges. Never less than what can be worked
/// with.
fn growth(asked: f64, finer: f64) -> f64 {
    let growth = 1.0 + (asked - 1.0) / finer;
    growth.max(LEAST_GROWTH.min(asked))
}

impl SizingArguments {
    /// Whether a sized mesh is asked for.
    pub(super) fn given(&self) -> bool {
        self.size.is_some()
    }

    /// What is asked for, `finer` times finer; `chord` is what is held in memory.
    pub(super) fn sizing(
        &self,
        job: &Job<'_>,
        limits: &Limits,
        (chord, finer): (Option<f64>, f64),
    ) -> Option<Sizing> {
        let unit = job.set.unit();
        Some(Sizing {
            size: self.size?.in_unit(unit) / finer,
            min_edge: self.min_edge.map(|e| e.in_unit(unit) / finer),
            growth: growth(self.growth.unwrap_or(DEFAULT_GROWTH), finer),
            chord,
            normal_rad: limits.normal_rad,
        })
    }
}
