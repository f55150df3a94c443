//! What every report says of itself.

/// The caution that stands in every report, text or JSON.
pub const CAUTION: &str = "A geometric check only: figures say how surfaces and mesh lie, not whether a part is fit for use. Validation and release stay with the responsible engineers, licensed practice and the local codes that apply.";
