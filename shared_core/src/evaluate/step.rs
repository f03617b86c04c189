//! One sample, one press: what moves the machines.

use super::digest::fold;
use super::{Digest, State, TimeToLimit, loads};
use crate::alarm::{Condition, FaultCause, MachineId, Move, Settings, Threshold};
use crate::journal::entry::{Sample, Transition};
use crate::plan::{Plan, ThresholdPlan};
use crate::signal::{ReadingClass, Resolved, resolve};
use heapless::Vec;

/// A machine moved; small, so that a device can hold one for every machine.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Moved {
    /// Which machine.
    pub machine: MachineId,
    /// From where to where, and why.
    pub step: Move,
    /// Utilisation that was judged; zero for fault machines and presses.
    pub utilisation: f32,
}

impl Moved {
    /// The journal's entry. `hash` is the running hash once all moves of the same sample or press
    /// are folded in.
    #[must_use]
    pub const fn entry(&self, tick_ms: u64, hash: u64) -> Transition {
        Transition {
            tick_ms,
            machine: self.machine,
            from: self.step.from,
            to: self.step.to,
            cause: self.step.cause,
            utilisation: self.utilisation,
            hash,
        }
    }
}

/// The two utilisations by which one part is judged.
pub type Judged = (f32, f32);

/// Takes one sample: resolves it, evaluates every part, moves the machines.
pub fn step(plan: &Plan, state: &mut State, sample: &Sample, moved: impl FnMut(Moved)) -> Resolved {
    let resolved =
        resolve(plan, &mut state.sight, sample.tick_ms, sample.level, sample.temperature);
    let mut judged: Vec<Judged, { crate::alarm::PARTS_MAX }> = Vec::new();
    let digest = loads(plan, &[resolved], |_, part| {
        // As many parts as the plan holds, which is the capacity of the list.
        let _ = judged.push((part.utilisation_bound.lane(0), part.utilisation_inward.lane(0)));
    });
    judge(plan, state, sample.tick_ms, &resolved, &judged, (&digest, 0), moved);
    resolved
}

/// Moves the machines for one sample whose loads are known; the last stage of [`step`].
pub fn judge<const N: usize>(
    plan: &Plan,
    state: &mut State,
    tick_ms: u64,
    resolved: &Resolved,
    judged: &[Judged],
    (digest, lane): (&Digest<N>, usize),
    mut moved: impl FnMut(Moved),
) {
    state.fold_sample(digest, lane);
    // Before the first reading both full and empty are possible: that is "cannot see", not an
    // alarm, until the plan's time is over.
    let unread = resolved.class == ReadingClass::NotYetRead;
    let waited_ms = tick_ms.saturating_sub(state.sight.started_ms);
    let too_early = unread && waited_ms <= u64::from(plan.level.failed_after_ms);
    if !too_early {
        let thresholds = [
            (Threshold::Warn, Some(&plan.alarm.warn)),
            (Threshold::Alarm, Some(&plan.alarm.alarm)),
            (Threshold::Inward, plan.alarm.inward.as_ref()),
        ];
        for (index, &(outward, inward)) in (0_u8..).zip(judged) {
            for (threshold, settings) in thresholds {
                let (Some(id), Some(settings)) = (MachineId::of_part(index, threshold), settings)
                else {
                    continue;
                };
                let utilisation = if threshold == Threshold::Inward { inward } else { outward };
                let condition = Condition::of(utilisation, settings.utilisation, settings.deadband);
                if rests(state, id, condition) {
                    continue;
                }
                let settings = machine_settings(plan, settings);
                apply(state, id, &settings, condition, (tick_ms, utilisation), &mut moved);
            }
        }
    }
    if plan.filling.is_stated() {
        judge_time(plan, state, tick_ms, resolved, &mut moved);
    }
    for cause in FaultCause::ALL {
        let stands = fault_stands(resolved, cause);
        let condition = if stands { Condition::Stands } else { Condition::Gone };
        let id = MachineId::of_fault(cause);
        if rests(state, id, condition) {
            continue;
        }
        let settings = fault_settings(plan, cause);
        apply(state, id, &settings, condition, (tick_ms, 0.0), &mut moved);
    }
}

/// Share of the response time by which an alarm of the time to limit must clear it to go.
pub(super) const TIME_DEADBAND: f32 = 0.1;

/// Takes the volume in and judges the time to limit against the response time. While it is not
/// known, nothing is raised and nothing returns.
#[inline(never)]
fn judge_time(
    plan: &Plan,
    state: &mut State,
    tick_ms: u64,
    resolved: &Resolved,
    moved: &mut dyn FnMut(Moved),
) {
    if state.trend.take(plan, tick_ms, resolved) {
        state.hash = fold(state.hash, state.trend.bits());
    }
    #[expect(clippy::cast_precision_loss, reason = "a response time in ms, to 6e-8 of it")]
    let response_s = plan.alarm.response_time_ms as f32 * 1.0e-3;
    let (condition, share) = match state.time_to_limit(plan, resolved) {
        TimeToLimit::NotStated | TimeToLimit::NotKnown => (Condition::Between, 0.0),
        TimeToLimit::NotFilling => (Condition::Gone, 0.0),
        TimeToLimit::Filling { time_s, .. } => {
            // The millisecond keeps the share finite at the limit itself.
            let share = response_s / (time_s + 1.0e-3);
            (Condition::of(share, 1.0, TIME_DEADBAND), share)
        }
    };
    let id = MachineId::TIME_TO_LIMIT;
    if !rests(state, id, condition) {
        let settings = machine_settings(plan, &plan.alarm.alarm);
        apply(state, id, &settings, condition, (tick_ms, share), moved);
    }
}

/// A normal machine stays as it is unless its condition stands: most machines, most of the time.
#[inline]
fn rests(state: &State, id: MachineId, condition: Condition) -> bool {
    condition != Condition::Stands && state.machine(id).is_normal()
}

// One function in every image: it is called for the few machines that do not rest.
#[inline(never)]
fn apply(
    state: &mut State,
    id: MachineId,
    settings: &Settings,
    condition: Condition,
    (tick_ms, utilisation): (u64, f32),
    moved: &mut dyn FnMut(Moved),
) {
    let step = state.machine_mut(id).and_then(|m| m.sample(settings, condition, tick_ms));
    if let Some(step) = step {
        state.fold_move(id, step);
        moved(Moved { machine: id, step, utilisation });
    }
}

/// Settings of a part's machine.
pub(super) const fn machine_settings(plan: &Plan, threshold: &ThresholdPlan) -> Settings {
    Settings {
        on_delay_ms: threshold.on_delay_ms,
        off_delay_ms: threshold.off_delay_ms,
        latch: threshold.latch,
        sounds_again_after_ms: plan.alarm.sounds_again_after_ms,
    }
}

/// Settings of a fault's machine: a sensor may miss readings for the plan's time; a level at the
/// end of what the sensor can see, or above the shell, shows at once.
pub(super) const fn fault_settings(plan: &Plan, cause: FaultCause) -> Settings {
    let on_delay_ms = match cause {
        FaultCause::CurrentLow
        | FaultCause::CurrentHigh
        | FaultCause::WireBreak
        | FaultCause::Silent
        | FaultCause::Garbled
        | FaultCause::Unexpected
        | FaultCause::Exception
        | FaultCause::Converter => plan.level.failed_after_ms,
        FaultCause::AtRoof
        | FaultCause::Stale
        | FaultCause::Journal
        | FaultCause::JournalDamaged
        | FaultCause::Plan
        | FaultCause::AboveShell => 0,
    };
    let reported =
        matches!(cause, FaultCause::Journal | FaultCause::JournalDamaged | FaultCause::Plan);
    Settings {
        on_delay_ms,
        off_delay_ms: 0,
        latch: reported,
        sounds_again_after_ms: plan.alarm.sounds_again_after_ms,
    }
}

/// Whether a fault stands by this sample.
fn fault_stands(resolved: &Resolved, cause: FaultCause) -> bool {
    match cause {
        FaultCause::Stale => match resolved.class {
            // Nothing known at all is as bad as nothing known for too long.
            ReadingClass::Failed | ReadingClass::NotYetRead => true,
            ReadingClass::Valid | ReadingClass::Held | ReadingClass::Projected => false,
        },
        // Reported by the device once, see [`State::report`]; the latch keeps them.
        FaultCause::Journal | FaultCause::JournalDamaged | FaultCause::Plan => false,
        FaultCause::CurrentLow
        | FaultCause::CurrentHigh
        | FaultCause::WireBreak
        | FaultCause::Silent
        | FaultCause::Garbled
        | FaultCause::Unexpected
        | FaultCause::Exception
        | FaultCause::Converter
        | FaultCause::AtRoof
        | FaultCause::AboveShell => resolved.fault == Some(cause),
    }
}

impl State {
    /// The time to limit under a reading, by the volumes taken in so far.
    #[must_use]
    pub fn time_to_limit(&self, plan: &Plan, resolved: &Resolved) -> TimeToLimit {
        self.trend.time_to_limit(plan, self.sight.product, resolved)
    }

    /// A fault that the device found by itself and wrote to its journal (journal, plan). Its
    /// machine is raised at once and latches. Other causes follow from samples and are left alone
    /// here.
    pub fn report(
        &mut self,
        plan: &Plan,
        cause: FaultCause,
        tick_ms: u64,
        mut moved: impl FnMut(Moved),
    ) {
        let settings = fault_settings(plan, cause);
        if settings.latch {
            let id = MachineId::of_fault(cause);
            apply(self, id, &settings, Condition::Stands, (tick_ms, 0.0), &mut moved);
        }
    }

    /// Whether a press now would move anything.
    #[must_use]
    pub fn awaits_press(&self) -> bool {
        (0_u8..).zip(self.machines()).any(|(number, machine)| {
            let mut trial = *machine;
            MachineId::from_number(number).is_some() && trial.acknowledge(0).is_some()
        })
    }

    /// A person's press: acknowledges what is unacknowledged, resets latches whose condition is
    /// gone.
    pub fn acknowledge(&mut self, tick_ms: u64, mut moved: impl FnMut(Moved)) {
        for number in 0_u8..=u8::MAX {
            let Some(id) = MachineId::from_number(number) else { continue };
            let step = self.machine_mut(id).and_then(|machine| machine.acknowledge(tick_ms));
            if let Some(step) = step {
                self.fold_move(id, step);
                moved(Moved { machine: id, step, utilisation: 0.0 });
            }
        }
    }

    /// Milliseconds until the next pending delay expires; `None` when none runs. The device takes a
    /// sample then.
    #[must_use]
    pub fn next_expiry_ms(&self, plan: &Plan, tick_ms: u64) -> Option<u32> {
        let settings = |id: MachineId| match (id.part(), id.fault()) {
            (Some((_, Threshold::Warn)), _) => Some(machine_settings(plan, &plan.alarm.warn)),
            // The time to limit delays and latches as the alarm does.
            (Some((_, Threshold::Alarm)), _) | (None, None) => {
                Some(machine_settings(plan, &plan.alarm.alarm))
            }
            (Some((_, Threshold::Inward)), _) => {
                plan.alarm.inward.as_ref().map(|inward| machine_settings(plan, inward))
            }
            (None, Some(cause)) => Some(fault_settings(plan, cause)),
        };
        (0_u8..)
            .zip(self.machines())
            .filter(|(_, machine)| machine.pending)
            .filter_map(|(number, machine)| {
                let id = MachineId::from_number(number)?;
                machine.expires_in_ms(&settings(id)?, tick_ms)
            })
            .min()
    }
}
