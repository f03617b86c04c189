//! How long the device may look away: the adaptive interval.
//!
//! **Rest.** The level is at rest once it has stayed within the sensor's half-width `u` of one
//! value for 5 minutes and for the idle interval. What moves slower than that differs by less than
//! `u` from one idle sample to the next, so the log loses nothing that the sensor can tell.
//!
//! **Reach.** At rest the next sample may be `T` away when no threshold can be met before it. With
//! the value `x` that the rest is counted around, every reading that a sensor within its
//! uncertainty can give until then lies, bound included, between
//!
//! ```text
//! x - 4 u - fall T - swing   and   x + 4 u + rise T + swing
//! ```
//!
//! `u` for the distance from `x` now, twice `u` for the errors of this reading and of that one, `u`
//! for the half-width of that one; `rise` and `fall` the plan's highest rates, for a head sensor
//! times the heaviest liquid's weight; `swing` what the gas may add to a head. A fifth `u` is room
//! for rounding and for a half-width that grows with the distance (up to 6 % of it). All loads,
//! bounds and alarm conditions are monotone in the two ends, so **one evaluation of the plan at
//! these ends answers for every sample that is left out**: when it finds every condition gone, at
//! the fixed interval none of them would have stood either. `T` is never longer than (distance up to
//! the nearest threshold) / highest rise nor (distance down) / highest fall, exactly, for every kind
//! of part, and needs no slope of any load. It is tried at the idle interval or the response time,
//! the shorter, then halved at each further sample until it fits; below two intervals the interval
//! stays.
//!
//! `T` is a whole number of intervals, so adaptive samples are a subset of the fixed ones and the
//! alarms of parts come at the same samples. What the reach cannot know shows up to `T` late: a
//! sensor that fails, and a level that moves faster than the plan's highest rates.
//!
//! Inputs are the plan and what [`super::step`] made of the samples since the last start, plan or
//! product change, all of which the journal holds.

use super::loads_of_one;
use crate::alarm::Condition;
use crate::plan::{LoggingPlan, Plan};
use crate::signal::{ReadingClass, Resolved, Sight, outlook};

/// Shortest time in which a level shows that it rests, ms.
const REST_MS_MIN: u32 = 300_000;
/// Most samples that wait in RAM for longer than at the short interval.
const WAITING_AT_REST: u32 = 6;
/// Longest time that they wait, ms.
const WAIT_MS_MAX: u32 = 600_000;

/// What decides the next interval: a few bytes, new at each start, plan or product change.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Pace {
    /// Value that the level has stayed around, in the sensor's quantity.
    around: f32,
    /// Tick since when it has.
    since_ms: u64,
    /// Intervals to look ahead; 0 nothing is known yet.
    beats: u32,
    /// So far ahead no threshold is in reach.
    clear: bool,
    /// Product that this holds for.
    product: Option<u8>,
}

impl Pace {
    /// Takes what a sample was resolved to; gives the number of intervals until the next one, at
    /// least 1. Pending delays are none of its concern: they schedule samples of their own.
    #[inline(never)]
    pub fn beats(&mut self, plan: &Plan, sight: &Sight, resolved: &Resolved, tick_ms: u64) -> u32 {
        let longest = plan.longest_beats();
        let seen = matches!(resolved.class, ReadingClass::Valid | ReadingClass::Held)
            && resolved.fault.is_none();
        let off = (resolved.estimate - self.around).abs();
        let rests = seen
            && off <= resolved.high - resolved.estimate
            && self.beats > 0
            && self.product == sight.product;
        if !rests {
            *self = Self {
                around: resolved.estimate,
                since_ms: tick_ms,
                beats: if seen { longest } else { 0 },
                clear: false,
                product: sight.product,
            };
            return 1;
        }
        let rest_ms = REST_MS_MIN.max(plan.logging.idle_interval_ms);
        if self.beats < 2 || tick_ms.saturating_sub(self.since_ms) < u64::from(rest_ms) {
            return 1;
        }
        if !self.clear {
            let ahead_ms = self.beats.saturating_mul(plan.logging.interval_ms);
            self.clear = is_clear(plan, &outlook(plan, sight, resolved, self.around, ahead_ms));
        }
        if self.clear {
            self.beats
        } else {
            self.beats /= 2;
            1
        }
    }
}

/// Whether no alarm of a part and no limit of the sensor is met under these bounds, deadbands
/// included.
fn is_clear(plan: &Plan, outlook: &Resolved) -> bool {
    let alarm = &plan.alarm;
    let mut clear = outlook.fault.is_none();
    loads_of_one(plan, outlook, &mut |_, part| {
        let (outward, inward) = (part.utilisation_bound.lane(0), part.utilisation_inward.lane(0));
        let judged = [
            (outward, Some(&alarm.warn)),
            (outward, Some(&alarm.alarm)),
            (inward, alarm.inward.as_ref()),
        ];
        for (utilisation, threshold) in judged {
            clear &= threshold.is_none_or(|threshold| {
                Condition::of(utilisation, threshold.utilisation, threshold.deadband)
                    == Condition::Gone
            });
        }
    });
    clear
}

impl Plan {
    /// Intervals in the longest time between two samples: the idle interval, never above the
    /// response time; at least 1.
    #[must_use]
    pub fn longest_beats(&self) -> u32 {
        let most_ms = self.logging.idle_interval_ms.min(self.alarm.response_time_ms);
        most_ms.checked_div(self.logging.interval_ms).unwrap_or(1).max(1)
    }

    /// Longest time whose samples a sudden loss of power can take, ms: a wait and an interval.
    #[must_use]
    pub fn missing_ms_max(&self) -> u32 {
        let beats = self.longest_beats();
        self.logging.wait_ms(beats).saturating_add(beats.saturating_mul(self.logging.interval_ms))
    }
}

impl LoggingPlan {
    /// How long a sample may wait in RAM when the next one comes after `beats` intervals, ms: as
    /// many samples as at the short interval, six at most, no longer than 10 minutes.
    #[must_use]
    pub fn wait_ms(&self, beats: u32) -> u32 {
        let samples = self.flush_after_ms.checked_div(self.interval_ms).unwrap_or(0);
        let waiting = samples.min(WAITING_AT_REST).saturating_mul(beats);
        waiting.saturating_mul(self.interval_ms).min(WAIT_MS_MAX).max(self.flush_after_ms)
    }
}

#[cfg(test)]
mod tests;
