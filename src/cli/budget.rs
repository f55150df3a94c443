//! What a run may take, as typed.

use clap::Args;
use thiserror::Error;

use crate::mesh::{Budget, MOST_BYTES, MOST_TRIANGLES};

/// Limits of a run.
#[derive(Debug, Clone, Copy, Args)]
pub(super) struct BudgetArguments {
    /// Most triangles to make; a run that is predicted to make more is refused
    /// before it begins. A number, or with k, M or G behind it [default: 50M]
    #[arg(long, value_name = "N", value_parser = triangles, hide_default_value = true, default_value_t = MOST_TRIANGLES)]
    max_triangles: u64,

    /// Most memory to take; a run that is predicted to take more is refused
    /// before it begins. Bytes, or with kB, MB or GB behind it [default: 16GB]
    #[arg(long, value_name = "SIZE", value_parser = memory, hide_default_value = true, default_value_t = MOST_BYTES)]
    max_memory: u64,
}

impl BudgetArguments {
    /// The limits as meant.
    pub(super) fn budget(&self) -> Budget {
        Budget {
            triangles: self.max_triangles,
            bytes: self.max_memory,
        }
    }
}

/// A text that is no amount.
#[derive(Debug, Clone, PartialEq, Eq, Error)]
enum AmountError {
    #[error("`{0}` is no number of triangles; write one, as 20000000 or 20M")]
    Triangles(String),
    #[error("`{0}` is no size of memory; write bytes, kB, MB or GB, as 8GB")]
    Memory(String),
}

fn triangles(text: &str) -> Result<u64, AmountError> {
    let units = [("k", 1e3), ("M", 1e6), ("G", 1e9), ("", 1.0)];
    amount(text, &units).ok_or_else(|| AmountError::Triangles(text.to_owned()))
}

fn memory(text: &str) -> Result<u64, AmountError> {
    let units = [
        ("kB", 1e3),
        ("MB", 1e6),
        ("GB", 1e9),
        ("TB", 1e12),
        ("B", 1.0),
        ("", 1.0),
    ];
    amount(text, &units).ok_or_else(|| AmountError::Memory(text.to_owned()))
}

/// A positive amount below 1e18 with one of the units behind it, the first that
/// fits.
fn amount(text: &str, units: &[(&str, f64)]) -> Option<u64> {
    let text = text.trim();
    let split = |unit: &str| {
        let end = text.len().checked_sub(unit.len())?;
        let (digits, own) = (text.get(..end)?, text.get(end..)?);
        own.eq_ignore_ascii_case(unit).then_some(digits)
    };
    let (digits, scale) = units
        .iter()
        .find_map(|(unit, scale)| Some((split(unit)?, scale)))?;
    let value = digits.trim().parse::<f64>().ok()? * scale;
    #[allow(
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "from 1 to 1e18"
    )]
    (1.0..1e18).contains(&value).then_some(value as u64)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn amounts_have_units() {
        assert_eq!(triangles("20000000"), Ok(20_000_000));
        assert_eq!(triangles("2.5 M"), Ok(2_500_000));
        assert_eq!(triangles("1e3"), Ok(1000));
        assert_eq!(memory("8GB"), Ok(8_000_000_000));
        assert_eq!(memory("512 mb"), Ok(512_000_000));
        assert_eq!(memory("100B"), Ok(100));
        for text in ["", "M", "-1", "0", "nan", "inf", "1e99", "8 GiB", "ü"] {
            assert!(triangles(text).is_err() && memory(text).is_err(), "{text}");
        }
    }
}
