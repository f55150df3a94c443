//! How counts are worded and reports are written out.

use std::fmt;

/// A count with its noun, in the plural where it is not one.
pub(crate) fn many(count: usize, one: &str) -> String {
    let ending = match one {
        _ if count == 1 => "",
        _ if ["ch", "sh", "s"].iter().any(|end| one.ends_with(end)) => "es",
        _ => "s",
    };
    format!("{count} {one}{ending}")
}

/// What a report writes, as one text.
pub(crate) fn written(write: impl FnOnce(&mut String) -> fmt::Result) -> String {
    let mut out = String::new();
    // Writing to a string cannot fail.
    let _ = write(&mut out);
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn counts_agree_with_their_nouns() {
        assert_eq!(many(1, "patch"), "1 patch");
        assert_eq!(many(2, "patch"), "2 patches");
        assert_eq!(many(2, "near miss"), "2 near misses");
        assert_eq!(many(3, "mesh"), "3 meshes");
        assert_eq!(many(0, "open loop"), "0 open loops");
    }
}
