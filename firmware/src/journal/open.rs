//! Opening the journal: at start-up the ring, later each sector.

use super::error::{JournalError, OpenError};
use super::restore::{Recovery, Restore};
use super::ring::{Ring, SECTOR};
use super::{Ahead, Counters, Journal, Open, SECTORS_MIN, Snapshot, Waiting};
use crate::rooms::Within;
use core::ops::DerefMut;
use embedded_storage::nor_flash::NorFlash;
use strake_core::journal::block::{CHECK_BYTES, Encoded, Place, encode_state};
use strake_core::journal::header::HEADER_BYTES;
use strake_core::journal::samples::Chain;
use strake_core::journal::{PAGE_BYTES, STATE_BYTES_MAX, SectorHeader};

/// Places without a readable header that a cut may leave where no sector was ever opened: the first
/// one, and the one erased ahead.
const TORN_AT_FIRST_USE: u32 = 2;
/// Places tried before the opening of a sector is given up.
const PLACES_TRIED: u32 = 4;

impl<F: NorFlash> Journal<F> {
    /// As [`open_in`](Self::open_in), with the waiting samples within the journal.
    ///
    /// # Errors
    /// When the region is too small or cannot be read.
    pub fn open(
        flash: F,
        visitor: &mut impl Restore,
    ) -> Result<(Self, Recovery), OpenError<F::Error>> {
        Self::open_in(Within::default(), flash, visitor)
    }
}

impl<F: NorFlash, W: DerefMut<Target = Waiting>> Journal<F, W> {
    /// Finds the end of the ring in `flash`, gives `visitor` the newest checkpoint and every entry
    /// behind it. Changes nothing, and finishes on any content. `waiting` is an empty room.
    ///
    /// # Errors
    /// When the region is too small or cannot be read.
    pub fn open_in(
        waiting: W,
        flash: F,
        visitor: &mut impl Restore,
    ) -> Result<(Self, Recovery), OpenError<F::Error>> {
        let mut ring = Ring::new(flash);
        if ring.sectors() < SECTORS_MIN {
            return Err(OpenError::TooSmall { sectors: ring.sectors() });
        }
        let mut recovery = Recovery::default();
        let newest = ring.newest()?;
        recovery.reads_to_end = ring.reads();
        let (mut open, mut next_sequence, mut oldest_sequence) = (None, 0, 0);
        if let Some(newest) = newest {
            oldest_sequence = ring.oldest(newest.sequence)?;
            let end = ring.restore(&newest, oldest_sequence, visitor, &mut recovery)?;
            recovery.newest_sequence = Some(newest.sequence);
            if end.state || end.entries > 0 {
                let (sequence, chain) = (newest.sequence, Chain::default());
                open = Some(Open { sequence, offset: end.end, chain });
                next_sequence = newest.sequence.saturating_add(1);
            } else {
                // A cut kept it from opening: nothing in it can be lost.
                next_sequence = newest.sequence;
            }
        } else {
            let damaged = ring.damaged_headers()?;
            if damaged > TORN_AT_FIRST_USE {
                recovery.damaged_sectors = damaged;
            }
        }
        recovery.reads = ring.reads();
        let journal = Self {
            ring,
            open,
            next_sequence,
            oldest_sequence,
            next_entry: recovery.next_entry,
            ahead: Ahead::AsItWas,
            appended: false,
            hold: None,
            waiting,
            told_lost: 0,
            counters: Counters::default(),
        };
        Ok((journal, recovery))
    }

    /// Opens the next sector; a place that refuses is passed over together with its number.
    #[inline(never)]
    pub(super) fn open_sector(
        &mut self,
        now: &mut impl Snapshot,
    ) -> Result<(), JournalError<F::Error>> {
        let mut result = Err(JournalError::SequenceExhausted);
        let first = self.next_sequence;
        for sequence in first..first.saturating_add(PLACES_TRIED) {
            result = self.open_sector_at(sequence, now);
            if result.is_ok() {
                self.tell_lost(now.tick_ms());
                return Ok(());
            }
            self.ahead = Ahead::AsItWas;
            self.counters.flash_errors = self.counters.flash_errors.saturating_add(1);
        }
        result
    }

    #[inline(never)]
    fn open_sector_at(
        &mut self,
        sequence: u32,
        now: &mut impl Snapshot,
    ) -> Result<(), JournalError<F::Error>> {
        if self.ahead != Ahead::Erased {
            self.counters.erases_inline = self.counters.erases_inline.saturating_add(1);
            self.erase(sequence)?;
        }
        let previous = sequence.checked_sub(1);
        let header = SectorHeader {
            sequence,
            plan_fingerprint: now.plan_fingerprint(),
            first_entry: self.next_entry,
            boot: now.boot(),
            word: Ring::<F>::WORD,
            closed_by_restart: previous.is_some() && !self.appended,
            tick_ms: now.tick_ms(),
            utc_s: now.utc_s(),
            previous_signature: previous.and_then(|previous| now.signature(previous)),
        };
        self.ring.program(sequence, 0, &header.encode()).map_err(JournalError::Flash)?;
        let offset = self.write_state(sequence, now)?;
        let mut chain = self.open.map_or(Chain::default(), |open| open.chain);
        chain.turn_page();
        self.open = Some(Open { sequence, offset, chain });
        self.next_sequence = sequence.checked_add(1).ok_or(JournalError::SequenceExhausted)?;
        self.ahead = Ahead::AsItWas;
        self.appended = true;
        Ok(())
    }

    /// Writes the checkpoint; gives the offset behind it.
    fn write_state(
        &mut self,
        sequence: u32,
        now: &mut impl Snapshot,
    ) -> Result<u16, JournalError<F::Error>> {
        let mut state = [0; STATE_BYTES_MAX];
        let len = now.write_state(&mut state);
        let mut rest = state.get(..len).ok_or(JournalError::Unencodable)?;
        let total = u16::try_from(len).map_err(|_| JournalError::Unencodable)?;
        // The header is shorter than a page.
        let mut offset = u16::try_from(HEADER_BYTES).unwrap_or(u16::MAX);
        let mut part = 0;
        loop {
            let mut block = [0; PAGE_BYTES];
            let place = Place { sequence, offset, word: Ring::<F>::WORD };
            let encoded = encode_state(place, part, total, rest, &mut block)
                .ok_or(JournalError::Unencodable)?;
            self.program(place, &block, encoded).map_err(JournalError::Flash)?;
            offset = offset.saturating_add(u16::try_from(encoded.len).unwrap_or(u16::MAX));
            rest = rest.get(encoded.taken..).unwrap_or(&[]);
            if rest.is_empty() {
                return Ok(offset);
            }
            // A part that does not end the state fills its page but for an unusable rest.
            offset = offset.next_multiple_of(256);
            part += 1;
        }
    }

    /// Programs a block: the body, then the check that makes it durable.
    pub(super) fn program(
        &mut self,
        place: Place,
        block: &[u8; PAGE_BYTES],
        encoded: Encoded,
    ) -> Result<(), F::Error> {
        let (block, _) = block.split_at_checked(encoded.len).unwrap_or((block, &[]));
        let (body, check) = block.split_last_chunk::<CHECK_BYTES>().unwrap_or((block, &[0; 4]));
        let body_len = u16::try_from(body.len()).unwrap_or(0);
        self.ring.program(place.sequence, place.offset, body)?;
        self.ring.program(place.sequence, place.offset.wrapping_add(body_len), check)
    }

    /// Erases the place of the sector with this sequence number. What stood there is gone even when
    /// the erase fails.
    pub(super) fn erase(&mut self, sequence: u32) -> Result<(), JournalError<F::Error>> {
        let victim = sequence.checked_sub(self.ring.sectors());
        if let Some(victim) = victim.filter(|&victim| victim >= self.oldest_sequence) {
            if self.hold.take_if(|hold| hold.sequence <= victim).is_some() {
                self.counters.released_holds = self.counters.released_holds.saturating_add(1);
            }
            self.oldest_sequence = victim.saturating_add(1);
        }
        self.counters.erases = self.counters.erases.saturating_add(1);
        self.ring.erase(sequence).map_err(JournalError::Flash)
    }

    /// Does what can be done while idle: erases the place of the next sector once the open one is
    /// half full, unless a collection holds it. Gives whether something was done.
    ///
    /// A place is erased anew after each start, since a place that a cut left half erased may read
    /// as blank and still forget.
    ///
    /// # Errors
    /// When the flash refuses to erase, once: the place is tried again, or passed over, when it is
    /// due.
    pub fn housekeeping(&mut self, now_ms: u64) -> Result<bool, JournalError<F::Error>> {
        let half_full = self.open.is_some_and(|open| u32::from(open.offset) >= SECTOR / 2);
        if self.ahead != Ahead::AsItWas || !half_full {
            return Ok(false);
        }
        let victim = self.next_sequence.checked_sub(self.ring.sectors());
        let held = self.hold.is_some_and(|hold| {
            victim.is_some_and(|victim| hold.sequence <= victim) && now_ms < hold.until_ms
        });
        if held {
            return Ok(false);
        }
        let result = self.erase(self.next_sequence);
        if result.is_err() {
            self.counters.flash_errors = self.counters.flash_errors.saturating_add(1);
        }
        self.ahead = if result.is_ok() { Ahead::Erased } else { Ahead::Refused };
        result.map(|()| true)
    }
}

impl<F: NorFlash> Ring<F> {
    /// The lowest sequence number that may still stand in a ring with this newest one.
    fn oldest(&mut self, newest: u32) -> Result<u32, F::Error> {
        let Some(next) = newest.checked_add(1) else { return Ok(newest) };
        let Some(lowest) = next.checked_sub(self.sectors()) else { return Ok(0) };
        let stands = self.header_of(lowest)?.is_some();
        Ok(if stands { lowest } else { lowest.saturating_add(1) })
    }
}
