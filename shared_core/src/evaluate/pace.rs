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
//! for rounding and for a half-width that grows with the distance (up to 6 % of it).
//!
//! All loads, bounds and alarm conditions are monotone in the two ends, so **one evaluation of the
//! plan at these ends answers for every sample that is left out**: when it finds every condition
//! gone, at the fixed interval none of them would have stood either. So `T` is never longer than
//! (distance up to the nearest threshold) / highest rise nor (distance down) / highest fall, for
//! every kind of part, and no slope of a load is needed. It is tried at the idle interval or the
//! response time, the shorter, then halved at each further sample until it fits; below two
//! intervals the interval stays.
//!
//! `T` is a whole number of intervals, so the adaptive samples are a subset of the fixed ones and
//! the alarms of parts, and of a surface at the roof, come at the same samples. What the reach
//! cannot know shows up to `T` late: a sensor that fails, and a level that moves faster than the
//! plan's highest rates.
//!
//! **Time to limit.** It is never less than (distance up to the limit level) / highest rise. While
//! that stays above the response time, deadband included, until after the next sample and until the
//! trend of the volume has forgotten the long intervals, its alarm cannot stand either, and when it
//! can, the trend is the one of the fixed interval.
//!
//! A liquid that the plan knows may take the place of another at any time: densities are those of
//! all of them, at any temperature.
//!
//! Inputs are the plan and what [`super::step`] made of the samples since the last start or plan
//! change, all of which the journal holds.

use super::loads;
use super::step::TIME_DEADBAND;
use super::trend::REMEMBERED_WINDOWS;
use crate::lane::at_most;
use crate::liquid::Band;
use crate::plan::{LevelSensor, LoggingPlan, Plan, ThresholdPlan};
use crate::signal::{ReadingClass, Resolved, half_width, reach};

/// Shortest time in which a level shows that it rests, ms.
pub const REST_MS_MIN: u32 = 300_000;
/// Half-widths by which readings may lie further out than the highest rates carry the level.
const HALF_WIDTHS: f32 = 5.0;
/// Most samples that wait in RAM for longer than at the short interval.
const WAITING_AT_REST: u32 = 6;
/// Longest time that they wait, ms.
const WAIT_MS_MAX: u32 = 600_000;

/// What decides the next interval: a few bytes, new at each start and plan change.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Pace {
    /// Value that the level has stayed around, in the sensor's quantity.
    around: f32,
    /// Low bits of the tick since when it has. Once in 50 days a rest has to show itself anew.
    since_ms: u32,
    /// How far to look away, ms; 0 nothing is known yet.
    span_ms: u32,
    /// So far ahead no threshold is in reach.
    clear: bool,
}

impl Pace {
    /// Takes what a sample was resolved to; gives the time until the next one, ms: whole intervals.
    /// Pending delays are none of its concern: they schedule samples of their own.
    #[inline]
    pub fn next_ms(&mut self, plan: &Plan, resolved: &Resolved, tick_ms: u64) -> u32 {
        let interval_ms = plan.logging.interval_ms;
        #[expect(clippy::cast_possible_truncation, reason = "the low bits are wanted")]
        let tick_ms = tick_ms as u32;
        let seen = matches!(resolved.class, ReadingClass::Valid | ReadingClass::Held);
        let off = (resolved.estimate - self.around).abs();
        if !(seen && self.span_ms > 0 && off <= resolved.high - resolved.estimate) {
            *self = Self {
                around: resolved.estimate,
                since_ms: tick_ms,
                span_ms: plan.longest_ms(),
                clear: false,
            };
            return interval_ms;
        }
        let rested_ms = tick_ms.wrapping_sub(self.since_ms);
        if self.span_ms / 2 < interval_ms
            || rested_ms < REST_MS_MIN.max(plan.logging.idle_interval_ms)
        {
            return interval_ms;
        }
        if !self.clear {
            self.clear = is_clear(plan, resolved, self.around, self.span_ms);
        }
        if self.clear {
            self.span_ms
        } else {
            self.span_ms = plan.logging.whole_ms(self.span_ms / 2);
            interval_ms
        }
    }
}

/// Whether no alarm of a part is met by any reading of the next `ahead_ms`, deadbands included, nor
/// the roof by a sensor of the surface, nor the time to limit. What is not a number is met.
#[inline]
fn is_clear(plan: &Plan, resolved: &Resolved, around: f32, ahead_ms: u32) -> bool {
    let density = resolved.density.hull(plan.liquid.any_product());
    let (rise, fall) = reach(plan, density, ahead_ms);
    let lowest = around - fall;
    let room = HALF_WIDTHS * half_width(plan, lowest);
    let (low, high) = (lowest - room, around + rise + room);
    let ends = Resolved { estimate: around, low, high, density, ..*resolved };

    let gone = |threshold: &ThresholdPlan| threshold.utilisation - threshold.deadband;
    let outward = at_most(gone(&plan.alarm.warn), gone(&plan.alarm.alarm));
    let inward = plan.alarm.inward.as_ref().map_or(f32::MAX, gone);
    let mut clear = plan.level.sensor != LevelSensor::Surface || high < plan.shell_top_m;
    clear &= is_far_from_limit(plan, high);
    loads(plan, &[ends], |_, part| {
        clear &= part.utilisation_bound.lane(0) < outward;
        clear &= part.utilisation_inward.lane(0) < inward;
    });
    clear
}

/// Whether the alarm of the time to limit cannot stand until the trend has forgotten the intervals
/// before a reading of `high`, whatever product is confirmed.
fn is_far_from_limit(plan: &Plan, high: f32) -> bool {
    #[expect(clippy::cast_precision_loss, reason = "to 6e-8 of the time, and a tenth is added")]
    let [window_s, response_s] = [plan.filling.window_ms, plan.alarm.response_time_ms]
        .map(|time_ms| time_ms as f32 * 1.0e-3);
    let later_s = REMEMBERED_WINDOWS * window_s + (1.0 + TIME_DEADBAND) * response_s;
    let rise_m = plan.highest_rise_m_s * later_s;
    plan.limits_m().iter().enumerate().all(|(index, &limit_m)| {
        let estimate_kg_m3 = lightest_kg_m3(plan, index);
        let level_m =
            crate::liquid::level_m(plan, high, Band { estimate_kg_m3, ..plan.liquid.top });
        level_m + rise_m < limit_m
    })
}

/// Least density by which the level is estimated that goes with the limit level of this index
/// ([`Plan::state_filling`]); it gives the highest level.
fn lightest_kg_m3(plan: &Plan, index: usize) -> f32 {
    let crate::plan::LiquidPlan { top, products, .. } = &plan.liquid;
    match index.checked_sub(2).map(|product| products.get(product)) {
        Some(product) => product.unwrap_or(top).low_kg_m3,
        // While it is not known which product it is, no temperature moves the estimate.
        None if index == 0 && !products.is_empty() => top.estimate_kg_m3,
        None => top.low_kg_m3,
    }
}

impl Plan {
    /// Longest time between two samples, ms: the idle interval, never above the response time, in
    /// whole intervals.
    #[must_use]
    #[inline(never)]
    pub fn longest_ms(&self) -> u32 {
        self.logging.whole_ms(self.logging.idle_interval_ms.min(self.alarm.response_time_ms))
    }

    /// Longest time whose samples a sudden loss of power can take, ms: a wait and an interval.
    #[must_use]
    pub fn missing_ms_max(&self) -> u32 {
        let longest_ms = self.longest_ms();
        self.logging.wait_ms(longest_ms).saturating_add(longest_ms)
    }
}

impl LoggingPlan {
    /// The whole intervals in a time, at least one, ms.
    const fn whole_ms(&self, time_ms: u32) -> u32 {
        match time_ms.checked_div(self.interval_ms) {
            None | Some(0) => self.interval_ms,
            Some(count) => count.saturating_mul(self.interval_ms),
        }
    }

    /// How long a sample may wait in RAM when the next one comes after `next_ms`, ms: as many
    /// samples as at the short interval, six at most, no longer than 10 minutes.
    #[must_use]
    #[inline(never)]
    pub fn wait_ms(&self, next_ms: u32) -> u32 {
        let samples = self.flush_after_ms.checked_div(self.interval_ms).unwrap_or(0);
        let wait_ms = samples.min(WAITING_AT_REST).saturating_mul(next_ms);
        wait_ms.min(WAIT_MS_MAX).max(self.flush_after_ms)
    }
}

#[cfg(test)]
mod tests;
