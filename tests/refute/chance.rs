//! Random numbers that are the same on every machine (SplitMix64, Steele, Lea
//! and Flood 2014, from memory).

pub(crate) struct Chance(u64);

impl Chance {
    pub(crate) fn new(seed: u64) -> Self {
        Self(seed.wrapping_mul(0x9E37_79B9_7F4A_7C15) ^ 0xD1B5_4A32_D192_ED03)
    }

    fn next(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9E37_79B9_7F4A_7C15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
        z ^ (z >> 31)
    }

    /// In [0, 1).
    pub(crate) fn unit(&mut self) -> f64 {
        (self.next() >> 11) as f64 / (1_u64 << 53) as f64
    }

    /// In [low, high).
    pub(crate) fn between(&mut self, low: f64, high: f64) -> f64 {
        low + (high - low) * self.unit()
    }

    /// 10^x, x in [low, high).
    pub(crate) fn power(&mut self, low: f64, high: f64) -> f64 {
        10.0_f64.powf(self.between(low, high))
    }

    /// In 0..count.
    pub(crate) fn below(&mut self, count: usize) -> usize {
        (self.next() % count as u64) as usize
    }

    /// Barycentric coordinates, even over the triangle.
    pub(crate) fn barycentric(&mut self) -> [f64; 3] {
        let (mut a, mut b) = (self.unit(), self.unit());
        if a + b > 1.0 {
            (a, b) = (1.0 - a, 1.0 - b);
        }
        [1.0 - a - b, a, b]
    }
}
