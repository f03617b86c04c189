//! One pass through the file, one sector in memory at a time.

use super::contradiction::Contradiction;
use super::damage::{Place, What};
use super::ledger::Ledger;
use super::machines::Machines;
use super::report::Report;
use super::torn::of_block;
use crate::journal_file::{JournalFile, JournalFileError, StoredSector};
use std::collections::BTreeSet;
use std::io::{Read, Seek};
use strake_core::evaluate::State;
use strake_core::journal::{Entry, HeaderError, Item, STATE_BYTES_MAX, SectorHeader, SectorReader};
use strake_core::plan::codec;
use strake_core::plan_slot;

/// Verifies a journal file.
///
/// # Errors
/// The system's reason when it cannot be read. Damage is no error.
pub fn verify<R: Read + Seek>(file: &mut JournalFile<R>) -> Result<Report, JournalFileError> {
    let mut walk = Walk {
        report: Report {
            identity: file.identity().cloned(),
            head: file.head().copied(),
            ..Report::default()
        },
        ledger: Ledger::of_file(file.damage()),
        machines: Machines::default(),
        used_plans: BTreeSet::new(),
        plan: None,
        boot: None,
    };
    let plans = walk.plans(file)?;
    let newest = file.sectors().next_back().map(|(sequence, _)| sequence);
    while let Some(sector) = file.sector_after(walk.report.newest)? {
        walk.sector(&sector, newest == Some(sector.sequence));
    }
    walk.finish();
    let Walk { mut report, ledger, used_plans, .. } = walk;
    report.damage = ledger.damage;
    report.contradictions.extend(ledger.contradictions);
    report.missing_plans =
        used_plans.difference(&plans).copied().filter(|&plan| plan != 0).collect();
    Ok(report)
}

/// The samples that the device states as lost before a sector's checkpoint: those of a gap that
/// stands first, else none. `None` when a start stands first: it had no time to state any.
pub(crate) fn stated_as_lost(sector: SectorReader<'_>) -> Option<u32> {
    let first = sector.into_iter().find_map(|item| match item {
        Item::Entry(entry) => Some(entry),
        Item::State { .. } | Item::Damage(_) => None,
    });
    match first {
        None | Some(Entry::StartUp { .. }) => None,
        Some(Entry::Gap { missing, .. }) => Some(missing),
        Some(_) => Some(0),
    }
}

/// What stands where this sector should stand, when it is not this sector.
pub(crate) fn misplaced(found: Result<u32, HeaderError>, sequence: u32, ring: Option<u32>) -> What {
    match found {
        Ok(found)
            if found < sequence
                && ring.is_none_or(|ring| ring > 0 && (sequence - found).is_multiple_of(ring)) =>
        {
            What::EarlierLap { found }
        }
        _ => What::Header,
    }
}

struct Walk {
    report: Report,
    ledger: Ledger,
    machines: Machines,
    used_plans: BTreeSet<u64>,
    /// Fingerprint of the plan in force by the entries so far; `None` while unknown.
    plan: Option<u64>,
    /// Number of the last start; `None` while unknown.
    boot: Option<u16>,
}

impl Walk {
    /// Checks the plans; gives their fingerprints.
    fn plans<R: Read + Seek>(
        &mut self,
        file: &mut JournalFile<R>,
    ) -> Result<BTreeSet<u64>, JournalFileError> {
        let prints: BTreeSet<u64> = file.plans().map(|(_, fingerprint)| fingerprint).collect();
        for &fingerprint in &prints {
            let Some(stored) = file.plan(fingerprint)? else { continue };
            let computed = plan_slot::fingerprint(&stored.bytes);
            if computed != fingerprint {
                let stated = fingerprint;
                self.contradict(Contradiction::PlanFingerprint { stated, computed });
            } else if !codec::decode(&stored.bytes)
                .is_ok_and(|(header, _)| header.serial == stored.serial)
            {
                self.contradict(Contradiction::PlanContent { fingerprint });
            }
        }
        self.report.plans = u32::try_from(prints.len()).unwrap_or(u32::MAX);
        Ok(prints)
    }

    fn sector(&mut self, sector: &StoredSector, is_last: bool) {
        let StoredSector { sequence, bytes } = sector;
        let sequence = *sequence;
        self.report.oldest = self.report.oldest.or(Some(sequence));
        self.report.newest = Some(sequence);
        self.report.sectors += 1;
        self.report.bytes += bytes.len() as u64;
        if !self.ledger.arrive(sequence) {
            self.forget();
        }
        let reader = SectorReader::new(bytes);
        let found = reader.as_ref().map(|reader| reader.header().sequence).map_err(|&error| error);
        match reader {
            Ok(reader) if reader.header().sequence == sequence => self.entries(bytes, reader),
            _ => {
                let ring = self.report.identity.as_ref().map(|identity| identity.sectors);
                let what = misplaced(found, sequence, ring);
                if let (What::Header, Ok(found)) = (what, found) {
                    let stated = sequence;
                    self.contradict(Contradiction::SectorNumber { stated, found });
                }
                self.damage(Place::Sector { sequence }, what);
            }
        }
        if self.ledger.end_of_sector(sequence, bytes.len(), is_last) {
            self.forget();
        }
    }

    fn entries(&mut self, bytes: &[u8], reader: SectorReader<'_>) {
        let header = reader.header().clone();
        let sequence = header.sequence;
        let mut room = [0; STATE_BYTES_MAX];
        let state = reader.checkpoint(&mut room).and_then(State::decode);
        if self.ledger.is_broken() {
            self.forget();
        }
        if !self.ledger.header(&header, state.as_ref(), stated_as_lost(reader.clone())) {
            self.machines.forget();
        }
        self.header(&header);
        self.machines.checkpoint(sequence, state.as_ref(), &mut self.report.contradictions);
        let mut items = reader;
        while let Some(item) = items.next() {
            match item {
                Item::Entry(entry) => self.entry(sequence, &entry),
                Item::State { .. } => {}
                Item::Damage(damage) => {
                    let place = Place::Block { sequence, offset: damage.offset };
                    self.damage(place, of_block(bytes, &header, damage, items.clone()));
                }
            }
        }
    }

    fn header(&mut self, header: &SectorHeader) {
        let sequence = header.sequence;
        let word = self.report.identity.as_ref().map(|identity| usize::from(identity.word_bytes));
        if word.is_some_and(|word| word != header.word.bytes()) {
            self.contradict(Contradiction::Word { sequence });
        }
        let stated = header.plan_fingerprint;
        self.used_plans.insert(stated);
        // A device that could not read its plan any more has none.
        if let Some(before) = self.plan.filter(|&before| before != stated && stated != 0) {
            self.contradict(Contradiction::PlanInForce { sequence, before, stated });
        }
        self.plan = Some(stated);
        self.boot = self.boot.or(Some(header.boot));
    }

    fn entry(&mut self, sequence: u32, entry: &Entry) {
        self.report.entries += 1;
        self.report.samples += u64::from(matches!(entry, Entry::Sample(_)));
        self.ledger.entry(entry);
        self.machines.entry(sequence, entry, &mut self.report.contradictions);
        match *entry {
            Entry::PlanChange { fingerprint, .. } => {
                self.used_plans.insert(fingerprint);
                self.plan = Some(fingerprint);
            }
            Entry::StartUp { boot, .. } => {
                // A sector may be opened by its own start's entry.
                let before = self.boot.filter(|&before| before != u16::MAX);
                if before.is_some_and(|before| boot < before) {
                    self.contradict(Contradiction::Boot { sequence, boot });
                }
                self.boot = Some(boot);
            }
            _ => {}
        }
    }

    fn finish(&mut self) {
        if !self.ledger.is_broken() {
            let hash = self.report.head.map(|head| head.running_hash);
            self.machines.finish(hash, &mut self.report.contradictions);
        }
        self.report.reaches_head = self.ledger.finish(self.report.head.as_ref());
        self.report.missing_sectors = self.ledger.absent;
    }

    fn damage(&mut self, place: Place, what: What) {
        self.ledger.place(place, what);
        self.forget();
    }

    /// Entries are missing, so what follows from them is not known.
    fn forget(&mut self) {
        self.machines.forget();
        self.plan = None;
        self.boot = None;
    }

    fn contradict(&mut self, contradiction: Contradiction) {
        self.report.contradictions.push(contradiction);
    }
}
