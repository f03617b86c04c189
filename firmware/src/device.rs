//! The device: sensors, plan, alarm state, journal and contact; everything but the line.
//!
//! Order within a cycle: sense, append the sample, evaluate, append what moved, show. Inputs are
//! appended before they are applied and results after, so that the journal's entries, applied in
//! order, give the device's state again.

mod cycle;
mod faults;
mod now;
mod plans;
mod press;
mod sense;
mod served;
mod start;

use crate::board::{Board, Clock};
use crate::journal::{Journal, Waiting};
use crate::plan_store::PlanStore;
use core::fmt;
use core::ops::Range;
use cycle::Moves;
use embedded_hal::digital::OutputPin;
use faults::FaultLog;
use now::Now;
use strake_core::evaluate::{Output, Pace, Rhythm, State};
use strake_core::journal::Entry;
use strake_core::plan::Plan;
use strake_core::signal::Resolved;
use strake_core::wire::Text;

/// Where waiting samples stand in retained memory.
const WAITING_AREA: Range<usize> = 0..1024;
/// Where the number of starts without an entry stands behind them, with its complement.
const STARTS_AT: usize = WAITING_AREA.end;
/// Bytes of that number.
const STARTS_BYTES: usize = 4;
/// Bytes of retained memory that the device makes use of. A board that offers fewer loses waiting
/// samples in a warm restart, or counts no starts.
pub const RETAINED_BYTES: usize = STARTS_AT + STARTS_BYTES;

/// The plan in force.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) struct InForce {
    pub(crate) fingerprint: u64,
    pub(crate) serial: u64,
}

/// The journal with the waiting samples in their room.
type Held<B> = Journal<<B as Board>::Journal, <B as Board>::Room<Waiting>>;

/// What the device remembers and computes with: the big part of it.
#[derive(Debug)]
pub struct Memory {
    /// The plan; one that is not in force means nothing.
    plan: Plan,
    state: State,
    /// The moves of one sample or press, until they stand in the journal.
    moves: Moves,
}

impl Memory {
    /// No plan, nothing read. Every bit is zero.
    #[must_use]
    pub const fn new() -> Self {
        Self { plan: Plan::zeroed(), state: State::new(), moves: Moves::new() }
    }
}

impl Default for Memory {
    fn default() -> Self {
        Self::new()
    }
}

/// The device.
pub struct Device<B: Board> {
    pub(crate) clock: B::Clock,
    level: B::Level,
    temperature: B::Temperature,
    contact: B::Contact,
    button: B::Button,
    retained: B::Retained,
    /// Its own name, unique among an owner's devices.
    name: Text,
    /// `None` when the flash cannot even be read: the device alarms on, and says so.
    journal: Option<Held<B>>,
    plans: PlanStore<B::Plans>,
    in_force: Option<InForce>,
    memory: B::Room<Memory>,
    boot: u16,
    /// Tick and UTC seconds of the last clock fix.
    clock_fix: Option<(u64, u64)>,
    /// The reading of the last cycle.
    reading: Option<Resolved>,
    battery_mv: u16,
    samples: u32,
    next_cycle_ms: u64,
    /// Tick of the last completed cycle, or of the moment at which the plan took force, ms.
    completed_ms: u64,
    /// The last beat of the interval that is over, ms.
    beat_ms: u64,
    /// How far it may look away.
    pace: Pace,
    /// Tick at which the oldest waiting sample must be written.
    flush_at_ms: Option<u64>,
    faults: FaultLog,
    /// The start-up entry, until something is written behind it.
    start_up: Option<Entry>,
    /// An append failed, and its fault entry is not written yet.
    journal_failing: bool,
    button_down: bool,
    output: Output,
}

impl<B: Board> Device<B> {
    /// Tick of the next cycle, ms; never comes without a plan.
    #[must_use]
    pub fn next_cycle_ms(&self) -> u64 {
        if self.in_force.is_some() { self.next_cycle_ms } else { u64::MAX }
    }

    /// Tick at which something is due next, ms.
    #[must_use]
    pub fn next_wake_ms(&self) -> u64 {
        self.next_cycle_ms().min(self.flush_at_ms.unwrap_or(u64::MAX))
    }

    /// What the box shows.
    #[must_use]
    pub const fn output(&self) -> Output {
        self.output
    }

    /// The state that the last step left.
    #[must_use]
    pub fn state(&self) -> &State {
        &self.memory.state
    }

    /// The journal, for what a simulated board wants to count.
    #[must_use]
    pub const fn journal(&self) -> Option<&Held<B>> {
        self.journal.as_ref()
    }

    /// Writes what has waited long enough.
    pub(crate) fn flush_when_due(&mut self, now_ms: u64) {
        if self.flush_at_ms.is_some_and(|due_ms| now_ms >= due_ms) {
            self.flush();
        }
    }

    fn flush(&mut self) {
        let result = self.journal.as_mut().map(Journal::flush);
        if let Some(Err(_)) = result {
            self.journal_failed();
        }
        self.flush_at_ms = None;
        self.save_waiting();
    }

    /// Erases ahead while nobody waits.
    pub(crate) fn housekeeping(&mut self, now_ms: u64) {
        let result = self.journal.as_mut().map(|journal| journal.housekeeping(now_ms));
        if let Some(Err(_)) = result {
            self.journal_failed();
        }
    }

    /// Keeps the waiting samples where a warm restart finds them.
    fn save_waiting(&mut self) {
        if let Some(journal) = &self.journal {
            journal.waiting().save(self.boot, &mut self.retained, &WAITING_AREA);
        }
    }

    /// Sets the contact by the state of the machines. Without a plan or a journal the device cannot
    /// see.
    fn show(&mut self) {
        self.output = Output::of(&self.memory.state);
        if self.in_force.is_none() || self.journal_failing || self.journal.is_none() {
            self.output.contact_closed = false;
            self.output.sounding |= self.output.rhythm == Rhythm::Healthy;
            if self.output.rhythm == Rhythm::Healthy {
                self.output.rhythm = Rhythm::CannotSee;
            }
        }
        // A pin that cannot be driven cannot be helped by the application either: the contact's
        // circuit opens by itself when the drive fails.
        let _ = self.contact.set_state(self.output.contact_closed.into());
    }

    /// UTC seconds now, when the clock was set since this start.
    fn utc_s(&self, tick_ms: u64) -> Option<u64> {
        let (fixed_ms, utc_s) = self.clock_fix?;
        Some(utc_s.saturating_add(tick_ms.saturating_sub(fixed_ms) / 1000))
    }

    /// What the journal asks for when a sector opens.
    fn now(&self, tick_ms: u64) -> Now {
        Now {
            fingerprint: self.in_force.map_or(0, |plan| plan.fingerprint),
            boot: self.boot,
            tick_ms,
            utc_s: self.utc_s(tick_ms),
        }
    }
}

impl<B: Board> fmt::Debug for Device<B> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.debug_struct("Device")
            .field("name", &self.name)
            .field("boot", &self.boot)
            .field("now_ms", &self.clock.now_ms())
            .finish_non_exhaustive()
    }
}
