//! Bounded writing and reading of single bits, lowest bit of the first byte first.
//!
//! Numbers and Rice codes are those of the [samples](super::samples).

/// Most ones of a Rice code; as many mean that a number follows.
pub(super) const ONES_MAX: u32 = 20;
/// Length of a number from which on all its bits are written.
const LONG: u32 = 63;
/// Bits that the reader has at hand after a refill, unless the bytes end.
const REFILLED: u32 = 56;

/// Bits of the Rice code with parameter `k` of a number.
pub(super) fn rice_bits(value: u64, k: u32) -> u32 {
    match u32::try_from(value.unbounded_shr(k)) {
        Ok(ones) if ones < ONES_MAX => ones + 1 + k,
        _ => {
            let length = length(value);
            ONES_MAX + 6 + if length < LONG { length.saturating_sub(1) } else { u64::BITS }
        }
    }
}

const fn length(value: u64) -> u32 {
    u64::BITS - value.leading_zeros()
}

/// Appends bits to a slice; what does not fit marks the writer as full and is dropped.
#[derive(Debug)]
pub(super) struct BitWriter<'a> {
    out: &'a mut [u8],
    written: usize,
    full: bool,
}

impl<'a> BitWriter<'a> {
    pub(super) fn new(out: &'a mut [u8]) -> Self {
        Self { out, written: 0, full: false }
    }

    /// Bits written; `None` when something did not fit.
    pub(super) fn written(&self) -> Option<usize> {
        (!self.full).then_some(self.written)
    }

    /// Ends behind the first `written` bits, with ones up to the end of the byte; gives the bytes.
    pub(super) fn finish(self, written: usize) -> usize {
        if !written.is_multiple_of(8)
            && let Some(byte) = self.out.get_mut(written / 8)
        {
            *byte |= 0xFF << (written % 8);
        }
        written.div_ceil(8)
    }

    /// The lower `count` bits of `value`, at most 64, lowest first.
    pub(super) fn bits(&mut self, mut value: u64, count: u32) {
        let mut left = count as usize;
        while left > 0 {
            let Some(byte) = self.out.get_mut(self.written / 8) else {
                self.full = true;
                return;
            };
            let at = self.written % 8;
            let some = if left < 8 - at { left } else { 8 - at };
            let [low, ..] = value.to_le_bytes();
            let mask = (0xFF >> (8 - some)) << at;
            *byte = (*byte & !mask) | ((low << at) & mask);
            value >>= some;
            self.written += some;
            left -= some;
        }
    }

    pub(super) fn flag(&mut self, set: bool) {
        self.bits(set.into(), 1);
    }

    pub(super) fn number(&mut self, value: u64) {
        let length = length(value);
        if length < LONG {
            self.bits(length.into(), 6);
            self.bits(value, length.saturating_sub(1));
        } else {
            self.bits(LONG.into(), 6);
            self.bits(value, u64::BITS);
        }
    }

    pub(super) fn rice(&mut self, value: u64, k: u32) {
        match u32::try_from(value.unbounded_shr(k)) {
            Ok(ones) if ones < ONES_MAX => {
                self.bits((1 << ones) - 1, ones + 1);
                self.bits(value, k);
            }
            _ => {
                self.bits((1 << ONES_MAX) - 1, ONES_MAX);
                self.number(value);
            }
        }
    }
}

/// Takes bits off the front of a slice; `None` where they end.
#[derive(Clone, Copy, Debug)]
pub(super) struct BitReader<'a> {
    rest: &'a [u8],
    window: u64,
    /// Bits in the window, at most 63.
    held: u32,
}

impl<'a> BitReader<'a> {
    pub(super) const fn new(bytes: &'a [u8]) -> Self {
        Self { rest: bytes, window: 0, held: 0 }
    }

    /// At least [`REFILLED`] bits in the window, or all that is left.
    #[inline]
    fn refill(&mut self) {
        if let Some(next) = self.rest.first_chunk::<8>() {
            self.window |= u64::from_le_bytes(*next) << self.held;
            let bytes = (63 - self.held) / 8;
            self.rest = self.rest.get(bytes as usize..).unwrap_or(&[]);
            self.held += bytes * 8;
            return;
        }
        while self.held < REFILLED
            && let Some((&byte, rest)) = self.rest.split_first()
        {
            self.window |= u64::from(byte) << self.held;
            self.held += 8;
            self.rest = rest;
        }
    }

    /// Takes `count` bits of the window, which holds them.
    #[inline]
    fn skip(&mut self, count: u32) -> Option<()> {
        self.held = self.held.checked_sub(count)?;
        self.window = self.window.unbounded_shr(count);
        Some(())
    }

    /// The next `count` bits, at most 32.
    #[inline]
    pub(super) fn take(&mut self, count: u32) -> Option<u32> {
        if self.held < count {
            self.refill();
        }
        let low = self.window & !u64::MAX.unbounded_shl(count);
        self.skip(count)?;
        u32::try_from(low).ok()
    }

    #[inline]
    pub(super) fn flag(&mut self) -> Option<bool> {
        self.take(1).map(|bit| bit == 1)
    }

    pub(super) fn number(&mut self) -> Option<u64> {
        let length = self.take(6)?;
        let mut wide = |count: u32| {
            let low = self.take(if count < 32 { count } else { 32 })?;
            let high = self.take(count.saturating_sub(32))?;
            Some(u64::from(low) | u64::from(high) << 32)
        };
        match length {
            0 => Some(0),
            LONG => wide(64),
            _ => wide(length - 1).map(|low| low | 1 << (length - 1)),
        }
    }

    /// A Rice code with a parameter of at most 32.
    #[inline]
    pub(super) fn rice(&mut self, k: u32) -> Option<u64> {
        if self.held < REFILLED {
            self.refill();
        }
        let ones = self.window.trailing_ones();
        if ones >= ONES_MAX {
            self.skip(ONES_MAX)?;
            return self.number();
        }
        // At most 20 + 32 bits: the refill brought them, unless the bytes end.
        let low = (self.window >> (ones + 1)) & !u64::MAX.unbounded_shl(k);
        self.skip(ones + 1 + k)?;
        Some(u64::from(ones) << k | low)
    }
}
