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

use crate::journal::TICK_LIMIT_MS;
use crate::journal::bytes::Source;
use crate::journal::entry::Sample;
use crate::signal::{Channel, Quality};

/// What the next sample is compared with. The default stands before an anchor.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub(in crate::journal) struct Chain {
    tick_ms: u64,
    interval_ms: i64,
    level: i32,
    temperature: i32,
    battery_mv: u16,
}

impl Chain {
    /// Reads one sample and steps; `None` when no writer can have written these bytes.
    pub(in crate::journal) fn read(&mut self, source: &mut Source<'_>) -> Option<Sample> {
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
