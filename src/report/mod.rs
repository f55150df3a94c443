//! What is told to people and programs: summaries and seam lists.

mod audit;
mod caution;
mod forecast;
mod seams;
mod seams_text;
mod summary;
mod summary_text;

pub use audit::{AuditDeviation, AuditReport, FindingLine};
pub use caution::CAUTION;
pub use forecast::Forecast;
pub use seams::{
    CrowdLine, EdgeName, FigureLine, LoopLine, NearMissLine, PlaceLine, SeamLine, SeamReport,
    SeamSummary, ToleranceLines,
};
pub use summary::{DeviationLine, SecondsLine, StorageLine, Summary, WrittenLine};
