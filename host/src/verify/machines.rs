//! Checkpoints against each other: the moves between two of them lead from one to the next.
//!
//! A checkpoint may be one sample ahead of the entries before it: the moves of the sample that
//! opened the sector stand behind the checkpoint. So the comparison waits for them.

use super::contradiction::Contradiction;
use strake_core::alarm::{AlarmState, FaultCause, MACHINES, MachineId};
use strake_core::evaluate::State;
use strake_core::journal::Entry;

/// State of every machine, where it is known.
type States = [Option<AlarmState>; MACHINES];

#[derive(Debug)]
pub(super) struct Machines {
    /// By the checkpoint before and the moves since.
    known: States,
    /// The running hash, until an input changes it.
    hash: Option<u64>,
    /// A checkpoint that waits for its moves.
    ahead: Option<(u32, Box<States>)>,
}

impl Default for Machines {
    fn default() -> Self {
        Self { known: [None; MACHINES], hash: None, ahead: None }
    }
}

impl Machines {
    /// Nothing is known any more: entries are missing.
    pub(super) fn forget(&mut self) {
        *self = Self::default();
    }

    /// A sector opens with this checkpoint.
    pub(super) fn checkpoint(
        &mut self,
        sequence: u32,
        state: Option<&State>,
        found: &mut Vec<Contradiction>,
    ) {
        self.compare(found);
        let Some(state) = state else { return self.forget() };
        if self.hash.is_some_and(|hash| hash != state.hash) {
            found.push(Contradiction::Hash { sequence: Some(sequence) });
        }
        self.hash = Some(state.hash);
        let states = state.machines().map(|machine| Some(machine.state));
        self.ahead = Some((sequence, Box::new(states)));
    }

    /// The next entry of the sector.
    pub(super) fn entry(&mut self, sequence: u32, entry: &Entry, found: &mut Vec<Contradiction>) {
        if let Entry::Transition(moved) = entry {
            let number = moved.machine.number();
            if let Some(known) = self.known.get_mut(usize::from(number)) {
                if known.is_some_and(|known| known != moved.from) {
                    found.push(Contradiction::Machine { sequence, machine: number });
                }
                *known = Some(moved.to);
            }
            self.hash = Some(moved.hash);
            return;
        }
        match entry {
            // A loss of power may have come between a sample and its moves.
            Entry::StartUp { .. } => self.trust(),
            // What could not be written is not here.
            Entry::Gap { .. } | Entry::Fault { cause: FaultCause::Journal, .. } => {
                self.trust();
                self.known = [None; MACHINES];
                self.hash = None;
            }
            _ => self.compare(found),
        }
        match entry {
            Entry::StartUp { .. } => self.known = [None; MACHINES],
            Entry::PlanChange { .. } => {
                for (number, known) in (0_u8..).zip(&mut self.known) {
                    if MachineId::from_number(number).is_some_and(MachineId::is_load) {
                        *known = Some(AlarmState::Normal);
                    }
                }
            }
            Entry::Sample(_) | Entry::Fault { .. } | Entry::Acknowledge { .. } => self.hash = None,
            Entry::Transition(_) | Entry::ClockFix { .. } | Entry::Gap { .. } => {}
        }
    }

    /// The journal ends; `head` is the running hash of the head.
    pub(super) fn finish(&mut self, head: Option<u64>, found: &mut Vec<Contradiction>) {
        if let (Some(known), Some(head)) = (self.hash, head)
            && known != head
        {
            found.push(Contradiction::Hash { sequence: None });
        }
    }

    /// The checkpoint that waits holds, whatever came before.
    fn trust(&mut self) {
        if let Some((_, states)) = self.ahead.take() {
            self.known = *states;
        }
    }

    fn compare(&mut self, found: &mut Vec<Contradiction>) {
        let Some((sequence, states)) = self.ahead.take() else { return };
        for (number, (known, stated)) in (0_u8..).zip(self.known.iter().zip(states.iter())) {
            if known.is_some() && known != stated {
                found.push(Contradiction::Machine { sequence, machine: number });
            }
        }
        self.known = *states;
    }
}
