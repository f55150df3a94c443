//! One run of vertices for every seam, a function of the seam alone.
//!
//! A run depends on the master edge, the nodes at its ends, the tolerances and
//! the surfaces that meet there, in the order of the seam's uses: not on the
//! thread, the file's order, or anything beyond the seam. Samples lie on the
//! master edge; the other uses find their own parameters by nearest point and
//! count the gap in their proved deviation.

mod cumulative;
mod density;
mod limits;
mod outline;
mod projection;
mod run;
mod samples;

pub(crate) use cumulative::{Cumulative, ratio};
pub use limits::Limits;
pub use outline::{BorderVertex, Outline};
pub use run::{Run, SamplingError};
pub use samples::Samples;
