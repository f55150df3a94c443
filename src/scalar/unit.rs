//! Units of length, and lengths as people type them (`0.05`, `0.05mm`, `2in`).

use std::fmt;
use std::str::FromStr;

use thiserror::Error;

/// The length unit of a patch set.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum LengthUnit {
    /// Metre.
    Metre,
    /// Centimetre.
    Centimetre,
    /// Millimetre, the default.
    #[default]
    Millimetre,
    /// Inch, 25.4 mm exactly (the international inch).
    Inch,
}

impl LengthUnit {
    /// How many millimetres one unit is.
    #[must_use]
    pub fn in_mm(self) -> f64 {
        match self {
            Self::Metre => 1000.0,
            Self::Centimetre => 10.0,
            Self::Millimetre => 1.0,
            Self::Inch => 25.4,
        }
    }

    /// The symbol written behind a figure: `m`, `cm`, `mm` or `in`.
    #[must_use]
    pub fn symbol(self) -> &'static str {
        match self {
            Self::Metre => "m",
            Self::Centimetre => "cm",
            Self::Millimetre => "mm",
            Self::Inch => "in",
        }
    }

    fn from_symbol(text: &str) -> Option<Self> {
        Some(match text {
            "m" => Self::Metre,
            "cm" => Self::Centimetre,
            "mm" => Self::Millimetre,
            "in" | "inch" => Self::Inch,
            _ => return None,
        })
    }
}

impl fmt::Display for LengthUnit {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.symbol())
    }
}

/// A positive length with an optional unit; without one it is in the set's unit.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Length {
    value: f64,
    unit: Option<LengthUnit>,
}

/// A text that is no length.
#[derive(Debug, Clone, PartialEq, Eq, Error)]
#[error(
    "`{0}` is no length; write a positive number, with m, cm, mm or in behind it if it is not in the set's unit, for example 0.05mm"
)]
pub struct LengthError(String);

impl Length {
    /// The length in the given unit.
    #[must_use]
    pub fn in_unit(self, unit: LengthUnit) -> f64 {
        match self.unit {
            Some(own) if own != unit => self.value * own.in_mm() / unit.in_mm(),
            _ => self.value,
        }
    }
}

impl fmt::Display for Length {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let unit = self.unit.map_or("", LengthUnit::symbol);
        write!(f, "{}{unit}", self.value)
    }
}

impl FromStr for Length {
    type Err = LengthError;

    fn from_str(text: &str) -> Result<Self, LengthError> {
        let fault = || LengthError(text.to_owned());
        let trimmed = text.trim();
        let digits = trimmed.trim_end_matches(|c: char| c.is_ascii_alphabetic());
        let suffix = &trimmed[digits.len()..];
        let unit = if suffix.is_empty() {
            None
        } else {
            Some(LengthUnit::from_symbol(suffix).ok_or_else(fault)?)
        };
        let value: f64 = digits.trim().parse().map_err(|_| fault())?;
        if value.is_finite() && value > 0.0 {
            Ok(Self { value, unit })
        } else {
            Err(fault())
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn lengths_convert_between_units() {
        let length: Length = "0.05mm".parse().unwrap();
        approx::assert_relative_eq!(length.in_unit(LengthUnit::Metre), 5e-5);
        let inch: Length = "2 in".parse().unwrap();
        approx::assert_relative_eq!(inch.in_unit(LengthUnit::Millimetre), 50.8);
        let bare: Length = "3".parse().unwrap();
        approx::assert_relative_eq!(bare.in_unit(LengthUnit::Inch), 3.0);
    }

    #[test]
    fn what_is_no_length_is_refused() {
        for text in ["", "mm", "-1", "0", "nan", "inf", "1e999", "3 ells", "1..2"] {
            assert!(text.parse::<Length>().is_err(), "{text}");
        }
    }
}
