//! Appending: samples wait, events are written at once with all that waits.

use super::error::JournalError;
use super::ring::Ring;
use super::{Journal, Snapshot, Waiting};
use core::ops::DerefMut;
use embedded_storage::nor_flash::NorFlash;
use strake_core::journal::block::{Encoded, Place, encode_events, encode_samples};
use strake_core::journal::samples::{Chain, PAGE_SAMPLES_MIN};
use strake_core::journal::{Entry, PAGE_BYTES, SECTOR_BYTES, Sample};

/// Programs tried before an append is given up.
const TRIES: u8 = 2;

impl<F: NorFlash, W: DerefMut<Target = Waiting>> Journal<F, W> {
    /// Takes a sample, **before** it is evaluated. It waits in RAM until [`flush`](Self::flush), an
    /// event, or [`WAITING_MAX`](super::WAITING_MAX) samples.
    ///
    /// # Errors
    /// When the flash refuses. The sample waits all the same, unless
    /// [`lost_samples`](super::Counters::lost_samples) counts it.
    pub fn push(
        &mut self,
        sample: &Sample,
        now: &mut impl Snapshot,
    ) -> Result<(), JournalError<F::Error>> {
        let mut result = Ok(());
        if self.waiting.is_full() {
            result = self.flush();
        }
        let mut waits = self.waiting.push(sample);
        if !waits || !self.fits() {
            if waits {
                self.waiting.pop();
            }
            result = self.flush().and(result);
            self.give_up_waiting();
            if let Err(error) = self.open_sector(now) {
                self.lose(1);
                return Err(error);
            }
            waits = self.waiting.push(sample);
        }
        if !waits {
            self.lose(1);
        }
        result
    }

    /// Writes all that waits.
    ///
    /// # Errors
    /// When the flash refuses twice. The samples go on waiting, unless the open sector has no room
    /// left; then they are given up and counted.
    pub fn flush(&mut self) -> Result<(), JournalError<F::Error>> {
        let mut tries = TRIES;
        while !self.waiting.is_empty() {
            let mut block = [0; PAGE_BYTES];
            let Some((place, mut chain)) = self.place() else {
                self.give_up_waiting();
                return Err(JournalError::GivenUp);
            };
            let samples = self.waiting.from(0);
            let Some(encoded) = encode_samples(place, samples, &mut chain, &mut block) else {
                self.next_page();
                continue;
            };
            match self.append(place, &block, encoded) {
                Ok(()) => {
                    self.waiting.drop_first(encoded.taken);
                    if let Some(open) = self.open.as_mut() {
                        open.chain = chain;
                        open.turn_full_page();
                    }
                }
                Err(error) => {
                    tries -= 1;
                    if tries == 0 {
                        return Err(JournalError::Flash(error));
                    }
                }
            }
        }
        Ok(())
    }

    /// Writes an event, behind all that waits.
    ///
    /// # Errors
    /// As [`append_events`](Self::append_events).
    pub fn append_event(
        &mut self,
        entry: &Entry,
        now: &mut impl Snapshot,
    ) -> Result<(), JournalError<F::Error>> {
        self.append_events(core::slice::from_ref(entry), now)
    }

    /// Writes events, behind all that waits. A sample among them is refused.
    ///
    /// # Errors
    /// When the flash refuses in the open sector and in the next. Of the events those up to some
    /// point may be written; what waited is written, or given up and stated as a gap.
    pub fn append_events(
        &mut self,
        mut entries: &[Entry],
        now: &mut impl Snapshot,
    ) -> Result<(), JournalError<F::Error>> {
        if entries.iter().any(|entry| matches!(entry, Entry::Sample(_))) {
            return Err(JournalError::Unencodable);
        }
        if self.flush().is_err() {
            // The next sector's checkpoint contains what waited; the gap behind it says so.
            self.give_up_waiting();
            self.open_sector(now)?;
        }
        let (mut tries, mut moved) = (TRIES, false);
        while !entries.is_empty() {
            let Some((place, _)) = self.place() else {
                self.open_sector(now)?;
                continue;
            };
            let mut block = [0; PAGE_BYTES];
            let Some(encoded) = encode_events(place, entries, &mut block) else {
                self.next_page();
                continue;
            };
            match self.append(place, &block, encoded) {
                Ok(()) => entries = entries.get(encoded.taken..).unwrap_or(&[]),
                Err(error) if tries == 1 && moved => return Err(JournalError::Flash(error)),
                Err(_) if tries == 1 => {
                    self.open_sector(now)?;
                    (tries, moved) = (TRIES, true);
                }
                Err(_) => tries -= 1,
            }
        }
        Ok(())
    }

    /// States the samples that were given up, first in a new sector: its checkpoint contains what
    /// they led to. When even that is refused, the next sector states them.
    pub(super) fn tell_lost(&mut self, tick_ms: u64) {
        let missing = self.counters.lost_samples.saturating_sub(self.told_lost);
        for _ in 0..TRIES {
            let Some((place, _)) = self.place().filter(|_| missing > 0) else { return };
            let mut block = [0; PAGE_BYTES];
            let entry = Entry::Gap { tick_ms, missing };
            match encode_events(place, [&entry], &mut block) {
                None => self.next_page(),
                Some(encoded) => {
                    if self.append(place, &block, encoded).is_ok() {
                        self.told_lost = self.counters.lost_samples;
                        return;
                    }
                }
            }
        }
    }

    /// Programs a block at the end of the open sector. After a refusal the end is the next page.
    fn append(
        &mut self,
        place: Place,
        block: &[u8; PAGE_BYTES],
        encoded: Encoded,
    ) -> Result<(), F::Error> {
        let result = self.program(place, block, encoded);
        if result.is_err() {
            self.counters.flash_errors = self.counters.flash_errors.saturating_add(1);
            self.next_page();
            return result;
        }
        self.appended = true;
        let taken = u32::try_from(encoded.taken).unwrap_or(0);
        self.next_entry = self.next_entry.wrapping_add(taken);
        if let Some(open) = self.open.as_mut() {
            open.offset = end_of(place, encoded);
            open.turn_full_page();
        }
        Ok(())
    }

    /// Where the next block goes, and what its samples chain to; `None` when no sector is open or
    /// the open one is full.
    fn place(&self) -> Option<(Place, Chain)> {
        let open = self.open.filter(|open| usize::from(open.offset) < SECTOR_BYTES)?;
        let (sequence, offset) = (open.sequence, open.offset);
        Some((Place { sequence, offset, word: Ring::<F>::WORD }, open.chain))
    }

    /// Goes on at the next page of the open sector.
    fn next_page(&mut self) {
        if let Some(open) = self.open.as_mut() {
            open.offset = page_behind(open.offset);
            open.turn_full_page();
        }
    }

    /// Whether all that waits has room in the open sector.
    fn fits(&self) -> bool {
        let Some(mut open) = self.open else { return false };
        // Whatever the samples are, so many pages hold them behind the one begun.
        let pages = 1 + self.waiting.len().div_ceil(PAGE_SAMPLES_MIN);
        if usize::from(open.offset) + pages * PAGE_BYTES <= SECTOR_BYTES {
            return true;
        }
        let mut placed = 0;
        while placed < self.waiting.len() {
            if usize::from(open.offset) >= SECTOR_BYTES {
                return false;
            }
            let mut block = [0; PAGE_BYTES];
            let (sequence, offset) = (open.sequence, open.offset);
            let place = Place { sequence, offset, word: Ring::<F>::WORD };
            let rest = self.waiting.from(placed);
            if let Some(encoded) = encode_samples(place, rest, &mut open.chain, &mut block) {
                placed += encoded.taken;
                open.offset = end_of(place, encoded);
            } else {
                open.offset = page_behind(offset);
            }
            open.turn_full_page();
        }
        true
    }

    /// Gives up what waits: after refusals the open sector has no room for it, and the next one
    /// begins with a checkpoint that contains it already.
    fn give_up_waiting(&mut self) {
        self.lose(u32::try_from(self.waiting.len()).unwrap_or(u32::MAX));
        self.waiting.clear();
    }

    fn lose(&mut self, samples: u32) {
        self.counters.lost_samples = self.counters.lost_samples.saturating_add(samples);
    }
}

fn end_of(place: Place, encoded: Encoded) -> u16 {
    place.offset.saturating_add(u16::try_from(encoded.len).unwrap_or(u16::MAX))
}

/// Beginning of the page behind the one that the next byte at `offset` belongs to.
fn page_behind(offset: u16) -> u16 {
    (offset | 255).saturating_add(1)
}
