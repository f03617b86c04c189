//! Faults as the journal tells them: counted, and the same cause at most once a minute.

use strake_core::alarm::{FAULT_CAUSES, FaultCause};
use strake_core::journal::Entry;

/// Shortest time between two entries of one cause, ms.
const EVERY_MS: u32 = 60_000;

#[derive(Clone, Copy, Debug)]
struct Tally {
    /// Occurrences since the start; stays at its highest value.
    total: u16,
    /// Occurrences since the last entry: all while there is none.
    untold: u16,
    /// Low bits of the tick of the last entry. Once in 50 days an entry may come a minute late.
    told_ms: u32,
    detail: i32,
}

/// Counts per cause since the start.
#[derive(Clone, Copy, Debug)]
pub(super) struct FaultLog {
    tallies: [Tally; FAULT_CAUSES],
}

impl FaultLog {
    /// Nothing seen.
    pub(super) const fn new() -> Self {
        let none = Tally { total: 0, untold: 0, told_ms: 0, detail: 0 };
        Self { tallies: [none; FAULT_CAUSES] }
    }

    /// Counts an occurrence.
    pub(super) fn seen(&mut self, cause: FaultCause, detail: i32) {
        if let Some(tally) = self.tallies.get_mut(usize::from(cause.number())) {
            tally.total = tally.total.saturating_add(1);
            tally.untold = tally.untold.saturating_add(1);
            tally.detail = detail;
        }
    }

    /// The next entry that is due.
    pub(super) fn next_due(&mut self, tick_ms: u64) -> Option<Entry> {
        #[expect(clippy::cast_possible_truncation, reason = "the low bits are wanted")]
        let now_ms = tick_ms as u32;
        for (cause, tally) in FaultCause::ALL.into_iter().zip(&mut self.tallies) {
            let due = tally.untold == tally.total || now_ms.wrapping_sub(tally.told_ms) >= EVERY_MS;
            if tally.untold > 0 && due {
                let (count, detail) = (tally.untold, tally.detail);
                tally.untold = 0;
                tally.told_ms = now_ms;
                return Some(Entry::Fault { tick_ms, cause, count, detail });
            }
        }
        None
    }

    /// Occurrences of a cause since the start.
    pub(super) fn total(&self, number: usize) -> u16 {
        self.tallies.get(number).map_or(0, |tally| tally.total)
    }
}
