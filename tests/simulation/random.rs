//! One stream of random numbers (splitmix64: Steele, Lea and Flood, OOPSLA 2014).

use std::ops::Range;

#[derive(Clone, Debug)]
pub(crate) struct Random(u64);

impl Random {
    pub(crate) fn new(seed: u64) -> Self {
        Self(seed.wrapping_mul(0xD134_2543_DE82_EF95))
    }

    pub(crate) fn next(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9E37_79B9_7F4A_7C15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
        z ^ (z >> 31)
    }

    pub(crate) fn within(&mut self, range: Range<u64>) -> u64 {
        range.start + self.next() % (range.end - range.start)
    }

    pub(crate) fn one_in(&mut self, count: u64) -> bool {
        self.next().is_multiple_of(count)
    }
}
