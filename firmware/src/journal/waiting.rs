//! Samples that wait in RAM, and how they outlive a warm restart.
//!
//! In retained memory each stands in a record of its own, oldest first, up to the first record
//! whose check does not fit:
//!
//! | offset | bytes | field, little endian |
//! | --- | --- | --- |
//! | 0 | 6 | tick, ms |
//! | 6 | 4 | level count i32 |
//! | 10 | 4 | temperature count i32 |
//! | 14 | 2 | battery, mV |
//! | 16 | 1 | quality numbers: level, and temperature times 16 |
//! | 17 | 3 | zero |
//! | 20 | 4 | hash over boot u16, place of the record u16 and bytes 0 to 19 |
//!
//! So a check fits only the boot that wrote it, at its own place. Plain numbers: the area is
//! written in every cycle, and nothing in it outlives a loss of power.

use super::{Journal, Recovery};
use crate::board::RetainedMemory;
use core::ops::{DerefMut, Range};
use embedded_storage::nor_flash::NorFlash;
use heapless::Vec;
use strake_core::journal::Sample;
use strake_core::journal::block::ENTRIES_MAX;
use strake_core::signal::{Channel, Quality};

/// Most samples that wait.
pub const WAITING_MAX: usize = ENTRIES_MAX;
/// Bytes of a record in retained memory.
const RECORD_BYTES: usize = 24;
/// Bytes before its check.
const CHECKED_BYTES: usize = RECORD_BYTES - 4;

/// Samples that are not yet on flash, oldest first.
#[derive(Clone, Debug, Default)]
pub struct Waiting {
    samples: Vec<Sample, WAITING_MAX>,
    /// So many at the front are written already; they go when the last one does.
    written: usize,
}

impl Waiting {
    /// None waits. Every bit is zero.
    #[must_use]
    pub const fn new() -> Self {
        Self { samples: Vec::new(), written: 0 }
    }

    /// Samples that wait.
    #[must_use]
    pub fn len(&self) -> usize {
        self.iter().len()
    }

    /// Whether none waits.
    #[must_use]
    pub fn is_empty(&self) -> bool {
        self.len() == 0
    }

    /// The samples, oldest first.
    #[must_use]
    pub fn iter(&self) -> impl ExactSizeIterator<Item = &Sample> {
        self.from(0).iter()
    }

    /// The samples behind the first `skipped`, oldest first.
    pub(super) fn from(&self, skipped: usize) -> &[Sample] {
        self.samples.get(self.written.saturating_add(skipped)..).unwrap_or(&[])
    }

    pub(super) fn is_full(&self) -> bool {
        self.samples.is_full()
    }

    pub(super) fn push(&mut self, sample: &Sample) -> bool {
        self.samples.push(*sample).is_ok()
    }

    /// Takes back what was pushed last.
    pub(super) fn pop(&mut self) {
        self.samples.pop();
    }

    pub(super) fn clear(&mut self) {
        self.samples.clear();
        self.written = 0;
    }

    pub(super) fn drop_first(&mut self, count: usize) {
        self.written = self.written.saturating_add(count);
        if self.is_empty() {
            self.clear();
        }
    }

    /// Stores the samples in `area`, and an end behind them. To be called after every push and
    /// after every write to flash. Gives how many samples are stored; what has no room is missing,
    /// the newest first.
    pub fn save(&self, boot: u16, memory: &mut impl RetainedMemory, area: &Range<usize>) -> usize {
        let mut stored = 0;
        for (index, start) in (0_u16..).zip(records(area)) {
            let Some(sample) = self.from(stored).first() else {
                // Zeros have no right check: the end.
                memory.write(start, &[0; RECORD_BYTES]);
                break;
            };
            memory.write(start, &to_record(boot, index, sample));
            stored += 1;
        }
        stored
    }

    /// The samples that start `boot` left in `area`; none when the boot number or a check does not
    /// fit.
    fn load(memory: &impl RetainedMemory, area: &Range<usize>, boot: u16) -> Self {
        let mut waiting = Self::default();
        for (index, start) in (0_u16..).zip(records(area)) {
            let mut record = [0; RECORD_BYTES];
            memory.read(start, &mut record);
            let Some(sample) = from_record(boot, index, &record) else { break };
            // Ticks of one start rise; what does not is left over from an earlier list.
            let rises = waiting.samples.last().is_none_or(|last| last.tick_ms < sample.tick_ms);
            if !rises || !waiting.push(&sample) {
                break;
            }
        }
        waiting
    }
}

/// Offsets of the whole records of an area.
fn records(area: &Range<usize>) -> impl Iterator<Item = usize> {
    let end = area.end.saturating_sub(RECORD_BYTES - 1);
    (area.start..end).step_by(RECORD_BYTES)
}

/// FNV-1a with 32 bits (Fowler, Noll, Vo) over whole words: RAM either kept its content or lost it,
/// so a check that is cheap in every cycle is enough.
fn check(boot: u16, index: u16, fields: &[u8; CHECKED_BYTES]) -> u32 {
    let start = 0x811C_9DC5 ^ (u32::from(boot) << 16 | u32::from(index));
    let (words, _) = fields.as_chunks::<4>();
    words.iter().fold(start.wrapping_mul(0x0100_0193), |hash, &word| {
        (hash ^ u32::from_le_bytes(word)).wrapping_mul(0x0100_0193)
    })
}

fn to_record(boot: u16, index: u16, sample: &Sample) -> [u8; RECORD_BYTES] {
    let [t0, t1, t2, t3, t4, t5, ..] = sample.tick_ms.to_le_bytes();
    let [l0, l1, l2, l3] = sample.level.count_16.to_le_bytes();
    let [c0, c1, c2, c3] = sample.temperature.count_16.to_le_bytes();
    let [b0, b1] = sample.battery_mv.to_le_bytes();
    let qualities = sample.level.quality.number() | sample.temperature.quality.number() << 4;
    let fields =
        [t0, t1, t2, t3, t4, t5, l0, l1, l2, l3, c0, c1, c2, c3, b0, b1, qualities, 0, 0, 0];
    let [k0, k1, k2, k3] = check(boot, index, &fields).to_le_bytes();
    let [t0, t1, t2, t3, t4, t5, l0, l1, l2, l3, c0, c1, c2, c3, b0, b1, q, z0, z1, z2] = fields;
    [t0, t1, t2, t3, t4, t5, l0, l1, l2, l3, c0, c1, c2, c3, b0, b1, q, z0, z1, z2, k0, k1, k2, k3]
}

fn from_record(boot: u16, index: u16, record: &[u8; RECORD_BYTES]) -> Option<Sample> {
    let (fields, stored) = record.split_first_chunk::<CHECKED_BYTES>()?;
    if check(boot, index, fields).to_le_bytes() != *stored {
        return None;
    }
    let [t0, t1, t2, t3, t4, t5, l0, l1, l2, l3, c0, c1, c2, c3, b0, b1, qualities, ..] = *fields;
    let channel = |count_16: [u8; 4], quality: u8| {
        let quality = Quality::from_number(quality)?;
        Some(Channel { count_16: i32::from_le_bytes(count_16), quality })
    };
    Some(Sample {
        tick_ms: u64::from_le_bytes([t0, t1, t2, t3, t4, t5, 0, 0]),
        level: channel([l0, l1, l2, l3], qualities & 0x0F)?,
        temperature: channel([c0, c1, c2, c3], qualities >> 4)?,
        battery_mv: u16::from_le_bytes([b0, b1]),
    })
}

impl<F: NorFlash, W: DerefMut<Target = Waiting>> Journal<F, W> {
    /// The samples that the start before this one left in `area` of the retained memory: none when
    /// the boot number or a check does not fit, and none that the journal holds already. To be
    /// pushed and evaluated like fresh ones, then flushed, before the start-up entry.
    ///
    /// # Errors
    /// When the flash cannot be read.
    pub fn carried(
        &mut self,
        memory: &impl RetainedMemory,
        area: &Range<usize>,
        recovery: &Recovery,
    ) -> Result<Waiting, F::Error> {
        let boot = recovery.last_boot;
        let mut left = Waiting::load(memory, area, boot);
        let mut last_tick_ms = recovery.last_tick_ms;
        // A sector that was opened just now holds no sample yet.
        if let Some(newest) = recovery.newest_sequence
            && last_tick_ms.is_none()
            && !left.is_empty()
            && let Some(before) = newest.checked_sub(1)
        {
            last_tick_ms = self.ring.last_tick_ms(before, boot)?;
        }
        // Ticks of one start rise, so what the journal holds already comes first.
        let held = left.iter().take_while(|sample| Some(sample.tick_ms) <= last_tick_ms).count();
        left.drop_first(held);
        Ok(left)
    }
}
