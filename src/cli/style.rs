//! How results are printed.

use clap::ValueEnum;

/// Text for people or JSON for programs.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default, ValueEnum)]
pub(super) enum OutputStyle {
    /// Text for people.
    #[default]
    Text,
    /// JSON for programs.
    Json,
}
