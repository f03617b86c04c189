//! What must hold after the power came back.

use std::collections::BTreeMap;

use strake_core::journal::Entry;
use strake_core::plan_slot::SlotHeader;
use strake_core::signal::Channel;
use strake_core::wire::Head;

use crate::plugin::Store;

use super::flash::Content;
use super::journal::{Found, Replay, entries};
use super::plans::LOW_MM;
use super::scenario::Plans;

/// What the device wrote, and with which of its stores each entry became durable.
#[derive(Debug)]
pub(super) struct Model {
    entries: Vec<(Entry, usize)>,
}

/// What is seen of a device behind its restart.
#[derive(Debug)]
pub(super) struct Seen {
    /// What it says over the link.
    pub(super) boot: u16,
    pub(super) plan: u64,
    pub(super) head: Head,
    /// The alarm contact conducts.
    pub(super) contact: bool,
    /// What stands on its flash.
    pub(super) journal: Vec<u8>,
}

impl Model {
    /// From the journal at the end of a run and the run's stores.
    pub(super) fn new(journal: &[u8], stores: &[Store], plans: &Plans) -> Result<Self, String> {
        let last: BTreeMap<u32, usize> =
            stores.iter().zip(1..).map(|(store, number)| (store.offset, number)).collect();
        let found = entries(journal)?;
        let mut replay = Replay::default();
        found.iter().try_for_each(|found| replay.take(&found.entry, plans))?;
        let durable = |found: &Found| last.get(&found.commit).copied().unwrap_or(0);
        Ok(Self { entries: found.iter().map(|found| (found.entry, durable(found))).collect() })
    }

    /// Entries that are durable once `stores` stores are done.
    pub(super) fn durable(&self, stores: usize) -> usize {
        self.entries.iter().take_while(|(_, durable)| *durable <= stores).count()
    }

    /// How many entries of a kind there are.
    pub(super) fn count(&self, of: fn(&Entry) -> bool) -> usize {
        self.entries.iter().filter(|(entry, _)| of(entry)).count()
    }

    /// Judges a restart on `cut`, the flash after `stores` stores. `Err` says what is wrong.
    pub(super) fn judge(
        &self,
        stores: usize,
        cut: &Content,
        seen: &Seen,
        plans: &Plans,
    ) -> Result<(), String> {
        let found = entries(&seen.journal)?;
        let durable = &self.entries[..self.durable(stores)];
        let mut replay = Replay::default();
        for (number, (entry, _)) in durable.iter().enumerate() {
            match found.get(number) {
                Some(found) if found.entry == *entry => replay.take(entry, plans)?,
                found => return Err(format!("lost: entry {number}, {entry:?}; {found:?} there")),
            }
        }
        let before = replay.boot;
        let mut states = Vec::new();
        for (number, Found { entry, .. }) in found.iter().enumerate().skip(durable.len()) {
            let first = number == durable.len();
            if first != matches!(entry, Entry::StartUp { .. }) || !may_follow(entry) {
                return Err(format!("invented: entry {number}, {entry:?}"));
            }
            replay.take(entry, plans).map_err(|error| format!("invented: {error}"))?;
            states.push((number + 1, replay.state.hash, replay.contact()));
        }
        if replay.boot != before + 1 || seen.boot != replay.boot {
            return Err(format!("lost: start {} told, {} written", seen.boot, replay.boot));
        }
        let due = newest_plan(cut);
        if replay.plan != due || seen.plan != due.unwrap_or(0) {
            return Err(format!(
                "plan {:x?} written, {:x} told, {due:x?} due",
                replay.plan, seen.plan
            ));
        }
        // A sample that waits is in the device's state and not yet in its journal.
        let next = seen.head.next_entry as usize;
        let mut later = states.iter().filter(|(behind, ..)| *behind >= next);
        if !later.clone().take(3).any(|(_, hash, _)| *hash == seen.head.running_hash) {
            return Err(format!(
                "invented: the device's state follows from no journal, {:?}",
                seen.head
            ));
        }
        if !later.any(|(.., contact)| *contact == seen.contact) {
            return Err(format!("lost or invented alarm: the contact conducts: {}", seen.contact));
        }
        Ok(())
    }
}

/// What a start leads to with the level low: the newest plan, good samples, moves.
fn may_follow(entry: &Entry) -> bool {
    match entry {
        Entry::Sample(sample) => sample.level == Channel::good(i32::from(LOW_MM) * 16),
        Entry::StartUp { .. } | Entry::PlanChange { .. } | Entry::Transition(_) => true,
        _ => false,
    }
}

/// The plan that has to be in force: that of the slot filled last.
fn newest_plan(content: &Content) -> Option<u64> {
    let headers =
        content.plans.chunks(4096).filter_map(|slot| SlotHeader::decode(slot.first_chunk()?));
    headers.max_by_key(|header| header.sequence).map(|header| header.fingerprint)
}
