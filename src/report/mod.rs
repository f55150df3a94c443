//! What is told to people and programs: summaries and seam lists.

mod caution;
mod seams;
mod seams_text;

pub use caution::CAUTION;
pub use seams::{
    CrowdLine, EdgeName, FigureLine, LoopLine, NearMissLine, PlaceLine, SeamLine, SeamReport,
    SeamSummary, ToleranceLines,
};
