//! The stretches of flash that the scenario touches, and the stores into them.

use std::error::Error;
use std::io;

use strake_core::journal::{SECTOR_BYTES, SectorHeader};

use crate::flash_file::{FlashFile, PLANS_BYTES, PLANS_OFFSET};
use crate::plugin::Store;

/// Sectors of the journal that are looked at; the scenario does not come that far.
pub(super) const SECTORS: usize = 16;
const ERASE_WORDS: usize = SECTOR_BYTES / 4;
const JOURNAL_BYTES: usize = SECTORS * SECTOR_BYTES;

/// The first sectors of the journal, and the plan slots.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) struct Content {
    pub(super) journal: Vec<u8>,
    pub(super) plans: Vec<u8>,
}

impl Content {
    pub(super) fn read(flash: &FlashFile) -> io::Result<Self> {
        let plans = usize::try_from(PLANS_BYTES).unwrap_or(0);
        Ok(Self { journal: flash.read(0, JOURNAL_BYTES)?, plans: flash.read(PLANS_OFFSET, plans)? })
    }

    /// Replaces what the flash holds there.
    pub(super) fn write(&self, flash: &FlashFile) -> io::Result<()> {
        flash.overwrite(0, &self.journal)?;
        flash.overwrite(PLANS_OFFSET, &self.plans)
    }

    /// What stands there after these stores.
    pub(super) fn after(&self, stores: &[Store]) -> Result<Self, Box<dyn Error>> {
        let mut content = self.clone();
        for store in stores {
            let offset = u64::from(store.offset);
            let (part, at) = match offset.checked_sub(PLANS_OFFSET) {
                Some(offset) => (&mut content.plans, offset),
                None => (&mut content.journal, offset),
            };
            let at = usize::try_from(at)?;
            let word = part.get_mut(at..at + 4).ok_or("a store beyond the sectors looked at")?;
            word.copy_from_slice(&store.word.to_le_bytes());
        }
        Ok(content)
    }

    /// The newest sector's number and the bytes in use in it.
    pub(super) fn newest(&self) -> Option<(u32, usize)> {
        let sectors = self.journal.chunks(SECTOR_BYTES);
        let headers = sectors.filter_map(|sector| {
            let sequence = SectorHeader::decode(sector).ok()?.sequence;
            let used = sector.iter().rposition(|&byte| byte != 0xFF)? + 1;
            Some((sequence, used))
        });
        headers.max()
    }

    /// Fills a sector of the journal with what no version writes.
    pub(super) fn spoil(&mut self, sequence: u32) {
        let at = usize::try_from(sequence).unwrap_or(0) * SECTOR_BYTES;
        if let Some(sector) = self.journal.get_mut(at..at + SECTOR_BYTES) {
            sector.fill(0x5A);
        }
    }
}

/// The stores of a run, told apart.
#[derive(Debug)]
pub(super) struct Steps {
    /// Number of each store, from one, that programs a word.
    pub(super) programs: Vec<usize>,
    /// Number of the first store of each erase.
    pub(super) erases: Vec<usize>,
}

impl Steps {
    pub(super) fn of(stores: &[Store]) -> Self {
        let mut steps = Self { programs: Vec::new(), erases: Vec::new() };
        let mut done = 0;
        while done < stores.len() {
            if is_erase(&stores[done..]) {
                steps.erases.push(done + 1);
                done += ERASE_WORDS;
            } else {
                steps.programs.push(done + 1);
                done += 1;
            }
        }
        steps
    }

    /// After every program; of each erase after the first store, the last, and eight drawn ones.
    pub(super) fn cuts(&self, mut draw: impl FnMut(u32) -> u32) -> Vec<usize> {
        let mut cuts = self.programs.clone();
        for first in &self.erases {
            let inner = u32::try_from(ERASE_WORDS - 2).unwrap_or(0);
            let mut places = vec![0, ERASE_WORDS - 1];
            places.extend((0..8).map(|_| 1 + draw(inner) as usize));
            cuts.extend(places.into_iter().map(|place| first + place));
        }
        cuts.sort_unstable();
        cuts.dedup();
        cuts
    }
}

/// A whole sector set to ones in rising order.
fn is_erase(stores: &[Store]) -> bool {
    let Some(run) = stores.get(..ERASE_WORDS) else { return false };
    let first = run[0].offset;
    (first as usize).is_multiple_of(SECTOR_BYTES)
        && (first..)
            .step_by(4)
            .zip(run)
            .all(|(offset, store)| *store == Store { offset, word: u32::MAX })
}
