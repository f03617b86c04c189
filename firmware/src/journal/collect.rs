//! Reading the stored sectors, for the collection.

use super::error::ReadError;
use super::ring::SECTOR;
use super::{Counters, Hold, Journal, Waiting};
use core::ops::DerefMut;
use embedded_storage::nor_flash::ReadNorFlash;
use strake_core::journal::SECTOR_BYTES;

/// How long a sector is held back for a collection, ms.
pub const HOLD_MS: u64 = 2_000;

impl<F, W: DerefMut<Target = Waiting>> Journal<F, W> {
    /// The lowest sequence number that may still stand in the ring.
    #[must_use]
    pub const fn oldest_sequence(&self) -> u32 {
        self.oldest_sequence
    }

    /// The sequence number of the newest sector; `None` while there is none.
    #[must_use]
    pub const fn newest_sequence(&self) -> Option<u32> {
        match self.open {
            Some(open) => Some(open.sequence),
            None => self.next_sequence.checked_sub(1),
        }
    }

    /// The number that the next entry gets.
    #[must_use]
    pub const fn next_entry(&self) -> u32 {
        self.next_entry
    }

    /// What went wrong since the start.
    #[must_use]
    pub const fn counters(&self) -> &Counters {
        &self.counters
    }

    /// The samples that wait.
    #[must_use]
    pub fn waiting(&self) -> &Waiting {
        &self.waiting
    }

    /// Gives the flash back; what waits is dropped.
    #[must_use]
    pub fn into_flash(self) -> F {
        self.ring.flash
    }

    /// The flash.
    #[must_use]
    pub const fn flash(&self) -> &F {
        &self.ring.flash
    }

    /// The flash, for what its traits do not offer, such as putting the chip to sleep.
    pub const fn flash_mut(&mut self) -> &mut F {
        &mut self.ring.flash
    }

    /// Holds the sector back from being erased for [`HOLD_MS`], and everything behind it. A new
    /// call moves the hold.
    pub fn hold(&mut self, sequence: u32, now_ms: u64) {
        self.hold = Some(Hold { sequence, until_ms: now_ms.saturating_add(HOLD_MS) });
    }

    /// Ends the hold.
    pub fn release(&mut self) {
        self.hold = None;
    }

    /// Bytes of the sector that are in use: all of a closed one, up to the last block of the
    /// newest.
    ///
    /// # Errors
    /// [`ReadError::Gone`] when the ring does not hold it.
    pub fn used_bytes<E>(&self, sequence: u32) -> Result<u16, ReadError<E>> {
        let newest = self.newest_sequence().ok_or(ReadError::Gone)?;
        if sequence < self.oldest_sequence || sequence > newest {
            return Err(ReadError::Gone);
        }
        let open = self.open.filter(|open| open.sequence == sequence);
        Ok(open.map_or(4096, |open| open.offset))
    }
}

impl<F: ReadNorFlash, W: DerefMut<Target = Waiting>> Journal<F, W> {
    /// Fills `out` from `offset` of a stored sector; both in units of the flash's reads.
    ///
    /// # Errors
    /// When the ring does not hold the sector, the bytes end behind it, or the flash refuses.
    pub fn read_sector(
        &mut self,
        sequence: u32,
        offset: u16,
        out: &mut [u8],
    ) -> Result<(), ReadError<F::Error>> {
        self.used_bytes(sequence)?;
        if usize::from(offset) + out.len() > SECTOR_BYTES {
            return Err(ReadError::OutOfRange);
        }
        let address = self.ring.place(sequence).wrapping_mul(SECTOR).wrapping_add(offset.into());
        self.ring.flash.read(address, out).map_err(ReadError::Flash)
    }
}
