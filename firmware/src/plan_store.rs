//! The plans on flash: five slots, so that the last four stay while a fifth is being written.
//!
//! A plan comes in pieces into the slot that can best be spared, is read back and compared with its
//! fingerprint, and counts only once the commit word behind it stands. So a cut at any moment leaves
//! the plan before in force. Slots have the format of [`strake_core::plan_slot`].

use core::fmt;
use embedded_storage::nor_flash::{NorFlash, ReadNorFlash};
use strake_core::plan_slot::{
    BODY_MAX, BODY_OFFSET, COMMIT, COMMIT_OFFSET, Fingerprint, HEADER_BYTES, SlotHeader,
};

/// Slots, each one sector of 4,096 bytes.
pub const SLOTS: u8 = 5;
const SLOT_BYTES: u32 = 4096;
/// The plan's first byte in its slot, as an address.
const BODY: u32 = 256;
const _: () = assert!(BODY_OFFSET == 256 && COMMIT_OFFSET == 96);
const COMMIT_AT: u32 = 96;

/// Why a plan could not be stored or read.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
pub enum PlanStoreError<E> {
    /// The region has fewer than [`SLOTS`] sectors.
    TooSmall,
    /// A plan has 1 to 3,840 bytes.
    Length {
        /// Bytes announced.
        len: u16,
    },
    /// A piece does not follow the one before, or ends behind the plan.
    OutOfOrder {
        /// Offset that is due.
        due: u16,
    },
    /// A piece that is not the last must be a multiple of the flash's word.
    Unaligned,
    /// No plan is being written.
    NotBegun,
    /// What came, or what the flash kept of it, has another fingerprint.
    Fingerprint {
        /// Fingerprint of the bytes on flash.
        found: u64,
    },
    /// The bytes asked for do not lie in a stored plan.
    OutOfRange,
    /// The sequence numbers are used up: a slot holds a forged one.
    SequenceExhausted,
    /// The flash refused.
    Flash(E),
}

impl<E> From<E> for PlanStoreError<E> {
    fn from(error: E) -> Self {
        Self::Flash(error)
    }
}

impl<E> fmt::Display for PlanStoreError<E> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::TooSmall => write!(f, "plan region has fewer than {SLOTS} sectors"),
            Self::Length { len } => write!(f, "plan of {len} bytes, at most {BODY_MAX} fit"),
            Self::OutOfOrder { due } => write!(f, "piece of a plan out of order, {due} is due"),
            Self::Unaligned => f.write_str("piece of a plan is no multiple of the flash's word"),
            Self::NotBegun => f.write_str("no plan is being written"),
            Self::Fingerprint { found } => write!(f, "plan has fingerprint {found:016x}"),
            Self::OutOfRange => f.write_str("bytes asked for lie outside the stored plan"),
            Self::SequenceExhausted => f.write_str("sequence numbers of plans are used up"),
            Self::Flash(_) => f.write_str("flash refused"),
        }
    }
}

impl<E: fmt::Debug> core::error::Error for PlanStoreError<E> {}

/// A committed plan. Whether its bytes are sound is another question; see
/// [`newest_valid`](PlanStore::newest_valid).
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
pub struct StoredPlan {
    /// Slot, below [`SLOTS`].
    pub slot: u8,
    /// Counts the plans this device took, from 1.
    pub sequence: u32,
    /// UTC seconds at which the plan was sealed.
    pub serial: u64,
    /// Fingerprint that its bytes must have.
    pub fingerprint: u64,
    /// Bytes of the plan.
    pub len: u16,
}

/// A plan on its way in.
#[derive(Clone, Copy, Debug)]
struct Incoming {
    plan: StoredPlan,
    received: u16,
}

/// The plans in a flash region of which every byte belongs to them.
#[derive(Clone, Debug)]
pub struct PlanStore<F> {
    flash: F,
    incoming: Option<Incoming>,
}

impl<F: ReadNorFlash> PlanStore<F> {
    /// The store over `flash`. Changes nothing.
    ///
    /// # Errors
    /// When the region is too small.
    pub fn open(flash: F) -> Result<Self, PlanStoreError<F::Error>> {
        if flash.capacity() < usize::from(SLOTS) * 4096 {
            return Err(PlanStoreError::TooSmall);
        }
        Ok(Self { flash, incoming: None })
    }

    /// The committed plan in `slot`.
    ///
    /// # Errors
    /// When the flash cannot be read.
    pub fn slot(&mut self, slot: u8) -> Result<Option<StoredPlan>, F::Error> {
        if slot >= SLOTS {
            return Ok(None);
        }
        let mut bytes = [0; HEADER_BYTES + COMMIT.len()];
        self.flash.read(u32::from(slot) * SLOT_BYTES, &mut bytes)?;
        Ok(SlotHeader::decode(&bytes).map(|header| StoredPlan {
            slot,
            sequence: header.sequence,
            serial: header.serial,
            fingerprint: header.fingerprint,
            len: header.body_len,
        }))
    }

    /// The committed plans, newest first.
    ///
    /// # Errors
    /// When the flash cannot be read.
    pub fn list(&mut self) -> Result<heapless::Vec<StoredPlan, 5>, F::Error> {
        let mut plans = heapless::Vec::new();
        for slot in 0..SLOTS {
            if let Some(plan) = self.slot(slot)? {
                // As many places as slots.
                let _ = plans.push(plan);
            }
        }
        plans.sort_unstable_by_key(|plan| core::cmp::Reverse(plan.sequence));
        Ok(plans)
    }

    /// The newest committed plan whose bytes have their fingerprint. Takes one SHA-512 per plan
    /// looked at.
    ///
    /// # Errors
    /// When the flash cannot be read.
    pub fn newest_valid(&mut self) -> Result<Option<StoredPlan>, F::Error> {
        for plan in self.list()? {
            if self.body_fingerprint(&plan)? == plan.fingerprint {
                return Ok(Some(plan));
            }
        }
        Ok(None)
    }

    /// Fills `out` from `offset` of a stored plan; both in units of the flash's reads. What lies
    /// behind the plan's end reads as 0xFF.
    ///
    /// # Errors
    /// When the bytes do not lie in the slot or the flash cannot be read.
    pub fn read(
        &mut self,
        plan: &StoredPlan,
        offset: u16,
        out: &mut [u8],
    ) -> Result<(), PlanStoreError<F::Error>> {
        if plan.slot >= SLOTS || usize::from(offset) + out.len() > BODY_MAX {
            return Err(PlanStoreError::OutOfRange);
        }
        let address = u32::from(plan.slot) * SLOT_BYTES + BODY + u32::from(offset);
        Ok(self.flash.read(address, out)?)
    }

    fn body_fingerprint(&mut self, plan: &StoredPlan) -> Result<u64, F::Error> {
        let mut fingerprint = Fingerprint::default();
        let mut address = u32::from(plan.slot) * SLOT_BYTES + BODY;
        let mut left = usize::from(plan.len);
        while left > 0 {
            let mut bytes = [0; 64];
            self.flash.read(address, &mut bytes)?;
            let part = bytes.get(..left).unwrap_or(&bytes);
            fingerprint.update(part);
            left = left.saturating_sub(part.len());
            address = address.wrapping_add(64);
        }
        Ok(fingerprint.finish())
    }

    /// The flash.
    #[must_use]
    pub const fn flash(&self) -> &F {
        &self.flash
    }

    /// The flash, for what its traits do not offer.
    pub const fn flash_mut(&mut self) -> &mut F {
        &mut self.flash
    }
}

impl<F: NorFlash> PlanStore<F> {
    /// Begins a plan of `len` bytes: erases the slot that can best be spared and writes its header.
    /// A plan that was on its way is given up.
    ///
    /// # Errors
    /// For a length out of range, or when the flash refuses.
    pub fn begin(
        &mut self,
        len: u16,
        serial: u64,
        fingerprint: u64,
    ) -> Result<(), PlanStoreError<F::Error>> {
        const {
            assert!(F::ERASE_SIZE == 4096, "a slot is one sector of 4,096 bytes");
            assert!(F::WRITE_SIZE <= 4 && F::READ_SIZE <= 4, "the format needs words up to 4");
        }
        self.incoming = None;
        if !(1..=BODY_MAX).contains(&len.into()) {
            return Err(PlanStoreError::Length { len });
        }
        let (slot, newest) = self.spare()?;
        let sequence = newest.checked_add(1).ok_or(PlanStoreError::SequenceExhausted)?;
        let header = SlotHeader { sequence, serial, fingerprint, body_len: len, signature: None };
        let from = u32::from(slot) * SLOT_BYTES;
        self.flash.erase(from, from + SLOT_BYTES)?;
        self.flash.write(from, &header.encode())?;
        let plan = StoredPlan { slot, sequence, serial, fingerprint, len };
        self.incoming = Some(Incoming { plan, received: 0 });
        Ok(())
    }

    /// Writes the next piece. Pieces come in order; all but the last are multiples of the flash's
    /// word.
    ///
    /// # Errors
    /// When the piece is not the next one or the flash refuses.
    pub fn write_chunk(
        &mut self,
        offset: u16,
        bytes: &[u8],
    ) -> Result<(), PlanStoreError<F::Error>> {
        let incoming = self.incoming.as_mut().ok_or(PlanStoreError::NotBegun)?;
        let due = incoming.received;
        let end = usize::from(due) + bytes.len();
        let end = u16::try_from(end).ok().filter(|&end| end <= incoming.plan.len);
        let Some(end) = end.filter(|_| offset == due) else {
            return Err(PlanStoreError::OutOfOrder { due });
        };
        if !usize::from(due).is_multiple_of(F::WRITE_SIZE) {
            return Err(PlanStoreError::Unaligned);
        }
        let address = u32::from(incoming.plan.slot) * SLOT_BYTES + BODY + u32::from(due);
        let (whole, rest) = bytes.split_at(bytes.len() - bytes.len() % F::WRITE_SIZE);
        if !rest.is_empty() && end != incoming.plan.len {
            return Err(PlanStoreError::Unaligned);
        }
        incoming.received = end;
        let outcome = write_padded(&mut self.flash, address, whole, rest);
        if outcome.is_err() {
            self.incoming = None;
        }
        Ok(outcome?)
    }

    /// Reads the plan back and commits it when its fingerprint is the announced one.
    ///
    /// # Errors
    /// When pieces are missing, the fingerprint differs, or the flash refuses. The plan before stays
    /// in force.
    pub fn commit(&mut self) -> Result<StoredPlan, PlanStoreError<F::Error>> {
        let Incoming { plan, received } = self.incoming.take().ok_or(PlanStoreError::NotBegun)?;
        if received != plan.len {
            return Err(PlanStoreError::OutOfOrder { due: received });
        }
        let found = self.body_fingerprint(&plan)?;
        if found != plan.fingerprint {
            return Err(PlanStoreError::Fingerprint { found });
        }
        self.flash.write(u32::from(plan.slot) * SLOT_BYTES + COMMIT_AT, &COMMIT)?;
        Ok(plan)
    }

    /// The slot to write next, and the highest sequence number in use: an empty or broken slot, else
    /// the oldest plan's. Never the newest valid one, even when newer ones are broken.
    fn spare(&mut self) -> Result<(u8, u32), F::Error> {
        let plans = self.list()?;
        let newest = plans.first().map_or(0, |plan| plan.sequence);
        let free = (0..SLOTS).find(|&slot| plans.iter().all(|plan| plan.slot != slot));
        if let Some(slot) = free {
            return Ok((slot, newest));
        }
        let mut oldest_first = plans.iter().rev();
        let oldest = oldest_first.next().map_or(0, |plan| plan.slot);
        let valid = self.newest_valid()?.map(|plan| plan.slot);
        let second = oldest_first.next().map_or(0, |plan| plan.slot);
        Ok((if valid == Some(oldest) { second } else { oldest }, newest))
    }
}

/// Writes whole words, then the rest in a word padded with 0xFF.
fn write_padded<F: NorFlash>(
    flash: &mut F,
    address: u32,
    whole: &[u8],
    rest: &[u8],
) -> Result<(), F::Error> {
    flash.write(address, whole)?;
    let mut word = [0xFF; 4];
    let (Some(place), false) = (word.get_mut(..rest.len()), rest.is_empty()) else {
        return Ok(());
    };
    place.copy_from_slice(rest);
    let behind = u32::try_from(whole.len()).unwrap_or(0);
    flash.write(address.wrapping_add(behind), word.get(..F::WRITE_SIZE).unwrap_or(&word))
}
