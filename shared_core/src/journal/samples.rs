//! Samples in blocks: codec 1, which is written, and codec 0, which is read for ever.
//!
//! # Codec 1
//!
//! Bits, lowest of the first byte first; what is left of the last byte is ones. Terms:
//!
//! - **Number**: its length n in 6 bits, then its n - 1 lower bits (the top one is known). n = 63
//!   is followed by all 64 bits.
//! - **Folded**: 0, -1, 1, -2 become 0, 1, 2, 3.
//! - **Rice code** of v with parameter k: v >> k ones, a zero, the k lower bits of v; instead of 20
//!   or more ones: 20 ones, no zero, and v as a number.
//! - **Scale**: running mean m of what was coded, in sixteenths. k is the place of the highest bit
//!   of m * 19 >> 8, 0 without one. Each v makes m += (16 min(v, 2^22) - m) >> 4. A scale that
//!   begins at k begins with m = 24 << k.
//! - **Track**: a channel. It counts in steps from its base and predicts; see below.
//!
//! The first block of a page is its anchor and holds its first sample within the head. The others
//! continue the tracks and scales of the page: a bad block costs at most the rest of its page.
//!
//! | head of an anchor | bits |
//! | --- | --- |
//! | tick, ms | number |
//! | whole seconds; interval to the sample before (a guess at the first), s or ms | 1; number, folded |
//! | both qualities good; else quality of the level, then of the temperature | 1; quality each |
//! | track of the level, then of the temperature: | |
//! | . step 16 and the count divisible by it; else the step | 1; number |
//! | . unless absent: the integer, divided by 16 when the bit before is set | number, folded |
//! | . unless absent: k at which its scale begins | 4 |
//! | battery below 4,096 mV; battery, mV | 1; 12, else 16 |
//! | predictors of level and temperature | 2 + 2 |
//! | steady, as below | |
//!
//! | head of another block | bits |
//! | --- | --- |
//! | predictors and steps changed | 1 |
//! | . then predictors of level and temperature | 2 + 2 |
//! | . steps changed; steps of level and temperature | 1; number each |
//! | steady: time, qualities, battery as predicted in all samples that follow | 1 |
//! | . else which of the three are | 1 + 1 + 1 |
//!
//! A quality is its number in 3 bits; behind one that gave no count (neither good nor sparse) a bit
//! says whether the channel is absent: its count is zero and not written.
//!
//! | sample | bits |
//! | --- | --- |
//! | unless steady: time off; interval less the interval before, ms | 1; Rice, folded |
//! | unless steady: qualities changed; both | 1; quality each |
//! | level, then temperature, unless absent: steps off the prediction | Rice, folded |
//! | unless steady: battery off; less the battery before, mV | 1; Rice, folded |
//!
//! The scale of the time begins at k = 3, the battery's at 4, that of an absent channel at 2, with
//! 0 as the count. What is steady or not marked as off is as in the sample before; the time is an
//! equal interval later.
//!
//! # Prediction
//!
//! A track holds places: (count - base) / step. Base and step come from the anchor, so the first
//! place is 0. After the track's n-th count at place p (the anchor's is the first, also when
//! absent; from n = 16 on the gains stay), with P = p << 8 and all shifts rounding down:
//!
//! | predictor | next place | keeps |
//! | ---: | --- | --- |
//! | 0 last | p | p |
//! | 1 line | p + ((p - q) * 3 >> 2) | q, the place before p |
//! | 2 mean | (M + 128) >> 8 | M += (P - M) * floor(65536 / n) >> 16 |
//! | 3 trend | (T + S + 128) >> 8 | e = P - T - S; T += S + (e * floor(131072 (2n - 1) / n(n + 1)) >> 16); S += e * floor(393216 / n(n + 1)) >> 16 |
//!
//! All are zero at the anchor and run on whichever predictor is in use. The gains are those of the
//! mean of all counts and of the straight line of least squares through them. When the step changes
//! from d to D, q, M and T are taken from the last place on, the base becomes the last count, and
//! with S and m they are multiplied by d and divided by D, rounding down.

mod packed;
mod plain;
mod scale;
mod track;
mod write;

pub use packed::Chain;
pub(super) use packed::Packed;
pub(super) use plain::Chain as PlainChain;

/// Fewest samples that a page has room for, whatever they hold; see the tests.
pub const PAGE_SAMPLES_MIN: usize = 7;

#[cfg(test)]
mod tests;
