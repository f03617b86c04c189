//! A NOR flash that is stricter than the chip, and that can lose power anywhere.
//!
//! It refuses what a chip refuses or spoils in silence: unaligned and out-of-range accesses, and
//! programming a word that was touched since its sector was last erased. A cut tears the word that
//! is being programmed or leaves the sector half erased, with random bits from a seed; a sector
//! that an erase was cut in must be erased again before anything is programmed there, whatever it
//! shows. Memory is sparse: only touched sectors take room.

use core::fmt;
use embedded_storage::nor_flash::{
    ErrorType, NorFlash, NorFlashError, NorFlashErrorKind, ReadNorFlash,
};
use std::collections::BTreeMap;

/// Bytes of an erase block.
pub const SECTOR_BYTES: usize = 4096;

/// Why the flash refused.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum NorError {
    /// Address or length is no multiple of the unit.
    Unaligned {
        /// Address asked for.
        address: u32,
        /// Length asked for, bytes.
        len: usize,
    },
    /// The access ends behind the flash.
    OutOfRange {
        /// Address asked for.
        address: u32,
        /// Length asked for, bytes.
        len: usize,
    },
    /// The word was touched since its sector was last erased.
    Reprogrammed {
        /// Address of the word.
        address: u32,
    },
    /// The power is off.
    PowerOff,
    /// The sector is worn out: it takes neither programs nor erases.
    Worn {
        /// Address of the sector.
        address: u32,
    },
}

impl fmt::Display for NorError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Unaligned { address, len } => {
                write!(f, "unaligned access of {len} bytes at {address:#x}")
            }
            Self::OutOfRange { address, len } => {
                write!(f, "access of {len} bytes at {address:#x} ends behind the flash")
            }
            Self::Reprogrammed { address } => write!(f, "word at {address:#x} is not erased"),
            Self::PowerOff => f.write_str("power is off"),
            Self::Worn { address } => write!(f, "sector at {address:#x} is worn out"),
        }
    }
}

impl std::error::Error for NorError {}

impl NorFlashError for NorError {
    fn kind(&self) -> NorFlashErrorKind {
        match self {
            Self::Unaligned { .. } => NorFlashErrorKind::NotAligned,
            Self::OutOfRange { .. } => NorFlashErrorKind::OutOfBounds,
            Self::Reprogrammed { .. } | Self::PowerOff | Self::Worn { .. } => {
                NorFlashErrorKind::Other
            }
        }
    }
}

/// What the flash was asked to do, and what cuts made of it.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Counters {
    /// Reads.
    pub reads: u64,
    /// Bytes read.
    pub read_bytes: u64,
    /// Longest read, bytes.
    pub longest_read: usize,
    /// Calls that program.
    pub programs: u64,
    /// Words programmed whole.
    pub programmed_words: u64,
    /// Sectors erased whole.
    pub erases: u64,
    /// Words that a cut tore: neither erased nor what was to be written.
    pub torn_words: u64,
    /// Sectors that a cut left neither as they were nor erased.
    pub half_erased: u64,
}

/// What a cut makes of the step it falls into.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Tear {
    /// The step did not begin.
    Before,
    /// The step was under way: each bit that should change did so or did not.
    During,
    /// The step ended, but nobody was told.
    After,
}

/// A cut of the power that is still to come.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Cut {
    /// Steps that still succeed. A step is a word programmed or a sector erased.
    pub steps: u64,
    /// What becomes of the step after those.
    pub tear: Tear,
    /// The words of one write are programmed in an order drawn from the seed.
    pub scattered: bool,
}

#[derive(Clone)]
struct Sector {
    bytes: [u8; SECTOR_BYTES],
    /// Bytes touched since the last whole erase.
    touched: [bool; SECTOR_BYTES],
}

impl Sector {
    const ERASED: Self = Self { bytes: [0xFF; SECTOR_BYTES], touched: [false; SECTOR_BYTES] };
}

/// The flash, with words of `WORD` bytes (1 or 4). Cloning it copies the image.
#[derive(Clone)]
pub struct Nor<const WORD: usize> {
    capacity: usize,
    sectors: BTreeMap<u32, Box<Sector>>,
    cut: Option<Cut>,
    /// Tear of the next erase.
    erase_cut: Option<Tear>,
    powered: bool,
    permit_clearing: bool,
    worn: Vec<u32>,
    random: u64,
    counters: Counters,
}

impl<const WORD: usize> fmt::Debug for Nor<WORD> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.debug_struct("Nor")
            .field("word", &WORD)
            .field("capacity", &self.capacity)
            .field("powered", &self.powered)
            .field("cut", &self.cut)
            .field("counters", &self.counters)
            .finish_non_exhaustive()
    }
}

impl<const WORD: usize> Nor<WORD> {
    /// A blank flash with this many sectors.
    #[must_use]
    pub fn new(sectors: usize) -> Self {
        Self {
            capacity: sectors * SECTOR_BYTES,
            sectors: BTreeMap::new(),
            cut: None,
            erase_cut: None,
            powered: true,
            permit_clearing: false,
            worn: Vec::new(),
            random: 1,
            counters: Counters::default(),
        }
    }

    /// Seeds the random bits of torn words and half-erased sectors.
    pub fn seed(&mut self, seed: u64) {
        self.random = seed;
    }

    /// Arms a cut, or disarms it.
    pub fn cut_after(&mut self, cut: Option<Cut>) {
        self.cut = cut;
    }

    /// Arms a cut in the next erase, or disarms it.
    pub fn cut_in_erase(&mut self, tear: Option<Tear>) {
        self.erase_cut = tear;
    }

    /// Whether the power is still on.
    #[must_use]
    pub const fn is_powered(&self) -> bool {
        self.powered
    }

    /// Switches the power on again; an armed cut is disarmed.
    pub fn power_on(&mut self) {
        self.powered = true;
        self.cut = None;
        self.erase_cut = None;
    }

    /// Lets a touched word be programmed again as on a plain chip: bits are only cleared.
    pub fn permit_clearing(&mut self, permit: bool) {
        self.permit_clearing = permit;
    }

    /// Makes a sector refuse programs and erases from now on.
    pub fn wear_out(&mut self, sector: u32) {
        self.worn.push(sector);
    }

    /// What the flash was asked to do.
    #[must_use]
    pub const fn counters(&self) -> &Counters {
        &self.counters
    }

    /// Starts the counters anew.
    pub fn reset_counters(&mut self) {
        self.counters = Counters::default();
    }

    /// Changes stored bytes as bit rot or a wild medium does. The place counts as touched.
    ///
    /// # Panics
    /// When the range ends behind the flash.
    pub fn corrupt(&mut self, address: u32, len: usize, mut change: impl FnMut(u8) -> u8) {
        for at in (address..).take(len) {
            assert!((at as usize) < self.capacity, "corrupted place {at:#x} lies in the flash");
            let (sector, offset) = self.locate(at);
            sector.bytes[offset] = change(sector.bytes[offset]);
            sector.touched[offset] = true;
        }
    }

    /// The whole content.
    #[must_use]
    pub fn image(&self) -> Vec<u8> {
        let mut image = vec![0xFF; self.capacity];
        for (&index, sector) in &self.sectors {
            let from = index as usize * SECTOR_BYTES;
            image[from..from + SECTOR_BYTES].copy_from_slice(&sector.bytes);
        }
        image
    }

    /// Steps of a splitmix64 generator (Steele, Lea and Flood, OOPSLA 2014).
    fn next_random(&mut self) -> u64 {
        self.random = self.random.wrapping_add(0x9E37_79B9_7F4A_7C15);
        let mut z = self.random;
        z = (z ^ (z >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
        z ^ (z >> 31)
    }

    fn locate(&mut self, address: u32) -> (&mut Sector, usize) {
        let at = address as usize;
        let index = address / 4096;
        let sector = self.sectors.entry(index).or_insert_with(|| Box::new(Sector::ERASED));
        (sector, at % SECTOR_BYTES)
    }

    fn check(&self, address: u32, len: usize, unit: usize) -> Result<(), NorError> {
        let at = address as usize;
        if !at.is_multiple_of(unit) || !len.is_multiple_of(unit) {
            return Err(NorError::Unaligned { address, len });
        }
        if at.checked_add(len).is_none_or(|end| end > self.capacity) {
            return Err(NorError::OutOfRange { address, len });
        }
        if self.powered { Ok(()) } else { Err(NorError::PowerOff) }
    }

    fn refuse_worn(&self, address: u32, len: usize) -> Result<(), NorError> {
        let first = address / 4096;
        let last = (address as usize + len.max(1) - 1) / SECTOR_BYTES;
        match self.worn.iter().find(|&&worn| worn >= first && worn as usize <= last) {
            Some(worn) => Err(NorError::Worn { address: worn * 4096 }),
            None => Ok(()),
        }
    }

    /// Takes a step; gives the tear when the cut falls into it.
    fn step(&mut self) -> Option<Tear> {
        let cut = self.cut.as_mut()?;
        if cut.steps > 0 {
            cut.steps -= 1;
            return None;
        }
        self.powered = false;
        Some(cut.tear)
    }

    fn program_word(&mut self, address: u32, word: &[u8]) -> Result<(), NorError> {
        let tear = self.step();
        if tear == Some(Tear::Before) {
            return Err(NorError::PowerOff);
        }
        let keep = if tear == Some(Tear::During) { self.next_random() } else { 0 };
        let (sector, offset) = self.locate(address);
        let mut torn = false;
        for (at, (&byte, keep)) in (offset..).zip(word.iter().zip(keep.to_le_bytes())) {
            let cleared = sector.bytes[at] & byte;
            let stored = cleared | (sector.bytes[at] & keep);
            torn |= stored != cleared;
            sector.bytes[at] = stored;
            sector.touched[at] = true;
        }
        self.counters.torn_words += u64::from(torn);
        if tear.is_some() {
            return Err(NorError::PowerOff);
        }
        self.counters.programmed_words += 1;
        Ok(())
    }

    fn erase_sector(&mut self, address: u32) -> Result<(), NorError> {
        let erase_cut = self.erase_cut.take();
        self.powered &= erase_cut.is_none();
        match erase_cut.or_else(|| self.step()) {
            Some(Tear::Before) => return Err(NorError::PowerOff),
            Some(Tear::During) => {
                // Bits rise one by one; how many have done so is drawn first.
                let share = self.next_random() % 256;
                let mut draw = self.clone_random();
                let (sector, _) = self.locate(address);
                for byte in &mut sector.bytes {
                    for bit in 0..8 {
                        if draw() % 256 < share {
                            *byte |= 1 << bit;
                        }
                    }
                }
                sector.touched = [true; SECTOR_BYTES];
                self.counters.half_erased += 1;
                return Err(NorError::PowerOff);
            }
            Some(Tear::After) => {
                *self.locate(address).0 = Sector::ERASED;
                return Err(NorError::PowerOff);
            }
            None => *self.locate(address).0 = Sector::ERASED,
        }
        self.counters.erases += 1;
        Ok(())
    }

    /// A generator of its own, so that a sector can be changed while it is borrowed.
    fn clone_random(&mut self) -> impl FnMut() -> u64 + use<WORD> {
        let mut state = self.next_random() | 1;
        move || {
            // xorshift64 (Marsaglia, Journal of Statistical Software 8 (2003) 14).
            state ^= state << 13;
            state ^= state >> 7;
            state ^= state << 17;
            state
        }
    }

    /// The words of a write in the order in which they are programmed.
    fn order(&mut self, words: usize) -> Vec<usize> {
        let mut order: Vec<usize> = (0..words).collect();
        if self.cut.is_some_and(|cut| cut.scattered) {
            for last in (1..words).rev() {
                let pick = usize::try_from(self.next_random() % (last as u64 + 1)).unwrap_or(0);
                order.swap(last, pick);
            }
        }
        order
    }
}

impl<const WORD: usize> ErrorType for Nor<WORD> {
    type Error = NorError;
}

impl<const WORD: usize> ReadNorFlash for Nor<WORD> {
    const READ_SIZE: usize = WORD;

    fn read(&mut self, offset: u32, bytes: &mut [u8]) -> Result<(), NorError> {
        self.check(offset, bytes.len(), WORD)?;
        self.counters.reads += 1;
        self.counters.read_bytes += bytes.len() as u64;
        self.counters.longest_read = self.counters.longest_read.max(bytes.len());
        let mut rest = bytes;
        let mut at = offset as usize;
        while !rest.is_empty() {
            let (index, inside) = (at / SECTOR_BYTES, at % SECTOR_BYTES);
            let (part, behind) = rest.split_at_mut(rest.len().min(SECTOR_BYTES - inside));
            match u32::try_from(index).ok().and_then(|index| self.sectors.get(&index)) {
                Some(sector) => part.copy_from_slice(&sector.bytes[inside..inside + part.len()]),
                None => part.fill(0xFF),
            }
            at += part.len();
            rest = behind;
        }
        Ok(())
    }

    fn capacity(&self) -> usize {
        self.capacity
    }
}

impl<const WORD: usize> NorFlash for Nor<WORD> {
    const WRITE_SIZE: usize = WORD;
    const ERASE_SIZE: usize = SECTOR_BYTES;

    fn erase(&mut self, from: u32, to: u32) -> Result<(), NorError> {
        let len = to.saturating_sub(from) as usize;
        self.check(from, len, SECTOR_BYTES)?;
        self.refuse_worn(from, len)?;
        for address in (from..to).step_by(SECTOR_BYTES) {
            self.erase_sector(address)?;
        }
        Ok(())
    }

    fn write(&mut self, offset: u32, bytes: &[u8]) -> Result<(), NorError> {
        self.check(offset, bytes.len(), WORD)?;
        self.refuse_worn(offset, bytes.len())?;
        let words: Vec<(u32, &[u8])> =
            (offset..).step_by(WORD).zip(bytes.chunks_exact(WORD)).collect();
        for &(address, word) in &words {
            let clearing = self.permit_clearing;
            let (sector, at) = self.locate(address);
            let touched = sector.touched[at..at + word.len()].contains(&true);
            if touched && !clearing {
                return Err(NorError::Reprogrammed { address });
            }
        }
        self.counters.programs += 1;
        for index in self.order(words.len()) {
            let (address, word) = words[index];
            self.program_word(address, word)?;
        }
        Ok(())
    }
}

#[cfg(test)]
mod tests;
