//! Start-up: the plan, the journal's end, the alarms as they stood, the start-up entry.
//!
//! A start-up always finishes and never clears a latch. The state is that of the newest checkpoint
//! with every entry behind it applied in order, exactly as the replay does it.

use super::faults::FaultLog;
use super::plans::load;
use super::{Device, InForce, Memory, STARTS_AT, STARTS_BYTES, WAITING_AREA};
use crate::arithmetic;
use crate::board::{Board, Clock, Hardware, ResetCause, RetainedMemory};
use crate::journal::{Journal, Recovery, Restore, Waiting};
use crate::plan_store::PlanStore;
use embedded_storage::nor_flash::NorFlash;
use strake_core::alarm::FaultCause;
use strake_core::evaluate::{Output, Pace};
use strake_core::journal::{Entry, SectorHeader};

impl<B: Board> Device<B> {
    /// Starts; gives the line and the watchdog back to the application.
    pub(crate) fn start(
        hardware: Hardware<B>,
        mut memory: B::Room<Memory>,
        waiting: B::Room<Waiting>,
    ) -> (Self, B::Link, B::Watchdog) {
        let Hardware { clock, level, temperature, journal, plans, link, contact, button, .. } =
            hardware;
        let Hardware { retained, watchdog, device_id, reset_cause, .. } = hardware;
        let mut plans = PlanStore::open(plans);
        let mut restored = Restored { plans: &mut plans, memory: &mut memory, in_force: None };
        let (journal, recovery) = match Journal::open_in(waiting, journal, &mut restored) {
            Ok((journal, recovery)) => (Some(journal), recovery),
            Err(_) => (None, Recovery::default()),
        };
        let Restored { in_force, .. } = restored;
        let mut device = Self {
            clock,
            level,
            temperature,
            contact,
            button,
            retained,
            name: device_id,
            journal,
            plans,
            in_force,
            memory,
            boot: recovery.last_boot.wrapping_add(1),
            clock_fix: None,
            reading: None,
            battery_mv: 0,
            samples: 0,
            next_cycle_ms: 0,
            completed_ms: 0,
            beat_ms: 0,
            pace: Pace::default(),
            flush_at_ms: None,
            faults: FaultLog::new(),
            start_up: None,
            journal_failing: false,
            button_down: false,
            output: Output::default(),
        };
        let carried = device.carry_over(&recovery);
        device.begin(reset_cause, carried, &recovery);
        device.show();
        (device, link, watchdog)
    }

    /// Samples that waited in RAM when the controller restarted warm: pushed and evaluated like
    /// fresh ones. They belong to the start before this one.
    // Apart, so that its room on the stack is not taken while the journal is read back.
    #[inline(never)]
    fn carry_over(&mut self, recovery: &Recovery) -> u8 {
        let Some(journal) = &mut self.journal else { return 0 };
        let carried = journal.carried(&self.retained, &WAITING_AREA, recovery);
        // By reference: they are many bytes to move.
        let Ok(waiting) = &carried else { return 0 };
        if self.in_force.is_none() {
            return 0;
        }
        let boot = self.boot;
        self.boot = recovery.last_boot;
        let mut count = 0_u8;
        for sample in waiting.iter() {
            self.take(sample);
            count = count.saturating_add(1);
        }
        let flushed = self.journal.as_mut().map(Journal::flush);
        if let Some(Err(_)) = flushed {
            self.journal_failed();
        }
        self.boot = boot;
        count
    }

    #[inline(never)]
    fn begin(&mut self, cause: ResetCause, carried: u8, recovery: &Recovery) {
        let tick_ms = self.clock.now_ms();
        let missing_ms_max = match (cause, self.in_force) {
            // Everything that waited was carried over.
            (ResetCause::Watchdog | ResetCause::Panic | ResetCause::Software, Some(_))
                if carried > 0 =>
            {
                0
            }
            (_, Some(_)) => self.memory.plan.missing_ms_max(),
            (_, None) => 0,
        };
        let boot = self.boot;
        let count = self.starts_untold(cause).saturating_add(1);
        self.keep_starts(count);
        self.start_up =
            Some(Entry::StartUp { tick_ms, boot, cause, carried, missing_ms_max, count });
        if self.in_force.is_none() {
            self.tell_start();
        }
        self.take_over_newest();
        if recovery.damaged_sectors > 0 {
            let damaged = i32::try_from(recovery.damaged_sectors).unwrap_or(i32::MAX);
            self.faults.seen(FaultCause::JournalDamaged, damaged);
        }
        if self.in_force.is_some() {
            self.tell_faults(tick_ms);
        }
        self.begin_beat(tick_ms);
        self.save_waiting();
    }
}

impl<B: Board> Device<B> {
    /// Writes the start-up entry, before anything else of this start. So a controller that starts
    /// again and again without a sample fills no page of the journal each time.
    pub(super) fn tell_start(&mut self) {
        if let Some(entry) = self.start_up.take() {
            self.append(&entry);
            self.memory.state.restart(entry.tick_ms());
            self.keep_starts(0);
        }
    }

    /// Starts before this one without an entry, as far as retained memory has them.
    fn starts_untold(&self, cause: ResetCause) -> u16 {
        let mut bytes = [0; STARTS_BYTES];
        self.retained.read(STARTS_AT, &mut bytes);
        let [c0, c1, n0, n1] = bytes;
        let count = u16::from_le_bytes([c0, c1]);
        let sound = u16::from_le_bytes([n0, n1]) == !count;
        if sound && cause != ResetCause::PowerOn { count } else { 0 }
    }

    /// Keeps the number with its complement, which tells it from what RAM holds by chance.
    fn keep_starts(&mut self, count: u16) {
        let [c0, c1] = count.to_le_bytes();
        let bytes: [u8; STARTS_BYTES] = [c0, c1, !c0, !c1];
        self.retained.write(STARTS_AT, &bytes);
    }
}

/// Applies what the journal remembers, with the plan that was in force then.
struct Restored<'a, F> {
    plans: &'a mut PlanStore<F>,
    memory: &'a mut Memory,
    /// Which plan the memory holds.
    in_force: Option<InForce>,
}

impl<F: NorFlash> Restored<'_, F> {
    /// Puts the plan with this fingerprint into force; without it samples cannot be applied.
    fn use_plan(&mut self, fingerprint: u64) {
        if self.in_force.is_none_or(|plan| plan.fingerprint != fingerprint) {
            self.in_force = load(self.plans, &mut self.memory.plan, fingerprint).ok();
        }
    }
}

impl<F: NorFlash> Restore for Restored<'_, F> {
    fn sector(&mut self, header: &SectorHeader) {
        self.use_plan(header.plan_fingerprint);
    }

    fn checkpoint(&mut self, bytes: &[u8]) {
        // A checkpoint of another version is passed over; the entries behind it still count.
        self.memory.state.decode_into(bytes);
    }

    // Apart, so that a plan is not read on top of it.
    #[inline(never)]
    fn entry(&mut self, entry: &Entry) {
        match entry {
            Entry::Sample(sample) if self.in_force.is_some() => {
                arithmetic::step(&self.memory.plan, &mut self.memory.state, sample, &mut |_| {});
            }
            Entry::Fault { tick_ms, cause, .. } => {
                self.memory.state.report(&self.memory.plan, *cause, *tick_ms, |_| {});
            }
            Entry::StartUp { tick_ms, .. } => self.memory.state.restart(*tick_ms),
            Entry::PlanChange { tick_ms, fingerprint, .. } => {
                self.use_plan(*fingerprint);
                self.memory.state.change_plan(*tick_ms);
            }
            Entry::Acknowledge { tick_ms, .. } => self.memory.state.acknowledge(*tick_ms, |_| {}),
            // Results, and what the state does not depend on.
            Entry::Sample(_)
            | Entry::Transition(_)
            | Entry::ClockFix { .. }
            | Entry::Gap { .. } => {}
        }
    }
}
