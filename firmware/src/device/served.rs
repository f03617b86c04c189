//! What the device answers over the link.

use super::Device;
use crate::arithmetic;
use crate::board::{Board, Clock};
use crate::journal::{Journal, ReadError};
use crate::plan_store::StoreError;
use crate::serve::{Refusal, Served};
use embedded_storage::nor_flash::{NorFlash, ReadNorFlash};
use strake_core::alarm::{FAULT_CAUSES, FaultCause, MachineId, PARTS_MAX, Threshold};
use strake_core::evaluate::TimeToLimit;
use strake_core::journal::Entry;
use strake_core::journal::entry::Presser;
use strake_core::part::{Cover, Geometry, Held, PartLoads, Shut};
use strake_core::plan::PLAN_FORMAT;
use strake_core::wire::{
    ErrorCode, FaultStatus, FillingStatus, Head, Identity, JournalBounds, LinkCounters, LoadValue,
    PROTOCOL_VERSION, PartStatus, PlanBegin, PlanEntry, PlanList, Status, Text,
};

/// UTC seconds before which no clock can be right: 2026-01-01.
const UTC_S_MIN: u64 = 1_767_225_600;
/// UTC seconds after which no clock can be right: 2200-01-01.
const UTC_S_MAX: u64 = 7_258_118_400;
/// Version text of this firmware.
const FIRMWARE: &str = env!("CARGO_PKG_VERSION");

impl<B: Board> Served for Device<B> {
    fn identity(&mut self) -> Identity {
        let sectors = self
            .journal
            .as_ref()
            .map_or(0, |journal| journal.flash().capacity() / strake_core::journal::SECTOR_BYTES);
        Identity {
            protocol: PROTOCOL_VERSION,
            journal_format: strake_core::journal::header::VERSION,
            plan_format: PLAN_FORMAT,
            firmware: Text::new(FIRMWARE).unwrap_or_default(),
            device_id: self.name,
            boot: self.boot,
            tick_ms: self.clock.now_ms(),
            plan_fingerprint: self.in_force.map_or(0, |plan| plan.fingerprint),
            plan_serial: self.in_force.map_or(0, |plan| plan.serial),
            word_bytes: u8::try_from(B::Journal::WRITE_SIZE).unwrap_or(u8::MAX),
            sectors: u32::try_from(sectors).unwrap_or(u32::MAX),
        }
    }

    fn status(&mut self) -> Status {
        let tick_ms = self.clock.now_ms();
        let mut status = Status {
            output: self.output.rhythm as u8,
            governing_part: u8::MAX,
            battery_mv: self.battery_mv,
            clock_set: self.clock_fix.is_some(),
            utc_s: self.utc_s(tick_ms).unwrap_or(0),
            boot: self.boot,
            tick_ms,
            samples: self.samples,
            journal: self.journal_bounds(),
            link: LinkCounters::default(),
            ..Status::default()
        };
        for (number, machine) in (0_u8..).zip(self.memory.state.machines()) {
            let normal = machine.state == strake_core::alarm::AlarmState::Normal;
            match MachineId::from_number(number) {
                Some(id) if !normal && id.is_load() => status.alarms += 1,
                Some(_) if !normal => status.faults += 1,
                _ => {}
            }
        }
        let Some(reading) = self.reading.filter(|_| self.in_force.is_some()) else {
            return status;
        };
        status.level_reading = reading.class as u8;
        [status.level_low_m, status.level_m, status.level_high_m] =
            arithmetic::levels_m(&self.memory.plan, &reading);
        status.parts = u8::try_from(self.memory.plan.parts.len()).unwrap_or(u8::MAX);
        arithmetic::loads(&self.memory.plan, &reading, &mut |index, part| {
            let bound = part.utilisation_bound.lane(0);
            if status.governing_part == u8::MAX || bound > status.utilisation_bound {
                status.utilisation_bound = bound;
                status.governing_part = u8::try_from(index).unwrap_or(u8::MAX);
            }
        });
        status
    }

    fn part_status(&mut self, part: u8) -> Option<PartStatus> {
        self.in_force?;
        let reading = self.reading?;
        let one = self.memory.plan.parts.get(usize::from(part))?;
        // All of them, in the one place that is compiled for it, and one kept.
        let mut found = None;
        arithmetic::loads(&self.memory.plan, &reading, &mut |index, loads| {
            if index == usize::from(part) {
                found = Some(*loads);
            }
        });
        let of = found?;
        let state = |threshold| {
            MachineId::of_part(part, threshold)
                .map_or(0, |id| self.memory.state.machine(id).state.number())
        };
        Some(PartStatus {
            part,
            utilisation: of.utilisation.lane(0),
            utilisation_bound: of.utilisation_bound.lane(0),
            utilisation_inward: of.utilisation_inward.lane(0),
            inward_judged: one.judged_inward(),
            alarms: [Threshold::Warn, Threshold::Alarm, Threshold::Inward].map(state),
            loads: load_values(&one.geometry, &of),
            opening: Shut::of(&self.memory.plan, one, &reading)
                .map_or(0, |shut| PartStatus::OPENING | shut.0),
        })
    }

    fn fault_status(&mut self) -> FaultStatus {
        let mut status = FaultStatus::default();
        let rows = status.states.iter_mut().zip(&mut status.counts);
        for (number, (state, count)) in rows.enumerate().take(FAULT_CAUSES) {
            let cause = u8::try_from(number).ok().and_then(FaultCause::from_number);
            *state = cause.map_or(0, |cause| {
                self.memory.state.machine(MachineId::of_fault(cause)).state.number()
            });
            *count = self.faults.total(number);
        }
        status
    }

    fn filling(&mut self) -> FillingStatus {
        let alarm = self.memory.state.machine(MachineId::TIME_TO_LIMIT).state.number();
        let mut status = FillingStatus { alarm, ..FillingStatus::default() };
        if let Some(reading) = self.reading.filter(|_| self.in_force.is_some()) {
            let time = self.memory.state.time_to_limit(&self.memory.plan, &reading);
            status.state = time.number();
            if let TimeToLimit::Filling { time_s, inflow_m3_s } = time {
                (status.time_s, status.inflow_m3_s) = (time_s, inflow_m3_s);
            }
        }
        status
    }

    fn set_clock(&mut self, utc_s: u64) -> Result<(), Refusal> {
        if !(UTC_S_MIN..=UTC_S_MAX).contains(&utc_s) {
            return Err(ErrorCode::ClockImpossible.into());
        }
        let tick_ms = self.clock.now_ms();
        if !self.append(&Entry::ClockFix { tick_ms, utc_s }) {
            return Err(ErrorCode::StorageFailed.into());
        }
        self.clock_fix = Some((tick_ms, utc_s));
        Ok(())
    }

    fn acknowledge(&mut self) -> Result<(), Refusal> {
        let tick_ms = self.clock.now_ms();
        if self.acknowledge_by(Presser::Link, tick_ms) {
            self.look_now();
            Ok(())
        } else {
            Err(ErrorCode::NothingToDo.into())
        }
    }

    fn plan_begin(&mut self, begin: &PlanBegin) -> Result<(), Refusal> {
        if !begin.device_id.is_empty() && begin.device_id != self.name {
            return Err(ErrorCode::PlanForOther.into());
        }
        if self.in_force.is_some_and(|plan| begin.serial <= plan.serial) {
            return Err(ErrorCode::PlanNotLater.into());
        }
        self.plans.begin(begin.length, begin.serial, begin.fingerprint).map_err(refusal)
    }

    fn plan_chunk(&mut self, offset: u32, bytes: &[u8]) -> Result<(), Refusal> {
        self.plans.write_chunk(offset, bytes).map_err(refusal)
    }

    fn plan_commit(&mut self, fingerprint: u64) -> Result<(), Refusal> {
        self.commit_plan(fingerprint)
    }

    fn plans(&mut self) -> PlanList {
        let mut list = PlanList::default();
        let in_force = self.in_force.map(|plan| plan.fingerprint);
        let mut kept = self.plans.list();
        // The one in force first.
        if let Some(index) = kept.iter().position(|plan| Some(plan.fingerprint) == in_force) {
            kept.swap(0, index);
        }
        for (slot, plan) in list.plans.iter_mut().zip(&kept) {
            *slot = PlanEntry {
                serial: plan.serial,
                fingerprint: plan.fingerprint,
                length: u32::from(plan.length),
            };
        }
        list
    }

    fn read_plan(&mut self, fingerprint: u64, offset: u32, out: &mut [u8]) -> Result<(), Refusal> {
        self.plans.read(fingerprint, offset, out).map_err(refusal)
    }

    fn journal_bounds(&mut self) -> JournalBounds {
        let none = JournalBounds { oldest: 1, newest: 0, newest_used: 0 };
        let Some(journal) = &self.journal else { return none };
        journal.newest_sequence().map_or(none, |newest| JournalBounds {
            oldest: journal.oldest_sequence(),
            newest,
            newest_used: journal.used_bytes::<()>(newest).unwrap_or(0),
        })
    }

    fn head(&mut self) -> Result<Head, Refusal> {
        self.flush();
        if self.journal_failing {
            return Err(ErrorCode::StorageFailed.into());
        }
        let bounds = self.journal_bounds();
        let next_entry = self.journal.as_ref().map_or(0, Journal::next_entry);
        Ok(Head {
            newest: bounds.newest,
            used: bounds.newest_used,
            next_entry,
            running_hash: self.memory.state.hash,
            boot: self.boot,
            tick_ms: self.clock.now_ms(),
        })
    }

    fn sector_used(&mut self, sequence: u32) -> Option<u16> {
        let journal = self.journal.as_ref()?;
        journal.used_bytes::<()>(sequence).ok()
    }

    fn read_sector(&mut self, sequence: u32, offset: u16, out: &mut [u8]) -> Result<(), Refusal> {
        let now_ms = self.clock.now_ms();
        let journal = self.journal.as_mut().ok_or(Refusal::from(ErrorCode::StorageFailed))?;
        journal.hold(sequence, now_ms);
        let oldest = journal.oldest_sequence();
        journal.read_sector(sequence, offset, out).map_err(|error| match error {
            ReadError::Gone => Refusal { code: ErrorCode::SectorGone, detail: oldest },
            ReadError::OutOfRange | ReadError::Flash(_) => ErrorCode::StorageFailed.into(),
        })
    }
}

/// The loads of a part by their number in the plan format plus one: pressure, hoop tension, force,
/// bolt share, moment; 8 and 9 the force on a curved part along angle 0 and upwards.
fn load_values(geometry: &Geometry, of: &PartLoads<1>) -> [LoadValue; 4] {
    let value = |load: u8, pick: fn(&strake_core::part::Loads<1>) -> f32| LoadValue {
        load,
        estimate: pick(&of.estimate),
        bound: pick(&of.outward),
    };
    let pressure = value(1, |loads| loads.pressure_pa.lane(0));
    let unused = LoadValue::default();
    match geometry {
        Geometry::Course { .. } => {
            [pressure, value(2, |loads| loads.hoop_tension_n_m.lane(0)), unused, unused]
        }
        Geometry::Plane { cover, .. } => {
            let force = value(3, |loads| loads.force_n.lane(0));
            let held = cover.as_ref().map_or(Held::Otherwise, Cover::held);
            let bolt = value(4, |loads| loads.bolt_n.lane(0));
            let moment = value(5, |loads| loads.moment_n_m.lane(0));
            match held {
                Held::Otherwise => [pressure, force, unused, unused],
                Held::Bolts(_) => [pressure, force, bolt, unused],
                Held::Line | Held::Side => [pressure, force, bolt, moment],
                Held::Plate(_) => [pressure, force, moment, unused],
            }
        }
        Geometry::Curved(curved) => {
            let tension = value(2, |loads| loads.hoop_tension_n_m.lane(0));
            let x = value(8, |loads| loads.force_x_n.lane(0));
            let z = value(9, |loads| loads.force_z_n.lane(0));
            [pressure, x, z, if curved.places > 0 { tension } else { unused }]
        }
    }
}

#[expect(clippy::needless_pass_by_value, reason = "reads best as the argument of map_err")]
pub(super) fn refusal<E>(error: StoreError<E>) -> Refusal {
    match error {
        StoreError::TooLong { most } => {
            Refusal { code: ErrorCode::PlanTooLong, detail: u32::from(most) }
        }
        StoreError::OutOfOrder => ErrorCode::OutOfOrder.into(),
        StoreError::Damaged => ErrorCode::PlanDamaged.into(),
        StoreError::Unknown => ErrorCode::PlanUnknown.into(),
        StoreError::Flash(_) => ErrorCode::StorageFailed.into(),
    }
}

const _: () = assert!(PARTS_MAX < u8::MAX as usize, "255 says no part");
