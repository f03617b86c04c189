//! Plans: from a slot into force.

use super::{Device, InForce};
use crate::board::{Board, Clock, CountSource};
use crate::plan_store::PlanStore;
use crate::serve::Refusal;
use embedded_storage::nor_flash::NorFlash;
use strake_core::evaluate::Pace;
use strake_core::journal::Entry;
use strake_core::plan::codec::{Fetch, decode_into};
use strake_core::plan::{Plan, PlanError};
use strake_core::wire::ErrorCode;

/// Hands out the bytes of a stored plan.
struct Stored<'a, F> {
    plans: &'a mut PlanStore<F>,
    fingerprint: u64,
    offset: u32,
}

impl<F: NorFlash> Fetch for Stored<'_, F> {
    fn fetch(&mut self, out: &mut [u8]) -> Option<()> {
        self.plans.read(self.fingerprint, self.offset, out).ok()?;
        self.offset = self.offset.checked_add(u32::try_from(out.len()).ok()?)?;
        Some(())
    }
}

/// Reads a stored plan over `plan`; after an error `plan` is none.
pub(super) fn load<F: NorFlash>(
    plans: &mut PlanStore<F>,
    plan: &mut Plan,
    fingerprint: u64,
) -> Result<InForce, PlanError> {
    // A turned bit of a number would go unseen below.
    if !plans.is_sound(fingerprint) {
        return Err(PlanError::Damaged);
    }
    let mut stored = Stored { plans, fingerprint, offset: 0 };
    let header = decode_into(&mut stored, plan)?;
    Ok(InForce { fingerprint, serial: header.serial })
}

impl<B: Board> Device<B> {
    /// Checks the plan that has come, stores it and puts it into force.
    pub(super) fn commit_plan(&mut self, fingerprint: u64) -> Result<(), Refusal> {
        let stored = self.plans.commit().map_err(super::served::refusal)?;
        if stored.fingerprint != fingerprint {
            return Err(ErrorCode::OutOfOrder.into());
        }
        self.take_over(stored.fingerprint)
    }

    /// Puts a stored plan into force; when it is no plan, the one before it stays.
    fn take_over(&mut self, fingerprint: u64) -> Result<(), Refusal> {
        let before = self.in_force;
        match load(&mut self.plans, &mut self.memory.plan, fingerprint) {
            Ok(in_force) => {
                let tick_ms = self.clock.now_ms();
                let serial = in_force.serial;
                // An input: written before it is applied.
                self.append(&Entry::PlanChange { tick_ms, fingerprint, serial });
                self.in_force = Some(in_force);
                self.memory.state.change_plan(tick_ms);
                self.reading = None;
                self.begin_beat(tick_ms);
                self.show();
                Ok(())
            }
            Err(error) => {
                self.in_force = before.and_then(|old| {
                    load(&mut self.plans, &mut self.memory.plan, old.fingerprint).ok()
                });
                let code = match error {
                    PlanError::Format => ErrorCode::PlanFormat,
                    _ => ErrorCode::PlanInvalid,
                };
                Err(Refusal { code, detail: u32::from(error.number()) })
            }
        }
    }

    /// The plan in force counts from now on: the first cycle is due.
    pub(super) fn begin_beat(&mut self, tick_ms: u64) {
        self.level.read_from(self.memory.plan.level.signal);
        self.beat_ms = tick_ms;
        self.pace = Pace::default();
        self.next_cycle_ms = tick_ms;
        self.completed_ms = tick_ms;
    }

    /// A plan that was stored just before the power went has no entry yet: it takes over now.
    pub(super) fn take_over_newest(&mut self) {
        let in_force = self.in_force.map(|plan| plan.fingerprint);
        if let Some(newest) = self.plans.newest()
            && Some(newest.fingerprint) != in_force
        {
            // A stored plan that this version cannot use leaves the one before it in force.
            let _ = self.take_over(newest.fingerprint);
        }
    }
}
