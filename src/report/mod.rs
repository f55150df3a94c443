//! What is told to people and programs: summaries and seam lists.

mod audit;
mod bound;
mod caution;
mod comparison;
mod family;
mod forecast;
mod mending;
mod panel_pairs;
mod quality;
mod seam_line;
mod seams;
mod seams_csv;
mod seams_rest;
mod seams_text;
mod sized;
mod streamed;
mod summary;
mod summary_text;
mod wording;

pub use audit::{AuditDeviation, AuditReport, FindingLine};
pub(crate) use bound::upward;
pub use caution::CAUTION;
pub use comparison::{
    ComparisonReport, ComparisonSummary, DescriptionLine, PatchChangeLine, SeamChangeLine,
    StandingLine,
};
pub use family::{FAMILY_FACTOR, FamilySummary, LevelLine};
pub use forecast::Forecast;
pub use mending::{LeftLine, MendedLine, MendingReport, MoveLine};
pub use panel_pairs::PanelPairLine;
pub use quality::{HistogramLine, MeasureLine, QualityReport, TIME_STEP, WorstLine};
pub use seam_line::{EdgeName, FailingLine, FigureLine, LimitLine, PlaceLine, SeamLine};
pub use seams::{
    CrowdLine, LoopLine, NearMissLine, OrientationLine, OverlapLine, SeamReport, SeamSummary,
    SliverLine, ToleranceLines,
};
pub use sized::{ForcedLine, SizedReport};
pub use streamed::{ProvedLine, StreamSummary};
pub use summary::{BridgedLine, DeviationLine, SecondsLine, StorageLine, Summary, WrittenLine};
pub(crate) use wording::many;
