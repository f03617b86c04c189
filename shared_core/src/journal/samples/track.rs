//! One channel in codec 1: where its next count is expected.

use super::scale::{Scale, fold, unfold};
use crate::journal::bits::{BitReader, BitWriter};

/// Step of whole counts: the integer is in sixteenths.
pub(super) const WHOLE: u32 = 16;

/// How the next place is predicted. The numbers stand in the journal and never change.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
#[repr(u8)]
pub(super) enum Predictor {
    /// As the last one.
    #[default]
    Last = 0,
    /// On the line through the last two, three quarters of the way.
    Line = 1,
    /// The running mean.
    Mean = 2,
    /// On the running straight line.
    Trend = 3,
}

impl Predictor {
    pub(super) const ALL: [Self; 4] = [Self::Last, Self::Line, Self::Mean, Self::Trend];

    /// The predictor that the lower two bits name.
    pub(super) const fn from_bits(bits: u32) -> Self {
        match bits & 3 {
            0 => Self::Last,
            1 => Self::Line,
            2 => Self::Mean,
            _ => Self::Trend,
        }
    }
}

/// How far the running values follow the n-th count, in 65,536ths.
#[derive(Clone, Copy)]
struct Gain {
    mean: i32,
    place: i32,
    slope: i32,
}

/// Counts of a page after which the gains stay as they are.
const GAINS_UNTIL: i32 = 16;
const STEADY: Gain = gain(GAINS_UNTIL);
/// Gains of the counts 2 to 16.
static GAINS: [Gain; 15] = [
    gain(2),
    gain(3),
    gain(4),
    gain(5),
    gain(6),
    gain(7),
    gain(8),
    gain(9),
    gain(10),
    gain(11),
    gain(12),
    gain(13),
    gain(14),
    gain(15),
    STEADY,
];

const fn gain(n: i32) -> Gain {
    let pairs = n * (n + 1);
    Gain { mean: 65_536 / n, place: 131_072 * (2 * n - 1) / pairs, slope: 393_216 / pairs }
}

/// Predicts and codes one channel. Places count steps from the base; the running values are in
/// 256ths of a step. Places lie within 33 bits, so nothing wraps unless the bytes are garbage.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub(super) struct Track {
    base: i32,
    step: u32,
    last: i64,
    before: i64,
    mean: i64,
    trend: i64,
    slope: i64,
    /// Counts behind the first.
    age: u8,
    scale: Scale,
}

impl Track {
    /// A track that begins at this count.
    pub(super) fn begin(count: i32, step: u32, scale: Scale) -> Self {
        Self { base: count, step, scale, ..Self::default() }
    }

    /// A track that has seen no count.
    pub(super) fn absent(step: u32) -> Self {
        Self::begin(0, step, Scale::at(2))
    }

    pub(super) const fn step(&self) -> u32 {
        self.step
    }

    /// Rice parameter that the next count would take.
    pub(super) const fn k(&self) -> u32 {
        self.scale.k()
    }

    /// The last count; `None` when no writer can have led here.
    fn count(&self) -> Option<i32> {
        self.count_at(self.last)
    }

    #[inline]
    fn count_at(&self, place: i64) -> Option<i32> {
        let off = place.checked_mul(self.step.into())?;
        i32::try_from(off.checked_add(self.base.into())?).ok()
    }

    /// Distance of a count from the base.
    pub(super) const fn off_base(&self, count: i32) -> u32 {
        count.abs_diff(self.base)
    }

    /// Goes on in steps of another size, from the last count on.
    pub(super) fn set_step(&mut self, step: u32) {
        let (from, to) = (i64::from(self.step), i64::from(step).max(1));
        let scaled = |value: i64| value.wrapping_mul(from).checked_div_euclid(to).unwrap_or(0);
        let fine = self.last << 8;
        *self = Self {
            base: self.count().unwrap_or(self.base),
            step,
            last: 0,
            before: scaled(self.before - self.last),
            mean: scaled(self.mean.wrapping_sub(fine)),
            trend: scaled(self.trend.wrapping_sub(fine)),
            slope: scaled(self.slope),
            age: self.age,
            scale: self.scale.rescaled(self.step, step),
        };
    }

    #[inline]
    fn expected(&self, predictor: Predictor) -> i64 {
        match predictor {
            Predictor::Last => self.last,
            Predictor::Line => self.last + (((self.last - self.before) * 3) >> 2),
            Predictor::Mean => self.mean.wrapping_add(128) >> 8,
            Predictor::Trend => self.trend.wrapping_add(self.slope).wrapping_add(128) >> 8,
        }
    }

    #[inline]
    fn step_to(&mut self, place: i64) {
        let gain = GAINS.get(usize::from(self.age)).copied().unwrap_or(STEADY);
        let part = |off: i64, gain: i32| off.wrapping_mul(gain.into()) >> 16;
        let fine = place << 8;
        self.age = self.age.saturating_add(1);
        self.mean = self.mean.wrapping_add(part(fine.wrapping_sub(self.mean), gain.mean));
        let expected = self.trend.wrapping_add(self.slope);
        let off = fine.wrapping_sub(expected);
        self.trend = expected.wrapping_add(part(off, gain.place));
        self.slope = self.slope.wrapping_add(part(off, gain.slope));
        self.before = self.last;
        self.last = place;
    }

    /// The place of a count that lies on a step.
    fn place_of(&self, count: i32) -> i64 {
        let off = i64::from(count) - i64::from(self.base);
        off.checked_div(self.step.into()).unwrap_or(0)
    }

    /// Writes a count that lies on a step.
    pub(super) fn write(&mut self, count: i32, predictor: Predictor, out: &mut BitWriter<'_>) {
        let place = self.place_of(count);
        self.scale.write(fold(place.wrapping_sub(self.expected(predictor))), out);
        self.step_to(place);
    }

    /// Reads a count; `None` when the bits end or no writer can have written them.
    #[inline]
    pub(super) fn read(&mut self, predictor: Predictor, bits: &mut BitReader<'_>) -> Option<i32> {
        let off = unfold(self.scale.read(bits)?);
        let place = self.expected(predictor).wrapping_add(off);
        let count = self.count_at(place)?;
        self.step_to(place);
        Some(count)
    }

    /// Bits that these counts would take with each predictor.
    pub(super) fn weigh(mut self, counts: impl Iterator<Item = i32>) -> [u32; 4] {
        let mut scales = [self.scale; 4];
        let mut bits = [0; 4];
        for count in counts {
            let place = self.place_of(count);
            let each = bits.iter_mut().zip(&mut scales).zip(Predictor::ALL);
            for ((bits, scale), predictor) in each {
                *bits += scale.weigh(fold(place.wrapping_sub(self.expected(predictor))));
            }
            self.step_to(place);
        }
        bits
    }
}

#[cfg(test)]
mod tests;
