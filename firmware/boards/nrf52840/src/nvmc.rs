//! The plan slots in the chip's own flash, and the controller that writes it (product
//! specification, NVMC): words of 4 bytes, pages of 4,096.
//!
//! The processor stands still while a page is erased (85 ms) or a word written (41 us), for the
//! program lies in the same flash. That happens while a plan is loaded and at no other time.

use core::slice;
use core::sync::atomic::{AtomicU32, Ordering};

use embedded_storage::nor_flash::{
    ErrorType, NorFlash, NorFlashErrorKind, ReadNorFlash, check_erase, check_read, check_write,
};
use nrf52840_hal::pac::NVMC;

const WORD_BYTES: usize = 4;
const PAGE_BYTES: usize = 4096;
/// First address of the last eight pages: seven for the plan slots, and the last one for keys.
pub(crate) const SLOTS_BASE: u32 = 0x000F_8000;
/// Pages of the plan slots.
const SLOTS_PAGES: usize = 7;
/// Asked this often whether the controller is done: many times the longest erase.
const POLLS: u32 = 10_000_000;

/// The plan slots, addressed from zero.
#[derive(Debug)]
pub struct PlanFlash {
    controller: NVMC,
    words: &'static [AtomicU32],
}

/// What the controller lets through.
#[derive(Clone, Copy)]
enum Allowed {
    Reading,
    Writing,
    Erasing,
}

impl PlanFlash {
    #[expect(unsafe_code, reason = "the flash lies at a fixed address")]
    pub(crate) fn new(controller: NVMC) -> Self {
        let base = usize::try_from(SLOTS_BASE).unwrap_or(0);
        let first = core::ptr::with_exposed_provenance(base);
        // SAFETY: flash of this chip in which no Rust object lies; the program's region in memory.x
        // ends far below. Any bits are a word, and atomics allow for other accesses.
        let words = unsafe { slice::from_raw_parts(first, SLOTS_PAGES * PAGE_BYTES / WORD_BYTES) };
        Self { controller, words }
    }

    fn allow(&mut self, allowed: Allowed) -> Result<(), NorFlashErrorKind> {
        self.controller.config.write(|w| match allowed {
            Allowed::Reading => w.wen().ren(),
            Allowed::Writing => w.wen().wen(),
            Allowed::Erasing => w.wen().een(),
        });
        self.wait()
    }

    fn wait(&mut self) -> Result<(), NorFlashErrorKind> {
        for _ in 0..POLLS {
            if self.controller.ready.read().ready().is_ready() {
                return Ok(());
            }
        }
        Err(NorFlashErrorKind::Other)
    }

    #[expect(unsafe_code, reason = "an address into a register")]
    fn erase_pages(&mut self, from: u32, to: u32) -> Result<(), NorFlashErrorKind> {
        for offset in (from..to).step_by(PAGE_BYTES) {
            let address = SLOTS_BASE.wrapping_add(offset);
            // SAFETY: a page of the plan slots, whose bounds the caller has checked.
            self.controller.erasepage().write(|w| unsafe { w.bits(address) });
            self.wait()?;
        }
        Ok(())
    }

    fn write_words(&mut self, offset: u32, bytes: &[u8]) -> Result<(), NorFlashErrorKind> {
        let words = self.words.get(index(offset) / WORD_BYTES..).unwrap_or_default();
        for (word, value) in words.iter().zip(bytes.as_chunks::<WORD_BYTES>().0) {
            word.store(u32::from_le_bytes(*value), Ordering::SeqCst);
            self.wait()?;
        }
        Ok(())
    }
}

/// Index from an offset that was checked against the capacity.
fn index(offset: u32) -> usize {
    usize::try_from(offset).unwrap_or(usize::MAX)
}

impl ErrorType for PlanFlash {
    type Error = NorFlashErrorKind;
}

impl ReadNorFlash for PlanFlash {
    const READ_SIZE: usize = 1;

    fn read(&mut self, offset: u32, bytes: &mut [u8]) -> Result<(), NorFlashErrorKind> {
        check_read(self, offset, bytes.len())?;
        for (at, byte) in (index(offset)..).zip(bytes) {
            let word = self.words.get(at / WORD_BYTES).map(|word| word.load(Ordering::Relaxed));
            let stored = word.unwrap_or(u32::MAX).to_le_bytes();
            *byte = stored.get(at % WORD_BYTES).copied().unwrap_or(u8::MAX);
        }
        Ok(())
    }

    fn capacity(&self) -> usize {
        size_of_val(self.words)
    }
}

impl NorFlash for PlanFlash {
    const WRITE_SIZE: usize = WORD_BYTES;
    const ERASE_SIZE: usize = PAGE_BYTES;

    fn erase(&mut self, from: u32, to: u32) -> Result<(), NorFlashErrorKind> {
        check_erase(self, from, to)?;
        self.allow(Allowed::Erasing)?;
        let erased = self.erase_pages(from, to);
        self.allow(Allowed::Reading)?;
        erased
    }

    fn write(&mut self, offset: u32, bytes: &[u8]) -> Result<(), NorFlashErrorKind> {
        check_write(self, offset, bytes.len())?;
        self.allow(Allowed::Writing)?;
        let written = self.write_words(offset, bytes);
        self.allow(Allowed::Reading)?;
        written
    }
}
