//! From a journal file to the engine: sector by sector, plan by plan.

use super::engine::Engine;
use crate::journal_file::{JournalFile, JournalFileError};
use crate::verify::{Damage, Ledger, Place, What, misplaced, of_block, stated_as_lost};
use std::io::{Read, Seek};
use strake_core::evaluate::State;
use strake_core::journal::{Entry, Item, STATE_BYTES_MAX, SectorHeader, SectorReader};
use strake_core::plan::{Plan, PlanHeader, codec};
use strake_core::plan_slot;

/// Everything a replay found.
#[derive(Debug)]
pub struct Replay {
    /// Comparison and summary.
    pub engine: Engine,
    /// Entries decoded.
    pub records: u64,
    /// Places that could not be read, in the file or in a sector.
    pub damage: Vec<Damage>,
    /// Holes: sectors missing between those in the file, and gaps that the device states.
    pub gaps: u64,
    /// Fingerprints of plans that occur and are not in the file.
    pub missing_plans: Vec<u64>,
    /// A plan in force stands on an assumed capacity.
    pub provisional: bool,
}

/// Replays a journal file, one sector in memory at a time.
///
/// # Errors
/// The system's reason when the file cannot be read. Damaged places are no error.
pub fn replay<R: Read + Seek>(file: &mut JournalFile<R>) -> Result<Replay, JournalFileError> {
    let mut walk = Walk {
        replay: Replay {
            engine: Engine::default(),
            records: 0,
            damage: Vec::new(),
            gaps: 0,
            missing_plans: Vec::new(),
            provisional: false,
        },
        ledger: Ledger::of_file(file.damage()),
        in_force: None,
    };
    let newest = file.sectors().next_back().map(|(sequence, _)| sequence);
    let mut last = None;
    while let Some(sector) = file.sector_after(last)? {
        let connected = walk.ledger.arrive(sector.sequence);
        if last.is_some() && !connected {
            walk.replay.gaps += 1;
        }
        last = Some(sector.sequence);
        walk.sector(file, &sector.bytes, sector.sequence, connected)?;
        let is_last = newest == last;
        if walk.ledger.end_of_sector(sector.sequence, sector.bytes.len(), is_last) {
            walk.replay.engine.hole();
        }
    }
    let head = file.head().copied();
    // The head's hash is that of the journal's end, which the file may not reach.
    let reaches = walk.ledger.finish(head.as_ref());
    let end = head.filter(|_| reaches);
    walk.replay.damage = walk.ledger.damage;
    walk.replay.engine.finish(end.map(|head| head.running_hash));
    walk.replay.gaps += walk.replay.engine.verdict.holes;
    Ok(walk.replay)
}

struct Walk {
    replay: Replay,
    ledger: Ledger,
    /// Fingerprint of the plan that the engine has.
    in_force: Option<u64>,
}

impl Walk {
    fn sector<R: Read + Seek>(
        &mut self,
        file: &mut JournalFile<R>,
        bytes: &[u8],
        sequence: u32,
        connected: bool,
    ) -> Result<(), JournalFileError> {
        let reader = match SectorReader::new(bytes) {
            Ok(reader) if reader.header().sequence == sequence => reader,
            other => {
                let found = other.map(|reader| reader.header().sequence);
                let ring = file.identity().map(|identity| identity.sectors);
                let what = misplaced(found, sequence, ring);
                self.ledger.place(Place::Sector { sequence }, what);
                self.replay.engine.hole();
                return Ok(());
            }
        };
        let mut room = [0; STATE_BYTES_MAX];
        let state = reader.checkpoint(&mut room).and_then(State::decode);
        let header = reader.header().clone();
        let lost = stated_as_lost(reader.clone());
        self.ledger.header(&header, state.as_ref(), lost);
        self.replay.engine.sector(&header, state.as_ref(), connected, lost);
        self.use_plan(file, header.plan_fingerprint)?;
        let mut damaged = false;
        let mut items = reader;
        while let Some(item) = items.next() {
            match item {
                Item::Entry(entry) => {
                    self.replay.records += 1;
                    self.ledger.entry(&entry);
                    if let Entry::PlanChange { fingerprint, .. } = entry {
                        self.use_plan(file, fingerprint)?;
                    }
                    if matches!(entry, Entry::Gap { .. }) {
                        self.replay.gaps += 1;
                    }
                    self.replay.engine.entry(&entry);
                }
                Item::State { .. } => {}
                Item::Damage(damage) => {
                    let place = Place::Block { sequence, offset: damage.offset };
                    let what = of_block(bytes, &header, damage, items.clone());
                    self.ledger.place(place, what);
                    let missing =
                        what == What::Decayed || !damaged && entries_missing(file, bytes, &header)?;
                    if missing {
                        self.replay.engine.hole();
                    }
                    damaged = true;
                }
            }
        }
        Ok(())
    }

    fn use_plan<R: Read + Seek>(
        &mut self,
        file: &mut JournalFile<R>,
        fingerprint: u64,
    ) -> Result<(), JournalFileError> {
        if self.in_force == Some(fingerprint) || fingerprint == 0 {
            return Ok(());
        }
        self.in_force = Some(fingerprint);
        let stored = file.plan(fingerprint)?;
        if let Some(stored) = &stored {
            // A plan that is not the one the device had would judge otherwise, or the same by luck.
            let computed = plan_slot::fingerprint(&stored.bytes);
            self.replay.engine.plan_taken(fingerprint, computed);
        }
        let loaded = stored.and_then(|stored| load(&stored.bytes));
        if let Some((header, plan, names)) = loaded {
            self.replay.provisional |= header.provisional;
            self.replay.engine.use_plan(Some(plan), &names);
        } else {
            self.replay.engine.use_plan(None, &[]);
            if !self.replay.missing_plans.contains(&fingerprint) {
                self.replay.missing_plans.push(fingerprint);
            }
        }
        Ok(())
    }
}

/// Whether entries of a damaged sector are missing, by the next number that is stated. A write that
/// a loss of power tore takes none along.
fn entries_missing<R: Read + Seek>(
    file: &mut JournalFile<R>,
    bytes: &[u8],
    header: &SectorHeader,
) -> Result<bool, JournalFileError> {
    let Ok(reader) = SectorReader::new(bytes) else { return Ok(true) };
    let is_entry = |item: &Item<'_>| matches!(item, Item::Entry(_));
    let entries = u32::try_from(reader.filter(is_entry).count()).unwrap_or(u32::MAX);
    let stated = match file.sector_after(Some(header.sequence))? {
        Some(next) => SectorReader::new(&next.bytes)
            .ok()
            .map(|reader| reader.header().clone())
            .filter(|next| next.sequence == header.sequence.wrapping_add(1))
            .map(|next| next.first_entry),
        None => file.head().map(|head| head.next_entry),
    };
    Ok(stated != Some(header.first_entry.wrapping_add(entries)))
}

/// A plan with the names of its parts.
fn load(bytes: &[u8]) -> Option<(PlanHeader, Plan, Vec<String>)> {
    let (header, plan) = codec::decode(bytes).ok()?;
    let mut names = Vec::new();
    codec::names(bytes, |_, name| names.push(name.to_owned())).ok()?;
    Some((header, plan, names))
}
