//! The journal as the flash holds it, read by the host, and what follows from it.

use std::collections::VecDeque;

use strake_core::evaluate::{Moved, Output, State, step};
use strake_core::journal::block::{Blocks, Form, Place};
use strake_core::journal::entry::Transition;
use strake_core::journal::header::HEADER_BYTES;
use strake_core::journal::{Entry, Item, PAGE_BYTES, SECTOR_BYTES, SectorHeader, SectorReader};
use strake_core::plan::Plan;

use super::scenario::Plans;

/// An entry and the offset of its block's last word, whose program makes it durable.
#[derive(Clone, Copy, Debug)]
pub(super) struct Found {
    pub(super) entry: Entry,
    pub(super) commit: u32,
}

/// Every readable entry of the journal, oldest first.
pub(super) fn entries(journal: &[u8]) -> Result<Vec<Found>, String> {
    let mut sectors: Vec<(SectorHeader, usize)> = (0..journal.len())
        .step_by(SECTOR_BYTES)
        .filter_map(|at| Some((SectorHeader::decode(&journal[at..]).ok()?, at)))
        .collect();
    sectors.sort_by_key(|(header, _)| header.sequence);
    let mut found = Vec::new();
    for (number, (header, at)) in (0..).zip(&sectors) {
        if header.sequence != number || header.first_entry as usize != found.len() {
            return Err(format!("sector {number} of the journal is {header:?}"));
        }
        let sector = &journal[*at..][..SECTOR_BYTES];
        let reader = SectorReader::new(sector).map_err(|error| format!("{error:?}"))?;
        let read = reader.filter_map(|item| match item {
            Item::Entry(entry) => Some(entry),
            Item::State { .. } | Item::Damage(_) => None,
        });
        let commits = commits(sector, header);
        let read: Vec<Entry> = read.collect();
        if read.len() != commits.len() {
            return Err(format!(
                "sector {number}: {} entries in blocks, {} read",
                commits.len(),
                read.len()
            ));
        }
        let offset = u32::try_from(*at).unwrap_or(u32::MAX);
        found.extend(
            read.into_iter()
                .zip(commits)
                .map(|(entry, commit)| Found { entry, commit: offset + commit }),
        );
    }
    Ok(found)
}

/// Per entry of a sector, where its block's last word stands.
fn commits(sector: &[u8], header: &SectorHeader) -> Vec<u32> {
    let mut commits = Vec::new();
    for (page, offset) in sector.chunks(PAGE_BYTES).zip((0..).step_by(PAGE_BYTES)) {
        let skip = if offset == 0 { HEADER_BYTES } else { 0 };
        let place = Place { sequence: header.sequence, offset, word: header.word };
        for block in Blocks::new(page, skip, place).flatten() {
            if block.form == Form::State {
                continue;
            }
            let words = u32::from(sector[usize::from(block.offset)]);
            let last = u32::from(block.offset) + 4 * words - 4;
            commits.extend((0..block.count).map(|_| last));
        }
    }
    commits
}

/// What a device is that has these entries behind it.
#[derive(Clone, Debug, Default)]
pub(super) struct Replay {
    pub(super) state: State,
    pub(super) plan: Option<u64>,
    /// Number of the last start.
    pub(super) boot: u16,
    untold: VecDeque<Transition>,
}

impl Replay {
    /// The alarm contact conducts.
    pub(super) fn contact(&self) -> bool {
        Output::of(&self.state).contact_closed
    }

    /// Takes the next entry; fails where it does not follow from those before.
    pub(super) fn take(&mut self, entry: &Entry, plans: &Plans) -> Result<(), String> {
        let mut moves: Vec<Moved> = Vec::new();
        let plan = self.plan.and_then(|plan| plan_of(plans, plan));
        match entry {
            Entry::Sample(sample) => {
                let plan = plan.ok_or("a sample without a plan")?;
                step(plan, &mut self.state, sample, |moved| moves.push(moved));
            }
            Entry::Transition(told) => {
                let due = self.untold.pop_front();
                if due != Some(*told) {
                    return Err(format!("{told:?} instead of {due:?}"));
                }
                return Ok(());
            }
            Entry::StartUp { tick_ms, boot, .. } => {
                // A loss of power may have come between a sample and the moves it led to.
                self.untold.clear();
                if *boot != self.boot + 1 {
                    return Err(format!("start {boot} behind start {}", self.boot));
                }
                self.boot = *boot;
                self.state.restart(*tick_ms);
            }
            Entry::PlanChange { tick_ms, fingerprint, .. } => {
                plan_of(plans, *fingerprint).ok_or("a plan of no one")?;
                self.plan = Some(*fingerprint);
                self.state.change_plan(*tick_ms);
            }
            Entry::Acknowledge { tick_ms, .. } => {
                self.state.acknowledge(*tick_ms, |moved| moves.push(moved));
            }
            Entry::ClockFix { .. } => {}
            Entry::Fault { .. } | Entry::Gap { .. } => {
                return Err(format!("nothing led to {entry:?}"));
            }
        }
        let (tick_ms, hash) = (entry.tick_ms(), self.state.hash);
        self.untold.extend(moves.iter().map(|moved| moved.entry(tick_ms, hash)));
        Ok(())
    }
}

fn plan_of(plans: &Plans, fingerprint: u64) -> Option<&Plan> {
    plans.iter().find(|sealed| sealed.fingerprint == fingerprint).map(|sealed| &*sealed.plan)
}
