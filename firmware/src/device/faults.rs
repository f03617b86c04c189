//! Faults as the journal tells them: counted, and the same cause at most once a minute.

use strake_core::alarm::{FAULT_CAUSES, FaultCause};
use strake_core::journal::Entry;

/// Shortest time between two entries of one cause, ms.
const EVERY_MS: u64 = 60_000;

#[derive(Clone, Copy, Debug, Default)]
struct Tally {
    /// Occurrences since the start; stays at its highest value.
    total: u16,
    /// Occurrences since the last entry.
    untold: u16,
    told_ms: Option<u64>,
    detail: i32,
}

/// Counts per cause since the start.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct FaultLog {
    tallies: [Tally; FAULT_CAUSES],
}

impl FaultLog {
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
        for (cause, tally) in FaultCause::ALL.into_iter().zip(&mut self.tallies) {
            let due = tally.told_ms.is_none_or(|told| tick_ms.saturating_sub(told) >= EVERY_MS);
            if tally.untold > 0 && due {
                let (count, detail) = (tally.untold, tally.detail);
                tally.untold = 0;
                tally.told_ms = Some(tick_ms);
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
