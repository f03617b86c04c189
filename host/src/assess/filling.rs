//! How long the tank takes to its limits at an inflow that is given, through its volume: the level
//! of a lying tank rises unevenly, and a load grows faster than the level.

use super::desk::Desk;
use super::document::PartRow;
use crate::inverse::first_reached;
use crate::tank::TankFile;
use serde::Serialize;

/// The answer.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
pub struct Filling {
    /// `filling`, or `not_filling` when nothing flows in.
    pub state: &'static str,
    /// As given.
    pub inflow_m3_s: f64,
    /// To the lowest calculated limit level of the parts; none when no part is judged.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub to_limit: Option<Way>,
    /// To where the first bound, as the sensor sees it, reaches its capacity: what the device
    /// counts down to.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub to_bound: Option<Way>,
    /// To where the first bound reaches the alarm threshold.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub to_alarm: Option<Way>,
    /// To the overflow.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub to_overflow: Option<Way>,
    /// From the alarm until the filling has stopped.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub response_time_s: Option<f64>,
    /// Whether the time from the alarm to the bound's limit is at least the response time.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub enough: Option<bool>,
}

/// What is left to a level.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
pub struct Way {
    /// The level.
    pub level_m: f64,
    /// Volume up to it; none is left when it has been passed.
    pub volume_m3: f64,
    /// None when nothing flows in.
    pub time_s: Option<f64>,
}

/// At a level and an inflow; `None` where the file describes no volume.
pub(super) fn filling(
    file: &TankFile,
    desk: &Desk,
    parts: &[PartRow],
    (level_m, inflow_m3_s, alarm_level_m): (f64, f64, Option<f32>),
) -> Option<Filling> {
    let now_m3 = file.volume_m3(level_m)?;
    let flows = inflow_m3_s > 0.0;
    let way = |to_m: f64| {
        let volume_m3 = (file.volume_m3(to_m)? - now_m3).max(0.0);
        Some(Way { level_m: to_m, volume_m3, time_s: flows.then(|| volume_m3 / inflow_m3_s) })
    };
    let limits = parts.iter().filter_map(|row| row.judgement.limits.as_ref()?.limit_level_m);
    let to = |level_m: Option<f32>| level_m.and_then(|level_m| way(level_m.into()));
    let bound_m = first_reached(desk, 1.0);
    let response_time_s = file.alarm.as_ref().map(|alarm| alarm.response_time_s.value);
    let from_alarm_m3 = alarm_level_m.zip(bound_m).and_then(|(alarm_m, bound_m)| {
        Some(file.volume_m3(bound_m.into())? - file.volume_m3(alarm_m.into())?)
    });
    let enough = from_alarm_m3.zip(response_time_s);
    Some(Filling {
        state: if flows { "filling" } else { "not_filling" },
        inflow_m3_s,
        to_limit: to(limits.min_by(f32::total_cmp)),
        to_bound: to(bound_m),
        to_alarm: to(alarm_level_m),
        to_overflow: file.fill.overflow_m.and_then(|level| way(level.value)),
        response_time_s,
        enough: enough.filter(|_| flows).map(|(m3, time_s)| m3 / inflow_m3_s >= time_s),
    })
}
