//! Time from a counter that wraps.

/// Ticks since the start, by a counter of `BITS` bits, 1 to 32, that somebody reads at least once
/// in each of its rounds.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Elapsed<const BITS: u32> {
    ticks: u64,
    last: u32,
}

impl<const BITS: u32> Elapsed<BITS> {
    /// The counter's largest value.
    const MASK: u32 = u32::MAX >> (32 - BITS);

    /// Nothing elapsed yet, with the counter at `now`.
    #[must_use]
    pub const fn from(now: u32) -> Self {
        Self { ticks: 0, last: now & Self::MASK }
    }

    /// Takes the counter's present value; the counter counts upwards.
    #[must_use]
    pub const fn advanced_to(self, now: u32) -> Self {
        let now = now & Self::MASK;
        // `as` cannot lose anything here, and `from` is not const.
        let passed = (now.wrapping_sub(self.last) & Self::MASK) as u64;
        Self { ticks: self.ticks.wrapping_add(passed), last: now }
    }

    /// Ticks since the start.
    #[must_use]
    pub const fn ticks(self) -> u64 {
        self.ticks
    }
}

#[cfg(test)]
mod tests {
    use super::Elapsed;

    fn wraps<const BITS: u32>() {
        let mask = u32::MAX >> (32 - BITS);
        let step = mask / 3 + 1;
        let mut elapsed = Elapsed::<BITS>::from(mask);
        let mut counter = mask;
        for round in 1..=1000_u64 {
            counter = counter.wrapping_add(step) & mask;
            elapsed = elapsed.advanced_to(counter);
            assert_eq!(elapsed.ticks(), round * u64::from(step), "{BITS} bits");
        }
    }

    #[test]
    fn a_counter_that_wraps_loses_nothing() {
        wraps::<1>();
        wraps::<8>();
        wraps::<24>();
        wraps::<31>();
        wraps::<32>();
    }

    #[test]
    fn asking_twice_adds_nothing() {
        let elapsed = Elapsed::<24>::from(5).advanced_to(9);
        assert_eq!(elapsed.ticks(), 4);
        assert_eq!(elapsed.advanced_to(9), elapsed);
        // A whole round that nobody saw is lost: hence the interrupt at each wrap.
        assert_eq!(elapsed.advanced_to(9 + (1 << 24)), elapsed);
    }
}
