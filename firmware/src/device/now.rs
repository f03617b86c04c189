//! What the journal asks for when a sector opens.

use crate::journal::Snapshot;
use strake_core::evaluate::State;

/// Facts of the moment, without the state.
#[derive(Clone, Copy, Debug)]
pub(super) struct Now {
    pub(super) fingerprint: u64,
    pub(super) boot: u16,
    pub(super) tick_ms: u64,
    pub(super) utc_s: Option<u64>,
}

impl Now {
    /// Together with the state that a checkpoint holds.
    pub(super) const fn with(self, state: &State) -> AsItStands<'_> {
        AsItStands { now: self, state }
    }
}

/// A [`Snapshot`] of the device.
#[derive(Debug)]
pub(super) struct AsItStands<'a> {
    now: Now,
    state: &'a State,
}

impl Snapshot for AsItStands<'_> {
    fn plan_fingerprint(&self) -> u64 {
        self.now.fingerprint
    }

    fn boot(&self) -> u16 {
        self.now.boot
    }

    fn tick_ms(&self) -> u64 {
        self.now.tick_ms
    }

    fn utc_s(&self) -> Option<u64> {
        self.now.utc_s
    }

    fn write_state(&mut self, out: &mut [u8]) -> usize {
        // The buffer holds the largest checkpoint by a constant checked below.
        self.state.encode(out).unwrap_or(0)
    }
}

const _: () = assert!(
    strake_core::evaluate::CHECKPOINT_BYTES_MAX <= strake_core::journal::STATE_BYTES_MAX,
    "every state fits a checkpoint"
);
