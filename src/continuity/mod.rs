//! Continuity across seams: gap (G0), tangent angle (G1), curvature (G2), all
//! bracketed, and the verdict.

mod angle;
mod apart;
mod bend;
mod boundary;
mod curvature;
#[cfg(test)]
mod curvature_tests;
mod failing;
mod figure;
mod follow;
mod matched;
mod place;
#[cfg(test)]
mod property_tests;
mod rows;
mod seam;
mod slit;
mod standing;
mod strip;
mod survey;
#[cfg(test)]
mod survey_tests;
mod taylor;
#[cfg(test)]
mod tests;

pub use angle::{Angle, Meeting};
pub use boundary::{Crowd, OpenLoop};
pub use curvature::CurvatureStep;
pub use failing::Failing;
pub use figure::{End, Figure, Finding, PatchEdge, Place, Verdict};
pub use place::patch_edge;
pub use seam::{RATIO_FLOOR_PER_MM, SurveyedSeam};
pub use slit::Slit;
pub use survey::Survey;
