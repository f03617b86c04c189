//! The flash with the vector file: read in order at its front, written in order behind.

use embedded_storage::nor_flash::{NorFlash as _, ReadNorFlash as _};
use heapless::Vec;
use strake_board_emulated::flash::NorRegion;
use strake_core::plan::codec::Fetch;

use crate::vectors::{RESULT_HEAD_BYTES, RESULT_MAGIC};

pub(crate) struct File {
    flash: NorRegion,
    read_at: u32,
    /// Nothing is handed out from here on.
    end: u32,
    results_at: u32,
    /// Words handed to the flash or waiting.
    words: u32,
    waiting: Vec<u8, 256>,
    sound: bool,
}

impl File {
    pub(crate) fn new(flash: NorRegion) -> Self {
        Self {
            flash,
            read_at: 0,
            end: u32::MAX,
            results_at: 0,
            words: 0,
            waiting: Vec::new(),
            sound: true,
        }
    }

    /// Where the next byte is read.
    pub(crate) fn position(&self) -> u32 {
        self.read_at
    }

    /// Goes on at `offset`, without an end.
    pub(crate) fn read_from(&mut self, offset: u32) {
        self.read_at = offset;
        self.end = u32::MAX;
    }

    /// Hands out nothing from `offset` on.
    pub(crate) fn end_at(&mut self, offset: u32) {
        self.end = offset;
    }

    /// The next words.
    pub(crate) fn words<const N: usize>(&mut self) -> Option<[u32; N]> {
        let mut words = [0; N];
        for word in &mut words {
            let mut bytes = [0; 4];
            self.fetch(&mut bytes)?;
            *word = u32::from_le_bytes(bytes);
        }
        Some(words)
    }

    /// Results begin here.
    pub(crate) fn write_from(&mut self, offset: u32) {
        self.results_at = offset;
    }

    /// Appends a word to the results.
    pub(crate) fn put(&mut self, word: u32) {
        self.sound &= self.waiting.extend_from_slice(&word.to_le_bytes()).is_ok();
        self.words = self.words.saturating_add(1);
        if self.waiting.is_full() {
            self.write_waiting();
        }
    }

    fn write_waiting(&mut self) {
        let bytes = u32::try_from(self.waiting.len()).unwrap_or(0);
        let end = self.words.saturating_mul(4).saturating_add(RESULT_HEAD_BYTES);
        let at = self.results_at.saturating_add(end).saturating_sub(bytes);
        self.sound &= self.flash.write(at, &self.waiting).is_ok();
        self.waiting.clear();
    }

    /// Writes what waits and the head; gives the number of words, if all went well.
    pub(crate) fn finish(&mut self, processor_id: u32) -> Option<u32> {
        self.write_waiting();
        if !self.sound {
            return None;
        }
        let [marker, id, count] = [RESULT_MAGIC, processor_id, self.words].map(u32::to_le_bytes);
        self.flash.write(self.results_at.saturating_add(4), &id).ok()?;
        self.flash.write(self.results_at.saturating_add(8), &count).ok()?;
        self.flash.write(self.results_at, &marker).ok()?;
        Some(self.words)
    }
}

impl Fetch for File {
    fn fetch(&mut self, out: &mut [u8]) -> Option<()> {
        let next = self.read_at.checked_add(u32::try_from(out.len()).ok()?)?;
        if next > self.end {
            return None;
        }
        self.flash.read(self.read_at, out).ok()?;
        self.read_at = next;
        Some(())
    }
}
