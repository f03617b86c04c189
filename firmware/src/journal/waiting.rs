//! Samples that wait in RAM, and how they outlive a warm restart.
//!
//! In retained memory they stand as blocks of the journal's format with word 1, in pages of 256
//! bytes, as if they stood in the sector whose sequence number is the boot number. So a block says
//! its length, and its check fits only the boot that wrote it.

use super::{Journal, Recovery};
use crate::board::RetainedMemory;
use core::ops::{DerefMut, Range};
use embedded_storage::nor_flash::NorFlash;
use heapless::Vec;
use strake_core::journal::block::{ENTRIES_MAX, Place, encode_samples};
use strake_core::journal::samples::Chain;
use strake_core::journal::{Entry, Item, PAGE_BYTES, PageReader, Sample, Word};

/// Most samples that wait.
pub const WAITING_MAX: usize = ENTRIES_MAX;

/// Samples that are not yet on flash, oldest first.
#[derive(Clone, Debug, Default)]
pub struct Waiting {
    samples: Vec<Sample, WAITING_MAX>,
}

impl Waiting {
    /// None waits. Every bit is zero.
    #[must_use]
    pub const fn new() -> Self {
        Self { samples: Vec::new() }
    }

    /// Samples that wait.
    #[must_use]
    pub fn len(&self) -> usize {
        self.samples.len()
    }

    /// Whether none waits.
    #[must_use]
    pub fn is_empty(&self) -> bool {
        self.samples.is_empty()
    }

    /// The samples, oldest first.
    pub fn iter(&self) -> impl Iterator<Item = &Sample> {
        self.samples.iter()
    }

    /// The samples behind the first `skipped`, oldest first.
    pub(super) fn from(&self, skipped: usize) -> &[Sample] {
        self.samples.get(skipped..).unwrap_or(&[])
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
    }

    pub(super) fn drop_first(&mut self, count: usize) {
        let count = if count < self.samples.len() { count } else { self.samples.len() };
        self.samples.rotate_left(count);
        self.samples.truncate(self.samples.len() - count);
    }

    /// Stores the samples in the whole pages of `area`, or marks the area as empty. To be called
    /// after every push and after every write to flash. Gives how many samples are stored; what has
    /// no room is missing, the newest first.
    pub fn save(&self, boot: u16, memory: &mut impl RetainedMemory, area: &Range<usize>) -> usize {
        let mut stored = 0;
        for index in pages(area) {
            let start = area.start + usize::from(index) * PAGE_BYTES;
            if stored >= self.len() {
                memory.write(start, &[0xFF]);
                continue;
            }
            let mut page = [0xFF; PAGE_BYTES];
            let place = place_of(boot, index);
            let encoded =
                encode_samples(place, self.from(stored), &mut Chain::default(), &mut page);
            let len = encoded.map_or(1, |encoded| encoded.len);
            memory.write(start, page.get(..len).unwrap_or(&[]));
            stored += encoded.map_or(0, |encoded| encoded.taken);
        }
        stored
    }

    /// The samples that start `boot` left in `area`; none when the boot number or a check does not
    /// fit.
    fn load(memory: &impl RetainedMemory, area: &Range<usize>, boot: u16) -> Self {
        let mut waiting = Self::default();
        for index in pages(area) {
            let mut page = [0; PAGE_BYTES];
            memory.read(area.start + usize::from(index) * PAGE_BYTES, &mut page);
            for item in PageReader::at(&page, 0, place_of(boot, index)) {
                if let Item::Entry(Entry::Sample(sample)) = item {
                    waiting.push(&sample);
                }
            }
        }
        waiting
    }
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

fn place_of(boot: u16, index: u8) -> Place {
    Place { sequence: boot.into(), offset: u16::from(index) * 256, word: Word::One }
}

/// Indices of the whole pages of an area; more than four are never needed.
fn pages(area: &Range<usize>) -> Range<u8> {
    let pages = area.len() / PAGE_BYTES;
    0..u8::try_from(pages).unwrap_or(4).min(4)
}
