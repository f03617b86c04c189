//! How large the numbers of a field usually are: it sets their Rice parameter.

use crate::journal::bits::{BitReader, BitWriter, rice_bits};

/// Numbers beyond this count as this.
const LARGEST: i32 = 1 << 22;

/// Running mean of the numbers that were coded, in sixteenths.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub(super) struct Scale {
    /// At most 2^26.
    mean_16: i32,
}

impl Scale {
    /// The scale that begins with parameter `k`, at most 15.
    pub(super) const fn at(k: u32) -> Self {
        Self { mean_16: 24 << if k < 15 { k } else { 15 } }
    }

    /// The scale of numbers with this mean.
    pub(super) fn of_mean(mean: u64) -> Self {
        Self { mean_16: small(mean) * 16 }
    }

    /// Rice parameter, at most 22.
    #[inline]
    pub(super) const fn k(self) -> u32 {
        // 2^k lies below 1.19 times the mean: the best parameter for a normal distribution.
        let scaled = (self.mean_16 * 19) >> 8;
        31 - (scaled | 1).leading_zeros()
    }

    #[inline]
    pub(super) fn learn(&mut self, number: u64) {
        self.mean_16 += (small(number) * 16 - self.mean_16) >> 4;
    }

    pub(super) fn write(&mut self, number: u64, out: &mut BitWriter<'_>) {
        out.rice(number, self.k());
        self.learn(number);
    }

    #[inline]
    pub(super) fn read(&mut self, bits: &mut BitReader<'_>) -> Option<u64> {
        let number = bits.rice(self.k())?;
        self.learn(number);
        Some(number)
    }

    /// Steps as [`write`](Self::write) does; gives the bits it would take.
    pub(super) fn weigh(&mut self, number: u64) -> u32 {
        let bits = rice_bits(number, self.k());
        self.learn(number);
        bits
    }

    /// The scale for steps of another size.
    pub(super) fn rescaled(self, from: u32, to: u32) -> Self {
        let mean_16 = i64::from(self.mean_16) * i64::from(from) / i64::from(to).max(1);
        let most = LARGEST * 16;
        Self { mean_16: i32::try_from(mean_16).map_or(most, |mean_16| mean_16.min(most)) }
    }
}

#[inline]
fn small(number: u64) -> i32 {
    i32::try_from(number).map_or(LARGEST, |number| number.min(LARGEST))
}

/// 0, -1, 1, -2 become 0, 1, 2, 3.
#[inline]
pub(super) const fn fold(value: i64) -> u64 {
    ((value << 1) ^ (value >> 63)).cast_unsigned()
}

/// Undoes [`fold`].
#[inline]
pub(super) const fn unfold(folded: u64) -> i64 {
    (folded >> 1).cast_signed() ^ (folded & 1).cast_signed().wrapping_neg()
}
