//! Reading the journal back at start-up: the newest whole checkpoint, then every entry behind it.
//!
//! When the newest sector's checkpoint is torn, the one before it serves, and so on back to the
//! oldest; all entries from there to the end follow in order. When there is none at all, only the
//! newest sector's entries are given.

use super::ring::Ring;
use embedded_storage::nor_flash::NorFlash;
use strake_core::journal::checkpoint::Collector;
use strake_core::journal::header::HEADER_BYTES;
use strake_core::journal::{
    Entry, Item, PAGE_BYTES, PageReader, STATE_BYTES_MAX, SectorHeader, is_blank,
};

/// Takes what the journal remembers.
pub trait Restore {
    /// The state at the opening of a sector; comes at most once, before every entry.
    fn checkpoint(&mut self, bytes: &[u8]);
    /// The sector whose entries follow. Comes before `checkpoint` too.
    fn sector(&mut self, header: &SectorHeader) {
        let _ = header;
    }
    /// The next entry.
    fn entry(&mut self, entry: &Entry);
}

/// What was found at start-up.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
pub struct Recovery {
    /// Number of the last start that left a trace; 0 when there is none.
    pub last_boot: u16,
    /// Tick of that start's last sample, ms; `None` when no sample of it was met.
    pub last_tick_ms: Option<u64>,
    /// Number of the next entry.
    pub next_entry: u32,
    /// Sequence number of the newest sector with a readable header.
    pub newest_sequence: Option<u32>,
    /// A checkpoint was found and given.
    pub state_found: bool,
    /// Torn or unknown blocks met.
    pub damaged_blocks: u32,
    /// Sectors met whose header or checkpoint cannot be read.
    pub damaged_sectors: u32,
    /// Reads of at most 64 bytes until the newest sector was found.
    pub reads_to_end: u32,
    /// All reads.
    pub reads: u32,
}

/// What a scan of one sector shows.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Scan {
    /// The checkpoint is whole.
    pub(super) state: bool,
    /// Readable entries.
    pub(super) entries: u32,
    /// Offset from which on all is blank, at a page.
    pub(super) end: u16,
    damaged: u32,
}

#[derive(Clone, Copy, PartialEq, Eq)]
enum Give {
    /// The checkpoint, then the entries; no entry when there is no whole checkpoint.
    State,
    /// The entries.
    Entries,
    /// Nothing.
    Nothing,
}

struct Ignore;

impl Restore for Ignore {
    fn checkpoint(&mut self, _: &[u8]) {}
    fn entry(&mut self, _: &Entry) {}
}

impl<F: NorFlash> Ring<F> {
    /// Gives `visitor` what the ring remembers; gives the scan of the newest sector.
    #[inline(never)]
    pub(super) fn restore(
        &mut self,
        newest: &SectorHeader,
        oldest_sequence: u32,
        visitor: &mut impl Restore,
        recovery: &mut Recovery,
    ) -> Result<Scan, F::Error> {
        let end = self.scan(newest, Give::State, visitor, recovery)?;
        recovery.damaged_blocks = end.damaged;
        recovery.state_found = end.state;
        recovery.next_entry = newest.first_entry.wrapping_add(end.entries);
        if !end.state {
            let first = self.state_before(newest.sequence, oldest_sequence, visitor, recovery)?;
            for sequence in first..newest.sequence {
                match self.header_of(sequence)? {
                    Some(header) => {
                        let scan = self.scan(&header, Give::Entries, visitor, recovery)?;
                        add(&mut recovery.damaged_blocks, scan.damaged);
                    }
                    None => add(&mut recovery.damaged_sectors, 1),
                }
            }
            self.scan(newest, Give::Entries, visitor, recovery)?;
            // A sector that a cut kept from opening is no damage; one with entries is.
            add(&mut recovery.damaged_sectors, u32::from(end.entries > 0));
        }
        Ok(end)
    }

    /// Gives the newest whole checkpoint before `sequence` and that sector's entries; the sequence
    /// number from which on entries are still to be given.
    fn state_before(
        &mut self,
        sequence: u32,
        oldest_sequence: u32,
        visitor: &mut impl Restore,
        recovery: &mut Recovery,
    ) -> Result<u32, F::Error> {
        for earlier in (oldest_sequence..sequence).rev() {
            if let Some(header) = self.header_of(earlier)? {
                let scan = self.scan(&header, Give::State, visitor, recovery)?;
                if scan.state {
                    add(&mut recovery.damaged_blocks, scan.damaged);
                    recovery.state_found = true;
                    return Ok(earlier + 1);
                }
            }
        }
        Ok(sequence)
    }

    /// Tick of the last sample of start `boot` in the sector with this sequence number.
    pub(super) fn last_tick_ms(
        &mut self,
        sequence: u32,
        boot: u16,
    ) -> Result<Option<u64>, F::Error> {
        let Some(header) = self.header_of(sequence)? else { return Ok(None) };
        let mut met = Recovery::default();
        self.scan(&header, Give::Nothing, &mut Ignore, &mut met)?;
        Ok(met.last_tick_ms.filter(|_| met.last_boot == boot))
    }

    /// The header of the sector with this sequence number, when it stands in the ring.
    pub(super) fn header_of(&mut self, sequence: u32) -> Result<Option<SectorHeader>, F::Error> {
        let header = self.header(self.place(sequence))?;
        Ok(header.filter(|header| header.sequence == sequence))
    }

    fn scan(
        &mut self,
        header: &SectorHeader,
        give: Give,
        visitor: &mut impl Restore,
        recovery: &mut Recovery,
    ) -> Result<Scan, F::Error> {
        let mut state = [0; STATE_BYTES_MAX];
        let mut collector = Collector::new(&mut state);
        let mut scan = Scan::default();
        let mut giving = give == Give::Entries;
        recovery.meet_boot(header.boot);
        if giving {
            visitor.sector(header);
        }
        for index in 0..16 {
            let mut page = [0; PAGE_BYTES];
            self.read_page(header.sequence, index, &mut page)?;
            let skip = if index == 0 { HEADER_BYTES } else { 0 };
            if page.get(skip..).is_some_and(|blocks| index == 0 || !is_blank(blocks)) {
                scan.end = (u16::from(index) + 1) * 256;
            }
            for item in PageReader::new(&page, index, header) {
                match item {
                    Item::Damage(_) => add(&mut scan.damaged, 1),
                    Item::State { part, payload } if scan.entries == 0 && !scan.state => {
                        collector.take(part, payload);
                        let Some(bytes) = collector.finished() else { continue };
                        scan.state = true;
                        if give == Give::State {
                            giving = true;
                            visitor.sector(header);
                            visitor.checkpoint(bytes);
                        }
                    }
                    Item::State { .. } => {}
                    Item::Entry(entry) => {
                        add(&mut scan.entries, 1);
                        recovery.remember(&entry);
                        if giving {
                            visitor.entry(&entry);
                        }
                    }
                }
            }
        }
        Ok(scan)
    }
}

impl Recovery {
    fn meet_boot(&mut self, boot: u16) {
        if self.last_boot != boot {
            self.last_boot = boot;
            self.last_tick_ms = None;
        }
    }

    fn remember(&mut self, entry: &Entry) {
        match entry {
            Entry::StartUp { boot, .. } => self.meet_boot(*boot),
            Entry::Sample(sample) => self.last_tick_ms = Some(sample.tick_ms),
            _ => {}
        }
    }
}

fn add(count: &mut u32, more: u32) {
    *count = count.saturating_add(more);
}
