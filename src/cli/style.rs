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

impl OutputStyle {
    /// A report in this style.
    ///
    /// # Errors
    /// Where it cannot be put into JSON.
    pub(super) fn print<T: serde::Serialize>(
        self,
        report: &T,
        text: impl FnOnce(&T) -> String,
    ) -> serde_json::Result<String> {
        Ok(match self {
            Self::Text => text(report),
            Self::Json => serde_json::to_string_pretty(report)? + "\n",
        })
    }
}
