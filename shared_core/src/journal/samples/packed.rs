//! Codec 1 of samples: what a page's blocks hand on, and reading.

use super::scale::{Scale, unfold};
use super::track::{Predictor, Track, WHOLE};
use crate::journal::TICK_LIMIT_MS;
use crate::journal::bits::BitReader;
use crate::journal::entry::Sample;
use crate::signal::{Channel, Quality};

/// Quality of a channel, and whether it is absent: its count is zero and not written.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub(super) struct Status {
    pub(super) quality: Quality,
    pub(super) absent: bool,
}

impl Status {
    pub(super) const GOOD: Self = Self { quality: Quality::Good, absent: false };

    pub(super) const fn of(channel: Channel) -> Self {
        let absent = channel.count_16 == 0 && !gave_a_count(channel.quality);
        Self { quality: channel.quality, absent }
    }

    fn read(bits: &mut BitReader<'_>) -> Option<Self> {
        let quality = Quality::from_number(u8::try_from(bits.take(3)?).ok()?)?;
        Some(Self { quality, absent: !gave_a_count(quality) && bits.flag()? })
    }
}

pub(super) const fn gave_a_count(quality: Quality) -> bool {
    matches!(quality, Quality::Good | Quality::Sparse)
}

/// Which fields are as predicted in all samples of a block.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Steady {
    pub(super) time: bool,
    pub(super) status: bool,
    pub(super) battery: bool,
}

impl Steady {
    pub(super) const ALL: Self = Self { time: true, status: true, battery: true };

    fn read(bits: &mut BitReader<'_>) -> Option<Self> {
        if bits.flag()? {
            return Some(Self::ALL);
        }
        Some(Self { time: bits.flag()?, status: bits.flag()?, battery: bits.flag()? })
    }
}

/// A channel: its track, how that is predicted, and its status.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub(super) struct Lane {
    pub(super) track: Track,
    pub(super) predictor: Predictor,
    pub(super) status: Status,
    /// What was read last; zero when absent.
    count_16: i32,
}

impl Lane {
    fn read_track(&mut self, bits: &mut BitReader<'_>) -> Option<()> {
        let whole = bits.flag()?;
        let step = if whole { WHOLE } else { read_step(bits)? };
        self.count_16 = 0;
        self.track = if self.status.absent {
            Track::absent(step)
        } else {
            let count = unfold(bits.number()?);
            let count = if whole { count.checked_mul(WHOLE.into())? } else { count };
            self.count_16 = i32::try_from(count).ok()?;
            Track::begin(self.count_16, step, Scale::at(bits.take(4)?))
        };
        Some(())
    }

    fn read_predictor(&mut self, bits: &mut BitReader<'_>) -> Option<()> {
        self.predictor = Predictor::from_bits(bits.take(2)?);
        Some(())
    }

    fn read_new_step(&mut self, bits: &mut BitReader<'_>) -> Option<()> {
        let step = read_step(bits)?;
        if step != self.track.step() {
            self.track.set_step(step);
        }
        Some(())
    }

    #[inline]
    fn read(&mut self, bits: &mut BitReader<'_>) -> Option<()> {
        self.count_16 =
            if self.status.absent { 0 } else { self.track.read(self.predictor, bits)? };
        Some(())
    }

    #[inline]
    const fn channel(&self) -> Channel {
        Channel { count_16: self.count_16, quality: self.status.quality }
    }
}

/// What the next block of samples in a page goes on from. The default stands before any page.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Chain {
    /// The page has its anchor.
    pub(super) anchored: bool,
    pub(super) tick_ms: u64,
    pub(super) interval_ms: i64,
    pub(super) battery_mv: u16,
    pub(super) level: Lane,
    pub(super) temperature: Lane,
    pub(super) time_scale: Scale,
    pub(super) battery_scale: Scale,
}

impl Chain {
    /// The next block begins a page. The writer remembers steps and scales as a guess for its
    /// anchor; no reader needs them.
    pub fn turn_page(&mut self) {
        self.anchored = false;
    }

    fn read_anchor(&mut self, bits: &mut BitReader<'_>) -> Option<()> {
        self.tick_ms = bits.number().filter(|&tick_ms| tick_ms < TICK_LIMIT_MS)?;
        let unit = if bits.flag()? { 1000 } else { 1 };
        self.interval_ms = unfold(bits.number()?).checked_mul(unit)?;
        (self.level.status, self.temperature.status) = if bits.flag()? {
            (Status::GOOD, Status::GOOD)
        } else {
            (Status::read(bits)?, Status::read(bits)?)
        };
        self.level.read_track(bits)?;
        self.temperature.read_track(bits)?;
        let battery_bits = if bits.flag()? { 12 } else { 16 };
        self.battery_mv = u16::try_from(bits.take(battery_bits)?).ok()?;
        self.begin_page();
        Some(())
    }

    /// The sample that was read last.
    #[inline]
    const fn sample(&self) -> Sample {
        Sample {
            tick_ms: self.tick_ms,
            level: self.level.channel(),
            temperature: self.temperature.channel(),
            battery_mv: self.battery_mv,
        }
    }

    /// What every page begins with.
    pub(super) fn begin_page(&mut self) {
        self.time_scale = Scale::at(3);
        self.battery_scale = Scale::at(4);
        self.anchored = true;
    }

    #[inline]
    fn read(&mut self, steady: Steady, bits: &mut BitReader<'_>) -> Option<()> {
        if !steady.time {
            let off = read_off(&mut self.time_scale, bits)?;
            self.interval_ms = self.interval_ms.wrapping_add(off);
        }
        self.tick_ms = self.tick_ms.wrapping_add_signed(self.interval_ms);
        if self.tick_ms >= TICK_LIMIT_MS {
            return None;
        }
        if !steady.status && bits.flag()? {
            self.level.status = Status::read(bits)?;
            self.temperature.status = Status::read(bits)?;
        }
        self.level.read(bits)?;
        self.temperature.read(bits)?;
        if !steady.battery {
            let off = read_off(&mut self.battery_scale, bits)?;
            let battery_mv = i64::from(self.battery_mv).checked_add(off)?;
            self.battery_mv = u16::try_from(battery_mv).ok()?;
        }
        Some(())
    }
}

fn read_step(bits: &mut BitReader<'_>) -> Option<u32> {
    u32::try_from(bits.number()?).ok().filter(|&step| step > 0)
}

fn read_off(scale: &mut Scale, bits: &mut BitReader<'_>) -> Option<i64> {
    if bits.flag()? { scale.read(bits).map(unfold) } else { Some(0) }
}

/// A block that is being read.
#[derive(Clone, Copy, Debug)]
pub(in crate::journal) struct Packed<'a> {
    bits: BitReader<'a>,
    steady: Steady,
    /// The sample that the head held is still to be given.
    in_head: bool,
}

impl<'a> Packed<'a> {
    /// Reads the head of a block; `None` when no writer can have written it.
    pub(in crate::journal) fn open(payload: &'a [u8], chain: &mut Chain) -> Option<Self> {
        let mut reader = BitReader::new(payload);
        let bits = &mut reader;
        let in_head = !chain.anchored;
        if in_head {
            chain.read_anchor(bits)?;
        }
        if in_head || bits.flag()? {
            chain.level.read_predictor(bits)?;
            chain.temperature.read_predictor(bits)?;
            if !in_head && bits.flag()? {
                chain.level.read_new_step(bits)?;
                chain.temperature.read_new_step(bits)?;
            }
        }
        let steady = Steady::read(bits)?;
        Some(Self { bits: reader, steady, in_head })
    }

    /// The next sample; `None` when no writer can have written it.
    #[inline]
    pub(in crate::journal) fn next(&mut self, chain: &mut Chain) -> Option<Sample> {
        if self.in_head {
            self.in_head = false;
        } else {
            chain.read(self.steady, &mut self.bits)?;
        }
        Some(chain.sample())
    }
}
