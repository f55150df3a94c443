//! Numbers for tests, the same in every run.

/// The next number from 0 to 1 (Knuth's linear congruential generator, MMIX).
pub(super) fn random(seed: &mut u64) -> f64 {
    *seed = seed
        .wrapping_mul(6_364_136_223_846_793_005)
        .wrapping_add(1_442_695_040_888_963_407);
    #[allow(clippy::cast_precision_loss, reason = "a random number")]
    let value = (*seed >> 11) as f64 / (1_u64 << 53) as f64;
    value
}
