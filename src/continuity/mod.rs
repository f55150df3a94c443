//! Continuity across seams: gap (G0), tangent angle (G1), curvature (G2,
//! sampled), and the verdict.

mod angle;
mod apart;
mod curvature;
mod figure;
mod slip;
mod standing;
mod strip;
mod survey;
#[cfg(test)]
mod survey_tests;
#[cfg(test)]
mod tests;

pub use angle::{Angle, Meeting};
pub use curvature::CurvatureStep;
pub use figure::{End, Figure, Finding, PatchEdge, Place, Verdict};
pub use survey::{Crowd, OpenLoop, Survey, SurveyedSeam, patch_edge};
