//! An application with one sector, number 4: each byte of it is the number of its unit.

use crate::serve::{Refusal, Served};
use strake_core::wire::{
    ErrorCode, FaultStatus, FillingStatus, Head, Identity, JournalBounds, PartStatus, PlanBegin,
    PlanEntry, PlanList, Status, Text,
};

const USED: u16 = 1600;

#[derive(Default)]
pub(super) struct App {
    pub(super) clock_sets: u32,
    pub(super) acknowledged: u32,
    pub(super) plan: Vec<u8>,
    pub(super) commits: u32,
    pub(super) busy: bool,
    pub(super) torn: bool,
    in_force: u64,
}

impl Served for App {
    fn identity(&mut self) -> Identity {
        let device_id = Text::new("tank-7").unwrap();
        Identity { device_id, plan_fingerprint: self.in_force, ..Identity::default() }
    }

    fn status(&mut self) -> Status {
        Status::default()
    }

    fn part_status(&mut self, part: u8) -> Option<PartStatus> {
        (part == 0).then(PartStatus::default)
    }

    fn fault_status(&mut self) -> FaultStatus {
        FaultStatus::default()
    }

    fn filling(&mut self) -> FillingStatus {
        FillingStatus::default()
    }
    fn set_clock(&mut self, _utc_s: u64) -> Result<(), Refusal> {
        self.clock_sets += 1;
        Ok(())
    }

    fn acknowledge(&mut self) -> Result<(), Refusal> {
        self.acknowledged += 1;
        Ok(())
    }

    fn plan_begin(&mut self, _begin: &PlanBegin) -> Result<(), Refusal> {
        self.plan.clear();
        Ok(())
    }

    fn plan_chunk(&mut self, offset: u32, bytes: &[u8]) -> Result<(), Refusal> {
        assert_eq!(usize::try_from(offset), Ok(self.plan.len()));
        self.plan.extend(bytes);
        Ok(())
    }

    fn plan_commit(&mut self, fingerprint: u64) -> Result<(), Refusal> {
        if self.busy {
            return Err(ErrorCode::Busy.into());
        }
        self.commits += 1;
        self.in_force = fingerprint;
        Ok(())
    }

    fn plans(&mut self) -> PlanList {
        let mut list = PlanList::default();
        let length = u32::try_from(self.plan.len()).unwrap();
        list.plans[0] = PlanEntry { serial: 9, fingerprint: self.in_force, length };
        list
    }

    fn read_plan(&mut self, _fingerprint: u64, offset: u32, out: &mut [u8]) -> Result<(), Refusal> {
        let offset = usize::try_from(offset).unwrap();
        out.copy_from_slice(&self.plan[offset..][..out.len()]);
        Ok(())
    }

    fn journal_bounds(&mut self) -> JournalBounds {
        JournalBounds { oldest: 4, newest: 4, newest_used: USED }
    }

    fn head(&mut self) -> Result<Head, Refusal> {
        Ok(Head { newest: 4, used: USED, ..Head::default() })
    }

    fn sector_used(&mut self, sequence: u32) -> Option<u16> {
        (sequence == 4).then_some(USED)
    }

    fn read_sector(&mut self, _sequence: u32, offset: u16, out: &mut [u8]) -> Result<(), Refusal> {
        if self.torn {
            return Err(ErrorCode::StorageFailed.into());
        }
        assert!(usize::from(offset) + out.len() <= usize::from(USED));
        for (place, slot) in out.iter_mut().enumerate() {
            *slot = u8::try_from((usize::from(offset) + place) / 128).unwrap();
        }
        Ok(())
    }
}
