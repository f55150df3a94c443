//! Binomial coefficients.

use std::borrow::Cow;

/// The largest row at hand: the normal of a rational piece of degree 15, squared,
/// has degree 88. Rows up to 56 are exact.
const MOST: usize = 96;

/// Pascal's triangle.
static ROWS: [[f64; MOST + 1]; MOST + 1] = pascal();

const fn pascal() -> [[f64; MOST + 1]; MOST + 1] {
    let mut rows = [[0.0; MOST + 1]; MOST + 1];
    let mut n = 0;
    while n <= MOST {
        rows[n][0] = 1.0;
        let mut k = 1;
        while k <= n {
            rows[n][k] = rows[n - 1][k - 1] + rows[n - 1][k];
            k += 1;
        }
        n += 1;
    }
    rows
}

/// C(n, k) for every k from 0 to n.
pub(crate) fn binomials(n: usize) -> Cow<'static, [f64]> {
    ROWS.get(n).map_or_else(
        || Cow::Owned((0..=n).map(|k| product(n, k)).collect()),
        |row| Cow::Borrowed(&row[..=n]),
    )
}

/// C(n, k), zero for k above n.
pub(crate) fn binomial(n: usize, k: usize) -> f64 {
    if k > n {
        return 0.0;
    }
    ROWS.get(n).map_or_else(|| product(n, k), |row| row[k])
}

/// The rows too long for the table.
fn product(n: usize, k: usize) -> f64 {
    #[allow(clippy::cast_precision_loss, reason = "degrees are far below 2^52")]
    (0..k).fold(1.0, |value, i| value * (n - i) as f64 / (i + 1) as f64)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// The numbers of hands of five and of thirteen cards from 52, as every
    /// handbook of combinatorics gives them (from memory).
    #[test]
    #[allow(clippy::float_cmp, reason = "the numbers are exact in binary")]
    fn as_in_the_handbook() {
        assert_eq!(binomial(52, 5), 2_598_960.0);
        assert_eq!(binomial(52, 13), 635_013_559_600.0);
        assert_eq!(binomials(4).as_ref(), [1.0, 4.0, 6.0, 4.0, 1.0]);
        assert_eq!(binomial(3, 4), 0.0);
    }

    #[test]
    fn long_rows_are_like_short_ones() {
        for k in 0..=MOST {
            assert!((product(MOST, k) / binomial(MOST, k) - 1.0).abs() < 1e-13);
        }
        assert_eq!(binomials(MOST + 1).len(), MOST + 2);
    }
}
