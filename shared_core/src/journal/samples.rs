//! Codec 0 of samples: differences to what the sample before lets expect, as varints.
//!
//! | field | bytes | content |
//! | --- | --- | --- |
//! | tick | varint, signed | interval to the sample before, less the interval before that, ms |
//! | level | varint, signed | difference of the count in sixteenths, wrapping in 32 bits |
//! | quality | 1 | number of the level's quality in the low, of the temperature's in the high nibble |
//! | temperature | varint, signed | difference of the count in sixteenths, wrapping in 32 bits |
//! | battery | varint, signed | difference in millivolts |
//!
//! The first sample of an anchor is taken against all zeroes, so it holds absolute values.

use super::TICK_LIMIT_MS;
use super::bytes::{Sink, Source};
use super::entry::Sample;
use crate::signal::{Channel, Quality};

/// Most bytes one sample takes: tick 8, level 5, quality 1, temperature 5, battery 3.
pub const SAMPLE_BYTES_MAX: usize = 22;

/// What the next sample is compared with. The default stands before an anchor.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Chain {
    tick_ms: u64,
    interval_ms: i64,
    level: i32,
    temperature: i32,
    battery_mv: u16,
}

impl Chain {
    /// Writes `sample` and steps. A tick beyond [`TICK_LIMIT_MS`] is cut to 48 bits.
    pub(super) fn write(&mut self, sample: &Sample, sink: &mut Sink<'_>) {
        let tick_ms = sample.tick_ms % TICK_LIMIT_MS;
        let interval_ms = tick_ms.wrapping_sub(self.tick_ms).cast_signed();
        let (level, temperature) = (sample.level, sample.temperature);
        sink.signed(interval_ms.wrapping_sub(self.interval_ms));
        sink.signed(i64::from(level.count_16.wrapping_sub(self.level)));
        sink.byte(level.quality.number() | temperature.quality.number() << 4);
        sink.signed(i64::from(temperature.count_16.wrapping_sub(self.temperature)));
        sink.signed(i64::from(sample.battery_mv) - i64::from(self.battery_mv));
        self.step(&Sample { tick_ms, ..*sample }, interval_ms);
    }

    /// Reads one sample and steps; `None` when no writer can have written these bytes.
    pub(super) fn read(&mut self, source: &mut Source<'_>) -> Option<Sample> {
        let interval_ms = self.interval_ms.wrapping_add(source.signed()?);
        let tick_ms = self.tick_ms.wrapping_add_signed(interval_ms);
        let level: i32 = source.narrow_signed()?;
        let qualities = source.byte()?;
        let temperature: i32 = source.narrow_signed()?;
        let battery = i64::from(self.battery_mv).checked_add(source.signed()?)?;
        let sample = Sample {
            tick_ms,
            level: Channel {
                count_16: self.level.wrapping_add(level),
                quality: Quality::from_number(qualities & 0x0F)?,
            },
            temperature: Channel {
                count_16: self.temperature.wrapping_add(temperature),
                quality: Quality::from_number(qualities >> 4)?,
            },
            battery_mv: u16::try_from(battery).ok()?,
        };
        if tick_ms >= TICK_LIMIT_MS {
            return None;
        }
        self.step(&sample, interval_ms);
        Some(sample)
    }

    fn step(&mut self, sample: &Sample, interval_ms: i64) {
        *self = Self {
            tick_ms: sample.tick_ms,
            interval_ms,
            level: sample.level.count_16,
            temperature: sample.temperature.count_16,
            battery_mv: sample.battery_mv,
        };
    }
}
