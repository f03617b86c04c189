//! PSRAM treated as NOR flash: 4-byte program words, 4 KiB erase blocks.
//!
//! The emulator keeps PSRAM in a file, so content outlives the machine. Programming only clears
//! bits (the word becomes old AND new), erasing sets a whole block to ones, both word by word in
//! rising order: a cut leaves the words before it done and those after it untouched. Not shown:
//! the time an operation takes, wear, half-programmed words.

use core::slice;
use core::sync::atomic::{AtomicU32, Ordering, compiler_fence};

use embedded_storage::nor_flash::{
    ErrorType, MultiwriteNorFlash, NorFlash, NorFlashErrorKind, ReadNorFlash, check_erase,
    check_read, check_write,
};

/// Bytes of a program word.
pub const WORD_BYTES: usize = 4;
/// Bytes of an erase block.
pub const BLOCK_BYTES: usize = 4096;
/// First address of the journal.
pub const JOURNAL_BASE: usize = 0x2100_0000;
/// Bytes of the journal: 2,048 sectors.
pub const JOURNAL_BYTES: usize = 8 << 20;
/// First address of the plan slots.
pub const PLANS_BASE: usize = JOURNAL_BASE + JOURNAL_BYTES;
/// Bytes of the plan slots: 16 blocks.
pub const PLANS_BYTES: usize = 64 << 10;

const ERASED: u32 = u32::MAX;

/// A stretch of the flash, addressed from zero.
#[derive(Debug)]
pub struct NorRegion {
    words: &'static [AtomicU32],
}

/// The journal and the plan slots.
#[expect(unsafe_code, reason = "the flash lies at a fixed address")]
pub(crate) fn regions() -> (NorRegion, NorRegion) {
    let region = |base: usize, bytes: usize| {
        let first = core::ptr::with_exposed_provenance(base);
        // SAFETY: PSRAM is mapped at 0x2100_0000 for 16 MiB, holds no Rust object, is aligned, and
        // every bit pattern is a valid word; atomics allow for all other accesses to it.
        NorRegion { words: unsafe { slice::from_raw_parts(first, bytes / WORD_BYTES) } }
    };
    (region(JOURNAL_BASE, JOURNAL_BYTES), region(PLANS_BASE, PLANS_BYTES))
}

fn store(word: &AtomicU32, value: u32) {
    word.store(value, Ordering::Relaxed);
    // Keeps the stores in order and apart.
    compiler_fence(Ordering::SeqCst);
}

/// Fills `to` from the beginning of `from`.
fn copy(to: &mut [u8], from: Option<&[u8]>) {
    for (to, from) in to.iter_mut().zip(from.unwrap_or_default()) {
        *to = *from;
    }
}

/// Index from an offset that was checked against the capacity.
fn index(offset: u32) -> usize {
    usize::try_from(offset).unwrap_or(usize::MAX)
}

impl ErrorType for NorRegion {
    type Error = NorFlashErrorKind;
}

impl ReadNorFlash for NorRegion {
    const READ_SIZE: usize = 1;

    fn read(&mut self, offset: u32, bytes: &mut [u8]) -> Result<(), NorFlashErrorKind> {
        check_read(self, offset, bytes.len())?;
        let offset = index(offset);
        let words = self.words.get(offset / WORD_BYTES..).unwrap_or_default();
        let mut stored = words.iter().map(|word| word.load(Ordering::Relaxed).to_le_bytes());
        // Up to the first whole word, whole words, and what is left of the last.
        let skipped = offset % WORD_BYTES;
        let head = if skipped == 0 { 0 } else { WORD_BYTES - skipped };
        let head = if head < bytes.len() { head } else { bytes.len() };
        let (head, rest) = bytes.split_at_mut_checked(head).unwrap_or_default();
        if !head.is_empty() {
            copy(head, stored.next().unwrap_or_default().get(skipped..));
        }
        let (whole, tail) = rest.as_chunks_mut::<WORD_BYTES>();
        for (bytes, word) in whole.iter_mut().zip(&mut stored) {
            *bytes = word;
        }
        if !tail.is_empty() {
            copy(tail, stored.next().as_ref().map(<[u8; WORD_BYTES]>::as_slice));
        }
        Ok(())
    }

    fn capacity(&self) -> usize {
        size_of_val(self.words)
    }
}

impl NorFlash for NorRegion {
    const WRITE_SIZE: usize = WORD_BYTES;
    const ERASE_SIZE: usize = BLOCK_BYTES;

    fn erase(&mut self, from: u32, to: u32) -> Result<(), NorFlashErrorKind> {
        check_erase(self, from, to)?;
        let range = index(from) / WORD_BYTES..index(to) / WORD_BYTES;
        for word in self.words.get(range).unwrap_or_default() {
            store(word, ERASED);
        }
        Ok(())
    }

    fn write(&mut self, offset: u32, bytes: &[u8]) -> Result<(), NorFlashErrorKind> {
        check_write(self, offset, bytes.len())?;
        let (values, _) = bytes.as_chunks::<WORD_BYTES>();
        let words = self.words.get(index(offset) / WORD_BYTES..).unwrap_or_default();
        for (word, value) in words.iter().zip(values) {
            store(word, word.load(Ordering::Relaxed) & u32::from_le_bytes(*value));
        }
        Ok(())
    }
}

/// A second program of the same word clears further bits, as above.
impl MultiwriteNorFlash for NorRegion {}
