//! Is a journal file whole? Every sector there, every block readable, every plan at hand, a head.
//!
//! **Complete** means that the file holds everything that the device held when it was collected, as
//! stored there. A place that is damaged on the device itself (a write torn by a loss of power,
//! worn flash) is counted apart: no collection can mend it.

use crate::journal_file::{HeadRecord, JournalFile, JournalFileError};
use std::collections::BTreeSet;
use std::io::{Read, Seek};
use strake_core::journal::{Item, SectorReader};

/// What was found.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct JournalCheck {
    /// Sequence of the first sector in the file.
    pub oldest: Option<u32>,
    /// Sequence of the last.
    pub newest: Option<u32>,
    /// Sectors in the file.
    pub sectors: u32,
    /// Their bytes in use.
    pub bytes: u64,
    /// Sectors missing between the first and the head's newest.
    pub missing_sectors: u32,
    /// Entries that can be read.
    pub entries: u64,
    /// Sectors with a damaged place, or without a readable header.
    pub damaged_sectors: u32,
    /// Damaged places in sectors.
    pub damaged_places: u32,
    /// Damaged places of the file itself.
    pub damaged_records: u32,
    /// Plans in the file.
    pub plans: u32,
    /// Fingerprints that occur in sectors, of plans that are not in the file.
    pub missing_plans: Vec<u64>,
    /// Where the journal ended; `None` in a file of a collection that was not finished.
    pub head: Option<HeadRecord>,
    /// The newest sector is as long as the head says.
    pub reaches_head: bool,
}

impl JournalCheck {
    /// Everything that the device held is in the file.
    #[must_use]
    pub const fn complete(&self) -> bool {
        self.reaches_head && self.missing_sectors == 0 && self.damaged_records == 0
    }
}

/// Passes through the file, one sector in memory at a time.
///
/// # Errors
/// The system's reason when it cannot be read. Damage is no error.
pub fn check<R: Read + Seek>(file: &mut JournalFile<R>) -> Result<JournalCheck, JournalFileError> {
    let plans: BTreeSet<u64> = file.plans().map(|(_, fingerprint)| fingerprint).collect();
    let mut found = JournalCheck {
        head: file.head().copied(),
        damaged_records: u32::try_from(file.damage().len()).unwrap_or(u32::MAX),
        plans: u32::try_from(plans.len()).unwrap_or(u32::MAX),
        ..JournalCheck::default()
    };
    let mut used_plans = BTreeSet::new();
    let mut last_used = 0;
    while let Some(sector) = file.sector_after(found.newest)? {
        found.oldest = found.oldest.or(Some(sector.sequence));
        found.newest = Some(sector.sequence);
        found.sectors += 1;
        found.bytes += sector.bytes.len() as u64;
        last_used = sector.bytes.len();
        let damaged = read_sector(&sector.bytes, sector.sequence, &mut found, &mut used_plans);
        found.damaged_places += damaged;
        found.damaged_sectors += u32::from(damaged > 0);
    }
    if let Some(head) = found.head {
        found.reaches_head = match found.newest {
            Some(newest) => newest == head.newest && last_used == usize::from(head.used),
            None => head.used == 0,
        };
        let span = found.oldest.and_then(|oldest| head.newest.checked_sub(oldest));
        found.missing_sectors = span.map_or(0, |span| (span + 1).saturating_sub(found.sectors));
    }
    used_plans.remove(&0);
    found.missing_plans = used_plans.difference(&plans).copied().collect();
    Ok(found)
}

/// Reads every item; gives the damaged places.
fn read_sector(
    bytes: &[u8],
    sequence: u32,
    found: &mut JournalCheck,
    plans: &mut BTreeSet<u64>,
) -> u32 {
    let reader = match SectorReader::new(bytes) {
        Ok(reader) if reader.header().sequence == sequence => reader,
        _ => return 1,
    };
    plans.insert(reader.header().plan_fingerprint);
    let mut damaged = 0;
    for item in reader {
        match item {
            Item::Entry(_) => found.entries += 1,
            Item::State { .. } => {}
            Item::Damage(_) => damaged += 1,
        }
    }
    damaged
}
