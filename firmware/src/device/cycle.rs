//! One cycle: sense, append, evaluate, append, show.

use super::{Device, Memory, sense};
use crate::arithmetic;
use crate::board::{Board, Clock};
use heapless::Vec;
use strake_core::alarm::{FaultCause, MACHINES};
use strake_core::evaluate::Moved;
use strake_core::journal::{Entry, Sample};
use strake_core::signal::Resolved;

/// Every machine can move at most once in a sample.
pub(super) type Moves = Vec<Moved, MACHINES>;

impl<B: Board> Device<B> {
    /// Takes one sample with all that follows from it.
    #[inline(never)]
    pub(crate) fn cycle(&mut self, now_ms: u64) {
        let sample = self.sense(now_ms);
        self.take(&sample);
        let ahead_ms = self.schedule(now_ms);
        let wait_ms = self.memory.plan.logging.wait_ms(ahead_ms);
        let due_ms = now_ms.saturating_add(u64::from(wait_ms));
        self.flush_at_ms = Some(self.flush_at_ms.map_or(due_ms, |before_ms| before_ms.min(due_ms)));
        if self.journal.as_ref().is_some_and(|journal| journal.waiting().is_empty()) {
            self.flush_at_ms = None;
        }
        self.save_waiting();
        self.show();
        self.completed_ms = now_ms;
    }

    /// The last completed cycle began no longer ago than the plan's longest interval. Without a
    /// plan there is nothing to complete.
    pub(crate) fn is_on_time(&self, now_ms: u64) -> bool {
        let logging = &self.memory.plan.logging;
        let longest_ms = logging.interval_ms.max(logging.idle_interval_ms);
        self.in_force.is_none() || now_ms.saturating_sub(self.completed_ms) <= u64::from(longest_ms)
    }

    fn sense(&mut self, now_ms: u64) -> Sample {
        let level = sense::channel(&mut self.level, &self.clock);
        let temperature = if self.memory.plan.liquid.temperature.is_some() {
            sense::channel(&mut self.temperature, &self.clock)
        } else {
            strake_core::signal::Channel::default()
        };
        Sample { tick_ms: now_ms, level, temperature, battery_mv: self.battery_mv }
    }

    /// Appends a sample, evaluates it and appends what moved.
    pub(super) fn take(&mut self, sample: &Sample) {
        self.tell_start();
        let tick_ms = sample.tick_ms;
        let now = self.now(tick_ms);
        let state = &self.memory.state;
        let pushed =
            self.journal.as_mut().map(|journal| journal.push(sample, &mut now.with(state)));
        let resolved = self.evaluate(sample);
        self.samples = self.samples.saturating_add(1);
        if let Some(cause) = resolved.fault {
            self.faults.seen(cause, sample.level.count_16);
        }
        self.reading = Some(resolved);
        self.append_moves(tick_ms);
        if let Some(Err(_)) = pushed {
            self.journal_failed();
        }
        self.tell_faults(tick_ms);
    }

    /// Evaluates a sample; what moved stands in the memory.
    // Apart, so that its room on the stack is not taken while a sector is opened.
    #[inline(never)]
    fn evaluate(&mut self, sample: &Sample) -> Resolved {
        let Memory { plan, state, moves } = &mut *self.memory;
        moves.clear();
        arithmetic::step(plan, state, sample, &mut |moved| {
            let _ = moves.push(moved);
        })
    }

    /// Appends the entries of one sample's or one press's moves; they carry the hash behind all of
    /// them.
    pub(super) fn append_moves(&mut self, tick_ms: u64) {
        let now = self.now(tick_ms);
        let Memory { state, moves, .. } = &*self.memory;
        let hash = state.hash;
        let mut failed = false;
        for chunk in moves.chunks(4) {
            let mut entries = Vec::<Entry, 4>::new();
            for moved in chunk {
                // Four at most; collecting would keep a way to panic.
                let _ = entries.push(Entry::Transition(moved.entry(tick_ms, hash)));
            }
            let appended = self
                .journal
                .as_mut()
                .map(|journal| journal.append_events(&entries, &mut now.with(state)));
            failed |= matches!(appended, Some(Err(_)));
        }
        if failed {
            self.journal_failed();
        }
    }

    /// Appends one event; gives whether it stands in the journal.
    pub(super) fn append(&mut self, entry: &Entry) -> bool {
        self.tell_start();
        let now = self.now(entry.tick_ms());
        let appended = self
            .journal
            .as_mut()
            .map(|journal| journal.append_event(entry, &mut now.with(&self.memory.state)));
        match appended {
            Some(Ok(())) => true,
            Some(Err(_)) => {
                self.journal_failed();
                false
            }
            None => false,
        }
    }

    /// The journal cannot be written. The contact tells it at once; its entry and its machine
    /// follow when the journal takes entries again, so that the replay sees what the device saw.
    pub(super) fn journal_failed(&mut self) {
        self.faults.seen(FaultCause::Journal, 0);
        self.journal_failing = true;
    }

    /// Writes the fault entries that are due, and applies those that are inputs.
    pub(super) fn tell_faults(&mut self, tick_ms: u64) {
        while let Some(entry) = self.faults.next_due(tick_ms) {
            if !self.append(&entry) {
                break;
            }
            let Entry::Fault { cause, .. } = entry else { continue };
            let Memory { plan, state, moves } = &mut *self.memory;
            moves.clear();
            state.report(plan, cause, tick_ms, |moved| {
                let _ = moves.push(moved);
            });
            self.append_moves(tick_ms);
            if cause == FaultCause::Journal {
                self.journal_failing = false;
            }
        }
    }

    /// The next cycle: on a beat of the interval, or when a pending delay expires. Gives the time
    /// until that beat, ms.
    fn schedule(&mut self, now_ms: u64) -> u32 {
        let interval_ms = self.memory.plan.logging.interval_ms;
        let plan = &self.memory.plan;
        let ahead_ms = self.reading.map_or(interval_ms, |reading| {
            arithmetic::next_ms(&mut self.pace, plan, &reading, now_ms)
        });
        let interval_ms = u64::from(interval_ms).max(1);
        let beats = now_ms.saturating_sub(self.beat_ms) / interval_ms;
        // Kept as the last one that is over.
        self.beat_ms = self.beat_ms.saturating_add(beats.saturating_mul(interval_ms));
        let expiry_ms = self
            .memory
            .state
            .next_expiry_ms(&self.memory.plan, now_ms)
            .map_or(u64::MAX, |wait_ms| now_ms.saturating_add(u64::from(wait_ms.max(1))));
        self.next_cycle_ms = self.beat_ms.saturating_add(ahead_ms.into()).min(expiry_ms);
        ahead_ms
    }

    /// Looks again at once.
    pub(super) fn look_now(&mut self) {
        self.next_cycle_ms = self.clock.now_ms();
    }
}
