//! A small seeded generator (splitmix64; Steele, Lea and Flood, Fast Splittable Pseudorandom
//! Number Generators, 2014). The same seed gives the same cases everywhere.

/// Generator state.
#[derive(Clone, Debug)]
pub struct Random(u64);

impl Random {
    /// A generator started from `seed`.
    #[must_use]
    pub fn new(seed: u64) -> Self {
        Self(seed)
    }

    /// The next 64 bits.
    pub fn bits(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        z ^ (z >> 31)
    }

    /// Uniform in [0, 1).
    pub fn unit(&mut self) -> f64 {
        let word = u32::try_from(self.bits() >> 32).unwrap_or(u32::MAX);
        f64::from(word) / 4_294_967_296.0
    }

    /// Uniform between two numbers.
    pub fn between(&mut self, low: f64, high: f64) -> f64 {
        low + (high - low) * self.unit()
    }

    /// Between two positive numbers, every ratio equally likely.
    pub fn ratio_between(&mut self, low: f64, high: f64) -> f64 {
        low * (high / low).powf(self.unit())
    }

    /// A whole number below `count`.
    pub fn below(&mut self, count: u32) -> u32 {
        u32::try_from(self.bits() % u64::from(count)).unwrap_or(0)
    }

    /// True once in `n` times.
    pub fn one_in(&mut self, n: u32) -> bool {
        self.below(n) == 0
    }
}
