//! Continuity across seams: gap (G0), tangent angle (G1), curvature (G2), all
//! bracketed, and the verdict.

mod angle;
mod apart;
mod bend;
mod curvature;
#[cfg(test)]
mod curvature_tests;
mod figure;
mod follow;
mod matched;
mod rows;
mod standing;
mod strip;
mod survey;
#[cfg(test)]
mod survey_tests;
mod taylor;
#[cfg(test)]
mod tests;

pub use angle::{Angle, Meeting};
pub use curvature::CurvatureStep;
pub use figure::{End, Figure, Finding, PatchEdge, Place, Verdict};
pub use survey::{Crowd, OpenLoop, Survey, SurveyedSeam, patch_edge};
