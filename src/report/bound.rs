//! Proved bounds in print.

/// A bound as `write` shows figures, but never below its value: rounding in
/// print goes outward too. In full where `write` cannot show as much.
pub(crate) fn upward(value: f64, write: impl Fn(f64) -> String) -> String {
    let reaches = |text: &String| text.parse::<f64>().is_ok_and(|printed| printed >= value);
    // From nothing to twice the value: more than any rounding takes away.
    let steps = (0..20).map(|k| 1e-6 * f64::from(1_u32 << k));
    std::iter::once(0.0)
        .chain(steps)
        .map(|step| write(value + value * step))
        .find(reaches)
        .unwrap_or_else(|| format!("{value:e}"))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_bound_in_print_is_a_bound() {
        let short = |value: f64| format!("{value:.3}");
        assert_eq!(upward(0.123_44, short), "0.124");
        assert_eq!(upward(0.123_5, short), "0.124");
        assert_eq!(upward(0.05, short), "0.050");
        assert_eq!(upward(0.0, short), "0.000");
        assert_eq!(upward(2.5e-7, short), "2.5e-7");
        assert_eq!(upward(1.000_04e-7, |v| format!("{v:.3e}")), "1.001e-7");
    }
}
