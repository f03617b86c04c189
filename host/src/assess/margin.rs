//! The margin that the thresholds give, against the one that the times of the site need.
//!
//! Alarms judge the bound, so the uncertainty is in it already: only time is needed. From the
//! moment at which a bound reaches its threshold the level may go on at its highest rate for an
//! interval at rest, a reading with its retries, the on-delay, the time of a failed sensor and the
//! response time. A threshold is far enough away when the level, as the sensor sees it, has at
//! least that way left to where the bound reaches the capacity itself.

use super::desk::Desk;
use crate::inverse::{first_reached, held_above};
use crate::tank::{TankFile, Threshold};
use serde::Serialize;
use strake_core::plan::Plan;

/// A reading and its three retries, one a second, s.
const READING_S: f64 = 3.0;

/// The margin of the part that has the least to spare, and of each part.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Margin {
    /// What its thresholds give; none when no part reaches its capacity in this tank.
    pub given_m: Option<f64>,
    /// What the times need, at the highest rise (of an inward threshold: fall).
    pub needed_m: f64,
    /// Whether every part has enough.
    pub enough: bool,
    /// The parts that reach their capacity.
    pub per_part: Vec<PartMargin>,
}

/// The margin of one part in one direction.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct PartMargin {
    /// Its name.
    pub name: String,
    /// `outward` or `inward`.
    pub side: &'static str,
    /// Level at which its bound reaches the alarm threshold, as the sensor sees it.
    pub alarm_level_m: f64,
    /// Level at which its bound reaches the capacity, as the sensor sees it.
    pub limit_level_m: f64,
    /// From the one to the other.
    pub given_m: f64,
    /// What the times need.
    pub needed_m: f64,
    /// Whether it is enough.
    pub enough: bool,
}

/// The times between a crossing and the end of the filling, s.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Times {
    /// Interval at rest.
    pub idle_s: f64,
    /// A reading and its retries.
    pub reading_s: f64,
    /// Delay of the threshold.
    pub on_delay_s: f64,
    /// A sensor may fail just then.
    pub failed_after_s: f64,
    /// The site acts.
    pub response_s: f64,
}

impl Times {
    /// Of a threshold; `None` while the file does not state them all.
    #[must_use]
    pub fn of(file: &TankFile, threshold: &Threshold) -> Option<Self> {
        Some(Self {
            idle_s: file.logging.as_ref()?.idle_interval_s.value,
            reading_s: READING_S,
            on_delay_s: threshold.on_delay_s.value,
            failed_after_s: file.level.as_ref()?.failed_after_s?.value,
            response_s: file.alarm.as_ref()?.response_time_s.value,
        })
    }

    /// All of them.
    #[must_use]
    pub fn sum_s(&self) -> f64 {
        self.idle_s + self.reading_s + self.on_delay_s + self.failed_after_s + self.response_s
    }
}

/// The margins of a plan, with the liquid that it has on top; `None` while the file does not state
/// thresholds, times and the highest rise.
#[must_use]
pub fn margin(file: &TankFile, plan: &Plan) -> Option<Margin> {
    let alarms = file.alarm.as_ref()?;
    let outward_m = Times::of(file, &alarms.alarm)?.sum_s() * file.fill.highest_rise_m_s?.value;
    let mut parts = Vec::new();
    for (stated, part) in file.parts.iter().zip(&plan.parts) {
        let mut alone = plan.clone();
        alone.parts.clear();
        let _ = alone.parts.push(part.clone());
        let desk = Desk::of_plan(alone, file);
        let row = |side, alarm: f32, limit: f32, needed_m: f64| {
            let (alarm, limit) = (f64::from(alarm), f64::from(limit));
            let given_m = (limit - alarm).abs();
            PartMargin {
                name: stated.name().to_owned(),
                side,
                alarm_level_m: alarm,
                limit_level_m: limit,
                given_m,
                needed_m,
                enough: given_m >= needed_m,
            }
        };
        // A capacity that is not reached in this tank needs no margin.
        if let (true, Some(limit)) = (part.judged_outward(), first_reached(&desk, 1.0))
            && let Some(alarm) = first_reached(&desk, plan.alarm.alarm.utilisation)
        {
            parts.push(row("outward", alarm, limit, outward_m));
        }
        if let (true, Some(threshold), Some(stated)) =
            (part.judged_inward(), plan.alarm.inward, &alarms.inward)
            && let (Some(limit), Some(alarm)) =
                (held_above(&desk, 1.0), held_above(&desk, threshold.utilisation))
            && let Some(times) = Times::of(file, stated)
        {
            let needed_m = times.sum_s() * file.fill.highest_fall_m_s?.value;
            parts.push(row("inward", alarm, limit, needed_m));
        }
    }
    let spare = |one: &PartMargin| one.given_m - one.needed_m;
    let least = parts.iter().min_by(|a, b| spare(a).total_cmp(&spare(b)));
    Some(Margin {
        given_m: least.map(|one| one.given_m),
        needed_m: least.map_or(outward_m, |one| one.needed_m),
        enough: parts.iter().all(|one| one.enough),
        per_part: parts,
    })
}

/// Half-widths put together: added straight, and in quadrature (JCGM 100, 5.1.2, for quantities
/// that do not depend on each other).
#[must_use]
pub fn together(half_widths: &[f64]) -> (f64, f64) {
    let squares: f64 = half_widths.iter().map(|one| one * one).sum();
    (half_widths.iter().sum(), squares.sqrt())
}

#[cfg(test)]
mod tests;
