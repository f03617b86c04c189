//! What was found, and what it means.

use super::contradiction::Contradiction;
use super::damage::{Damage, Place, What};
use crate::journal_file::{DeviceIdentity, HeadRecord};

/// Everything that a verification found.
#[derive(Clone, Debug, Default)]
pub struct Report {
    /// Which device; `None` when its record is damaged.
    pub identity: Option<DeviceIdentity>,
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
    /// Samples among them.
    pub samples: u64,
    /// Places that cannot be read, in the order of the journal; those of the file first.
    pub damage: Vec<Damage>,
    /// Statements that cannot both be true.
    pub contradictions: Vec<Contradiction>,
    /// Plans in the file.
    pub plans: u32,
    /// Fingerprints that occur in sectors, of plans that are not in the file.
    pub missing_plans: Vec<u64>,
    /// Where the journal ended; `None` in a file of a collection that was not finished.
    pub head: Option<HeadRecord>,
    /// The newest sector is as long as the head says.
    pub reaches_head: bool,
}

impl Report {
    /// Everything that the device held is in the file.
    #[must_use]
    pub fn complete(&self) -> bool {
        self.reaches_head && self.missing_sectors == 0 && self.damaged_records() == 0
    }

    /// Nothing is damaged, missing or contradictory. A missing signature is no damage.
    #[must_use]
    pub fn sound(&self) -> bool {
        self.complete()
            && self.damage.is_empty()
            && self.contradictions.is_empty()
            && self.missing_plans.is_empty()
    }

    /// Damaged places of the file itself.
    #[must_use]
    pub fn damaged_records(&self) -> usize {
        self.damage.iter().filter(|damage| matches!(damage.what, What::File(_))).count()
    }

    /// Damaged places in sectors, as the device has them.
    #[must_use]
    pub fn damaged_places(&self) -> u32 {
        self.damaged_in_sectors().count().try_into().unwrap_or(u32::MAX)
    }

    /// Sectors with a damaged place.
    #[must_use]
    pub fn damaged_sectors(&self) -> u32 {
        let mut sequences: Vec<u32> = self.damaged_in_sectors().collect();
        sequences.dedup();
        sequences.len().try_into().unwrap_or(u32::MAX)
    }

    fn damaged_in_sectors(&self) -> impl Iterator<Item = u32> {
        self.damage.iter().filter_map(|damage| match damage.place {
            Place::Sector { sequence } | Place::Block { sequence, .. } => Some(sequence),
            Place::File { .. } | Place::Sectors { .. } => None,
        })
    }

    /// Entries missing by the numbers around damaged places.
    #[must_use]
    pub fn missing_entries(&self) -> u64 {
        // Places of one stretch stand together and share their number.
        let mut rest = self.damage.iter();
        let mut sum = 0;
        while let Some(first) = rest.next() {
            sum += u64::from(first.missing.entries.unwrap_or(0));
            for _ in 1..first.missing.places {
                rest.next();
            }
        }
        sum
    }

    /// What it means for conclusions, in one sentence.
    #[must_use]
    pub fn conclusion(&self) -> &'static str {
        let unknown = self.damage.iter().any(|damage| {
            damage.missing.entries.is_none() && !matches!(damage.what, What::File(_))
        });
        if !self.contradictions.is_empty() {
            "The file contradicts itself: rely on no conclusion from it before the cause is known."
        } else if self.sectors == 0 {
            "The file holds no sector: nothing can be concluded from it."
        } else if unknown || self.missing_entries() > 0 || self.missing_sectors > 0 {
            "Entries are missing at the named places: loads, times and alarms there may have been \
             higher than a replay shows; everything else can be relied on."
        } else if self.head.is_none() || !self.reaches_head {
            "The collection was not finished: nothing is known of what came after the last sector."
        } else if !self.missing_plans.is_empty() {
            "Every entry is here, but samples of a missing plan can only be read, not judged again."
        } else if !self.damage.is_empty() {
            "No entry is missing: conclusions stand, and the named places say what was torn or worn."
        } else {
            "Every entry that the device numbered is here: a replay can judge all of it."
        }
    }
}
