//! The comparing engine: inputs in, results compared.

use super::batch::Batch;
use super::summary::Summary;
use std::collections::VecDeque;
use std::fmt;
use strake_core::evaluate::{Moved, State};
use strake_core::journal::entry::Transition;
use strake_core::journal::{Entry, SectorHeader};
use strake_core::plan::Plan;

/// The first place where replay and device differ.
#[derive(Clone, Debug, PartialEq)]
pub struct Difference {
    /// Sequence of the sector.
    pub sequence: u32,
    /// Number of the entry in the journal.
    pub entry: u32,
    /// Tick of the entry, ms of its boot.
    pub tick_ms: u64,
    /// What differs.
    pub what: String,
    /// What the device has.
    pub device: String,
    /// What the replay has.
    pub replay: String,
}

impl fmt::Display for Difference {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let Self { sequence, entry, tick_ms, what, device, replay } = self;
        write!(
            f,
            "entry {entry} in sector {sequence} (tick {tick_ms} ms): {what}: device {device}, \
             replay {replay}"
        )
    }
}

/// How the comparison stands.
#[derive(Clone, Debug, Default)]
pub struct Verdict {
    /// Hashes of the device that were compared.
    pub hashes_compared: u64,
    /// Moves of alarm machines that were compared.
    pub moves_compared: u64,
    /// The first place that differs.
    pub first_difference: Option<Difference>,
    /// Samples whose plan or state is missing: decoded, not compared.
    pub not_compared: u64,
    /// Checkpoints with samples that the device could not write, and had no time to state as lost.
    pub holes: u64,
}

impl Verdict {
    /// All hashes and moves equal the device's, and at least one hash was compared.
    #[must_use]
    pub const fn identical(&self) -> bool {
        self.first_difference.is_none() && self.hashes_compared > 0
    }
}

/// Where the journal stands.
#[derive(Clone, Copy, Debug, Default)]
struct Place {
    sequence: u32,
    entry: u32,
    tick_ms: u64,
}

/// Applies a journal in order.
#[derive(Debug, Default)]
pub struct Engine {
    plan: Option<Plan>,
    state: State,
    batch: Batch,
    /// Moves that the replay made and the journal has not told yet.
    untold: VecDeque<Transition>,
    /// The state follows from the entries so far; false after a hole.
    connected: bool,
    /// The state is that of a checkpoint that was not compared: the moves of the sample which
    /// opened the sector are in it, and stand behind it.
    ahead: bool,
    place: Place,
    /// The comparison.
    pub verdict: Verdict,
    /// What happened.
    pub summary: Summary,
}

impl Engine {
    /// A sector begins. `state` is its checkpoint; `connected` says that it follows the one before
    /// without a hole; `lost` how many samples the device states as lost before it, `None` when it
    /// had no time to state any. A checkpoint that is missing or of another version cannot be
    /// compared.
    pub fn sector(
        &mut self,
        header: &SectorHeader,
        state: Option<&State>,
        connected: bool,
        lost: Option<u32>,
    ) {
        self.settle();
        let ahead = state.map_or(0, |state| state.samples.wrapping_sub(self.state.samples));
        let explained = ahead > 0 && ahead < u32::MAX / 2 && lost.is_none_or(|lost| lost == ahead);
        if connected && self.connected && explained {
            self.verdict.holes += u64::from(lost.is_none());
            self.connected = false;
        }
        self.place =
            Place { sequence: header.sequence, entry: header.first_entry, tick_ms: header.tick_ms };
        self.summary.clock.sector(header);
        match state {
            Some(state) if connected && self.connected => {
                self.compare("checkpoint", state.hash, self.state.hash);
                if self.state != *state {
                    self.differ("state in the checkpoint", "its own", "another");
                    self.state = state.clone();
                }
            }
            Some(state) => {
                self.untold.clear();
                self.state = state.clone();
                self.connected = true;
                self.ahead = true;
            }
            None if connected => {}
            None => self.connected = false,
        }
    }

    /// Entries are missing here: nothing is compared up to the next checkpoint.
    pub fn hole(&mut self) {
        self.settle();
        self.untold.clear();
        self.connected = false;
    }

    /// Another plan is in force from here on; `None` when it is not at hand.
    pub fn use_plan(&mut self, plan: Option<Plan>, names: &[String]) {
        self.settle();
        if let Some(plan) = &plan {
            self.summary.plan(plan, names);
        }
        self.plan = plan;
    }

    /// The plan in the file: its fingerprint as the device states it and as its bytes have it.
    pub fn plan_taken(&mut self, device: u64, replay: u64) {
        if device != replay {
            let (device, replay) = (format!("{device:016x}"), format!("{replay:016x}"));
            self.differ("fingerprint of a plan", &device, &replay);
        }
    }

    /// The next entry.
    pub fn entry(&mut self, entry: &Entry) {
        self.ahead &= matches!(entry, Entry::Transition(_) | Entry::Gap { .. });
        if let Entry::Sample(sample) = entry {
            self.batch.push(*sample);
            self.place.entry = self.place.entry.wrapping_add(1);
            self.place.tick_ms = sample.tick_ms;
            if self.batch.is_full() {
                self.settle();
            }
            return;
        }
        self.settle();
        self.place.tick_ms = entry.tick_ms();
        self.summary.event(entry);
        let mut moves = Vec::new();
        match entry {
            Entry::Transition(transition) => self.told(transition),
            Entry::Fault { tick_ms, cause, .. } => {
                if let Some(plan) = &self.plan {
                    self.state.report(plan, *cause, *tick_ms, |moved| moves.push(moved));
                }
            }
            Entry::StartUp { tick_ms, .. } => {
                // A loss of power may have come between a sample and the moves it led to.
                self.untold.clear();
                self.state.restart(*tick_ms);
            }
            Entry::PlanChange { tick_ms, .. } => self.state.change_plan(*tick_ms),
            Entry::Acknowledge { tick_ms, .. } => {
                self.state.acknowledge(*tick_ms, |moved| moves.push(moved));
            }
            Entry::Sample(_) | Entry::ClockFix { .. } | Entry::Gap { .. } => {}
        }
        expect(&mut self.untold, &moves, entry.tick_ms(), self.state.hash);
        self.place.entry = self.place.entry.wrapping_add(1);
    }

    /// The journal ends; `head_hash` is the device's running hash at the collection.
    pub fn finish(&mut self, head_hash: Option<u64>) {
        self.settle();
        if let Some(hash) = head_hash.filter(|_| self.connected) {
            self.compare("running hash at the collection", hash, self.state.hash);
            self.all_told();
        }
        self.summary.finish();
    }

    /// Evaluates what waits.
    fn settle(&mut self) {
        if self.batch.is_empty() {
            return;
        }
        let Some(plan) = self.plan.as_ref().filter(|_| self.connected) else {
            self.verdict.not_compared += self.batch.discard() as u64;
            self.connected = false;
            return;
        };
        let (untold, summary) = (&mut self.untold, &mut self.summary);
        let mut missing = None;
        self.batch.run(plan, &mut self.state, |taken| {
            // Moves stand right behind their sample: what an earlier one led to is told by now.
            if let Some(move_untold) = untold.pop_front() {
                missing.get_or_insert(move_untold);
                untold.clear();
            }
            expect(untold, taken.moves, taken.sample.tick_ms, taken.hash);
            summary.sample(&taken);
        });
        if let Some(transition) = missing {
            self.differ("a move of an alarm machine", "none", &describe(&transition));
        }
    }

    /// The device tells a move.
    fn told(&mut self, device: &Transition) {
        if !self.connected || self.plan.is_none() {
            return;
        }
        self.verdict.moves_compared += 1;
        let state = self.state.machine(device.machine).state;
        match self.untold.pop_front() {
            None if self.ahead && state == device.to && self.state.hash == device.hash => {}
            None => self.differ("a move of an alarm machine", &describe(device), "none"),
            Some(replay) => {
                if replay != *device {
                    let what = if replay.hash == device.hash {
                        "a move of an alarm machine"
                    } else {
                        "running hash at an alarm"
                    };
                    self.differ(what, &describe(device), &describe(&replay));
                }
                self.verdict.hashes_compared += 1;
            }
        }
    }

    fn all_told(&mut self) {
        if let Some(transition) = self.untold.pop_front() {
            self.differ("a move of an alarm machine", "none", &describe(&transition));
        }
    }

    fn compare(&mut self, what: &str, device: u64, replay: u64) {
        self.verdict.hashes_compared += 1;
        if device != replay {
            self.differ(what, &format!("{device:016x}"), &format!("{replay:016x}"));
        }
    }

    fn differ(&mut self, what: &str, device: &str, replay: &str) {
        let Place { sequence, entry, tick_ms } = self.place;
        self.verdict.first_difference.get_or_insert_with(|| Difference {
            sequence,
            entry,
            tick_ms,
            what: what.into(),
            device: device.into(),
            replay: replay.into(),
        });
    }
}

fn expect(untold: &mut VecDeque<Transition>, moves: &[Moved], tick_ms: u64, hash: u64) {
    untold.extend(moves.iter().map(|moved| moved.entry(tick_ms, hash)));
}

fn describe(transition: &Transition) -> String {
    let Transition { machine, from, to, cause, utilisation, hash, .. } = transition;
    let number = machine.number();
    format!(
        "machine {number} {from:?} to {to:?} ({cause:?}, utilisation {utilisation}, \
         hash {hash:016x})"
    )
}
