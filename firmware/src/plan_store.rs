//! The last plans, each in a slot of its own.
//!
//! Four are kept and one slot is free for the next. The plan is programmed as it comes and its
//! header last; a slot that a cut left without a sound header and a sound plan never wins.

use core::fmt;
use embedded_storage::nor_flash::NorFlash;
use heapless::Vec;
use strake_core::journal::SECTOR_BYTES;
use strake_core::plan::PLAN_BYTES_MAX;
use strake_core::plan_slot::{Fingerprint, PLAN_OFFSET, SLOT_HEADER_BYTES, SlotHeader};

/// Slots.
pub const SLOTS: usize = 5;
/// Plans that are kept.
pub const KEPT: usize = SLOTS - 1;
/// Most bytes of a plan.
const LENGTH_MAX: u16 = 3840;
const _: () = assert!(LENGTH_MAX as usize == PLAN_BYTES_MAX);
/// Bytes programmed at once: the larger of the two words, which serves both.
const WORD: u32 = 4;

/// Why a plan cannot be stored or read.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
pub enum StoreError<E> {
    /// Longer than a slot holds.
    TooLong {
        /// Most bytes.
        most: u16,
    },
    /// Bytes came out of order, or without a beginning.
    OutOfOrder,
    /// The stored bytes do not have the fingerprint that was announced.
    Damaged,
    /// No stored plan has this fingerprint, or it is shorter than asked.
    Unknown,
    /// The flash refused.
    Flash(E),
}

impl<E> From<E> for StoreError<E> {
    fn from(error: E) -> Self {
        Self::Flash(error)
    }
}

/// A plan being written.
#[derive(Clone, Copy, Debug)]
struct Writing {
    slot: usize,
    header: SlotHeader,
    /// Bytes that came.
    received: u32,
    /// Bytes of an unfinished word.
    word: [u8; WORD as usize],
}

/// The slots in a flash region of at least [`SLOTS`] sectors.
pub struct PlanStore<F> {
    flash: F,
    slots: [Option<SlotHeader>; SLOTS],
    writing: Option<Writing>,
}

impl<F: NorFlash> PlanStore<F> {
    /// Looks at every slot. What cannot be read holds no plan.
    pub fn open(mut flash: F) -> Self {
        let mut slots = [None; SLOTS];
        for (slot, found) in slots.iter_mut().enumerate() {
            let mut bytes = [0; SLOT_HEADER_BYTES];
            if flash.read(base(slot), &mut bytes).is_ok() {
                *found = SlotHeader::decode(&bytes);
            }
        }
        Self { flash, slots, writing: None }
    }

    /// The newest plan whose bytes have their fingerprint. Newer ones without it are forgotten:
    /// their slots are free.
    pub fn newest(&mut self) -> Option<SlotHeader> {
        loop {
            let newest = self.newest_where(|_| true)?;
            let header = self.slots.get(newest).copied().flatten()?;
            if self.fingerprint_of(newest, header.length).ok() == Some(header.fingerprint) {
                return Some(header);
            }
            *self.slots.get_mut(newest)? = None;
        }
    }

    /// The stored plan with this fingerprint.
    #[must_use]
    pub fn find(&self, fingerprint: u64) -> Option<SlotHeader> {
        self.slots.get(self.slot_of(fingerprint)?).copied().flatten()
    }

    /// Whether a stored plan still has its fingerprint: nothing of it may be used otherwise.
    pub fn is_sound(&mut self, fingerprint: u64) -> bool {
        let Some(slot) = self.slot_of(fingerprint) else { return false };
        let Some(header) = self.find(fingerprint) else { return false };
        self.fingerprint_of(slot, header.length).ok() == Some(fingerprint)
    }

    /// Every stored plan, in the order of the slots.
    #[must_use]
    pub fn list(&self) -> Vec<SlotHeader, SLOTS> {
        let mut list = Vec::new();
        for header in self.slots.iter().flatten() {
            // As many as there are slots; collecting would keep a way to panic.
            let _ = list.push(*header);
        }
        list
    }

    /// Fills `out` from `offset` of a stored plan.
    ///
    /// # Errors
    /// [`StoreError::Unknown`], [`StoreError::Flash`].
    pub fn read(
        &mut self,
        fingerprint: u64,
        offset: u32,
        out: &mut [u8],
    ) -> Result<(), StoreError<F::Error>> {
        let slot = self.slot_of(fingerprint).ok_or(StoreError::Unknown)?;
        let header = self.find(fingerprint).ok_or(StoreError::Unknown)?;
        let end = u32::try_from(out.len()).ok().and_then(|length| offset.checked_add(length));
        if end.is_none_or(|end| end > u32::from(header.length)) {
            return Err(StoreError::Unknown);
        }
        self.read_slot(slot, offset, out)
    }

    /// Makes room for a plan; one that was being written is dropped.
    ///
    /// # Errors
    /// [`StoreError::TooLong`], [`StoreError::Flash`].
    pub fn begin(
        &mut self,
        length: u32,
        serial: u64,
        fingerprint: u64,
    ) -> Result<(), StoreError<F::Error>> {
        self.writing = None;
        let length = u16::try_from(length)
            .ok()
            .filter(|&length| usize::from(length) <= PLAN_BYTES_MAX)
            .ok_or(StoreError::TooLong { most: LENGTH_MAX })?;
        let slot = self.free_slot();
        if let Some(found) = self.slots.get_mut(slot) {
            *found = None;
        }
        self.flash.erase(base(slot), base(slot + 1))?;
        let newest = self.slots.iter().flatten().map(|header| header.sequence).max();
        let sequence = newest.map_or(1, |newest| newest.saturating_add(1));
        let header = SlotHeader { sequence, serial, fingerprint, length };
        self.writing = Some(Writing { slot, header, received: 0, word: [0xFF; WORD as usize] });
        Ok(())
    }

    /// Stores the next bytes.
    ///
    /// # Errors
    /// [`StoreError::OutOfOrder`], [`StoreError::Flash`].
    pub fn write_chunk(&mut self, offset: u32, bytes: &[u8]) -> Result<(), StoreError<F::Error>> {
        let mut writing = self.writing.ok_or(StoreError::OutOfOrder)?;
        let length = u32::try_from(bytes.len()).unwrap_or(u32::MAX);
        let end = offset.checked_add(length).filter(|&end| end <= writing.header.length.into());
        if offset != writing.received || end.is_none() {
            return Err(StoreError::OutOfOrder);
        }
        for &byte in bytes {
            let at = writing.received % WORD;
            if let Some(slot) = writing.word.get_mut(at as usize) {
                *slot = byte;
            }
            writing.received += 1;
            if at == WORD - 1 {
                self.program_word(&mut writing)?;
            }
        }
        self.writing = Some(writing);
        Ok(())
    }

    /// Checks the whole plan against its fingerprint and programs the header: from now on it is
    /// the newest.
    ///
    /// # Errors
    /// [`StoreError::OutOfOrder`] when bytes are missing; [`StoreError::Damaged`];
    /// [`StoreError::Flash`].
    pub fn commit(&mut self) -> Result<SlotHeader, StoreError<F::Error>> {
        let mut writing = self.writing.take().ok_or(StoreError::OutOfOrder)?;
        let Writing { slot, header, received, .. } = writing;
        if received != u32::from(header.length) {
            return Err(StoreError::OutOfOrder);
        }
        if !received.is_multiple_of(WORD) {
            writing.received = received.next_multiple_of(WORD);
            self.program_word(&mut writing)?;
        }
        if self.fingerprint_of(slot, header.length)? != header.fingerprint {
            return Err(StoreError::Damaged);
        }
        self.flash.write(base(slot), &header.encode())?;
        if let Some(found) = self.slots.get_mut(slot) {
            *found = Some(header);
        }
        Ok(header)
    }

    /// Programs the word that ends at `received`.
    fn program_word(&mut self, writing: &mut Writing) -> Result<(), StoreError<F::Error>> {
        let start = writing.received.saturating_sub(WORD);
        self.flash.write(base(writing.slot) + PLAN_OFFSET + start, &writing.word)?;
        writing.word = [0xFF; WORD as usize];
        Ok(())
    }

    /// A slot without a plan, else the oldest.
    fn free_slot(&self) -> usize {
        let age = |slot: &Option<SlotHeader>| slot.map_or(0, |header| header.sequence);
        let oldest = self.slots.iter().enumerate().min_by_key(|(_, slot)| age(slot));
        oldest.map_or(0, |(index, _)| index)
    }

    fn slot_of(&self, fingerprint: u64) -> Option<usize> {
        self.newest_where(|header| header.fingerprint == fingerprint)
    }

    /// The slot of the newest plan of those that `matches` picks.
    fn newest_where(&self, matches: impl Fn(&SlotHeader) -> bool) -> Option<usize> {
        let stored = self.slots.iter().enumerate();
        let picked = stored.filter_map(|(slot, header)| header.filter(&matches).map(|h| (slot, h)));
        picked.max_by_key(|(_, header)| header.sequence).map(|(slot, _)| slot)
    }

    fn fingerprint_of(&mut self, slot: usize, length: u16) -> Result<u64, StoreError<F::Error>> {
        let mut fingerprint = Fingerprint::default();
        let mut buffer = [0; 64];
        let mut offset = 0;
        while offset < u32::from(length) {
            let left = u32::from(length) - offset;
            let piece = buffer.get_mut(..left.min(64) as usize).unwrap_or_default();
            self.read_slot(slot, offset, piece)?;
            fingerprint.update(piece);
            offset += left.min(64);
        }
        Ok(fingerprint.finish())
    }

    /// Reads from a slot's plan, whatever the flash's read granularity up to a word.
    fn read_slot(
        &mut self,
        slot: usize,
        offset: u32,
        out: &mut [u8],
    ) -> Result<(), StoreError<F::Error>> {
        let mut at = base(slot) + PLAN_OFFSET + offset;
        let mut out = out;
        while !out.is_empty() {
            let skip = at % WORD;
            let mut word = [0; WORD as usize];
            self.flash.read(at - skip, &mut word)?;
            let bytes = word.get(skip as usize..).unwrap_or_default();
            let count = bytes.len().min(out.len());
            let (head, rest) = out.split_at_mut(count);
            head.iter_mut()
                .zip(bytes.get(..count).unwrap_or_default())
                .for_each(|(to, from)| *to = *from);
            out = rest;
            at += WORD - skip;
        }
        Ok(())
    }
}

fn base(slot: usize) -> u32 {
    u32::try_from(slot * SECTOR_BYTES).unwrap_or(u32::MAX)
}

impl<F> fmt::Debug for PlanStore<F> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.debug_struct("PlanStore").field("slots", &self.slots).finish_non_exhaustive()
    }
}
