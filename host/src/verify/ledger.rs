//! Keeping count of entries between two stated numbers; the replay keeps the same ledger.

use super::contradiction::Contradiction;
use super::damage::{Damage, Missing, Place, What};
use crate::journal_file::{self, HeadRecord};
use strake_core::evaluate::State;
use strake_core::journal::{Entry, SECTOR_BYTES, SectorHeader};

/// The count between the last stated number and the next.
#[derive(Clone, Debug, Default)]
pub(crate) struct Ledger {
    /// Number that the next entry has if nothing is missing.
    expected: Option<u32>,
    /// Samples judged since the journal began, by the last checkpoint and what was read since.
    samples: Option<u32>,
    /// Damaged places since the last stated number.
    open: Vec<(Place, What)>,
    /// Sequence of the last sector, and its bytes.
    last: Option<u32>,
    last_length: usize,
    pub(crate) damage: Vec<Damage>,
    pub(crate) contradictions: Vec<Contradiction>,
    /// Sectors missing between others.
    pub(crate) absent: u32,
}

impl Ledger {
    /// A ledger that begins with what is damaged in the file itself.
    pub(crate) fn of_file(damage: &[journal_file::Damage]) -> Self {
        let damage = damage.iter().map(|&damage| Damage {
            place: Place::File { offset: damage.offset },
            what: What::File(damage),
            missing: Missing { places: 1, ..Missing::default() },
        });
        Self { damage: damage.collect(), ..Self::default() }
    }

    /// The record of a sector comes; gives whether it follows the one before without a hole.
    pub(crate) fn arrive(&mut self, sequence: u32) -> bool {
        let before = self.last.replace(sequence);
        let Some(next) = before.map(|before| before.saturating_add(1)) else { return false };
        if next < sequence {
            self.absent = self.absent.saturating_add(sequence - next);
            let place = Place::Sectors { first: next, last: sequence - 1 };
            self.place(place, What::Absent);
        }
        next == sequence
    }

    /// The sector's header is read. `state` is its checkpoint; `lost` the samples that the device
    /// itself states as lost right behind it, `None` when it had no time to state any. Gives
    /// whether the checkpoint counts the very samples that were read.
    pub(crate) fn header(
        &mut self,
        header: &SectorHeader,
        state: Option<&State>,
        lost: Option<u32>,
    ) -> bool {
        let sequence = header.sequence;
        let counted = self.samples;
        let missing_samples = match (counted, state) {
            (Some(counted), Some(state)) => Some(state.samples.wrapping_sub(counted)),
            _ => None,
        };
        let sound = self.open.is_empty();
        let whole = self.settle(Some(sequence), header.first_entry, missing_samples);
        if let (true, true, Some(counted), Some(state)) = (sound, whole, counted, state)
            && missing_samples != Some(lost.unwrap_or(state.samples.wrapping_sub(counted)))
        {
            let stated = state.samples;
            self.contradictions.push(Contradiction::Samples { sequence, counted, stated });
        }
        self.samples = state.map(|state| state.samples);
        self.expected = Some(header.first_entry);
        if state.is_none() {
            self.place(Place::Sector { sequence }, What::Checkpoint);
        }
        missing_samples == Some(0)
    }

    /// An entry is read.
    pub(crate) fn entry(&mut self, entry: &Entry) {
        self.expected = self.expected.map(|expected| expected.wrapping_add(1));
        if matches!(entry, Entry::Sample(_)) {
            self.samples = self.samples.map(|samples| samples.wrapping_add(1));
        }
    }

    /// Something cannot be read.
    pub(crate) fn place(&mut self, place: Place, what: What) {
        self.open.push((place, what));
    }

    /// Whether something was damaged since the last stated number.
    pub(crate) fn is_broken(&self) -> bool {
        !self.open.is_empty()
    }

    /// All of the sector's bytes are read, `length` of them; `is_last` when no sector follows.
    /// Gives whether its end is missing.
    pub(crate) fn end_of_sector(&mut self, sequence: u32, length: usize, is_last: bool) -> bool {
        self.last_length = length;
        let cut_short = length < SECTOR_BYTES && !is_last;
        if cut_short {
            self.place(Place::Sector { sequence }, What::CutShort);
        }
        cut_short
    }

    /// The journal ends, and the head says where it should; gives whether it does.
    pub(crate) fn finish(&mut self, head: Option<&HeadRecord>) -> bool {
        let Some(head) = head else {
            self.close(Missing::default());
            return false;
        };
        let reaches = match self.last {
            Some(newest) => newest == head.newest && self.last_length >= usize::from(head.used),
            None => head.used == 0,
        };
        match self.last {
            Some(newest) if newest > head.newest => {
                let stated = head.newest;
                self.contradictions.push(Contradiction::BehindHead { newest, stated });
            }
            Some(newest) if newest < head.newest => {
                self.absent = self.absent.saturating_add(head.newest - newest);
                self.place(Place::Sectors { first: newest + 1, last: head.newest }, What::Absent);
            }
            Some(sequence) if !reaches => self.place(Place::Sector { sequence }, What::CutShort),
            Some(_) => {}
            None if reaches => {}
            None => {
                self.absent = 1;
                self.place(Place::Sector { sequence: head.newest }, What::Absent);
            }
        }
        self.settle(None, head.next_entry, None);
        reaches
    }

    /// A number is stated; gives whether nothing is missing before it.
    fn settle(&mut self, at: Option<u32>, stated: u32, samples: Option<u32>) -> bool {
        let Some(expected) = self.expected else {
            self.close(Missing::default());
            return false;
        };
        let difference = stated.wrapping_sub(expected).cast_signed();
        let entries = difference.unsigned_abs();
        if difference < 0 {
            self.contradictions.push(Contradiction::EntriesAdded { sequence: at, entries });
        } else if difference > 0 && self.open.is_empty() {
            self.contradictions.push(Contradiction::EntriesRemoved { sequence: at, entries });
        }
        let entries = u32::try_from(difference).unwrap_or(0);
        let samples = samples.filter(|&samples| samples <= entries);
        self.close(Missing { entries: Some(entries), samples, places: 0 });
        difference == 0
    }

    fn close(&mut self, missing: Missing) {
        let places = u32::try_from(self.open.len()).unwrap_or(u32::MAX);
        let missing = Missing { places, ..missing };
        // What was whole once held entries, whatever the numbers say.
        let decayed = self.open.iter().any(|&(_, what)| what == What::Decayed);
        let entries = missing.entries.filter(|&entries| entries > 0 || !decayed);
        let missing = Missing { entries, ..missing };
        self.damage.extend(self.open.drain(..).map(|(place, what)| Damage {
            place,
            what,
            missing,
        }));
    }
}
