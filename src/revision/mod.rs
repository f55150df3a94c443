//! What changed between two revisions of a set: patches by name, and their
//! seams.

mod comparison;
mod course;
mod distance;
mod seams;
mod sheet;
#[cfg(test)]
mod tests;

pub use comparison::{Comparison, Description, PatchChange, PatchState, RevisionError};
pub use course::Course;
pub use distance::{Distance, distance};
pub use seams::{SeamChange, SeamStanding, Trend};
