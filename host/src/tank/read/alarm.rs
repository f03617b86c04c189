//! `[alarm]`.

use super::field::{Range, field};
use super::section::Section;
use crate::tank::model::{Alarms, Threshold};
use crate::units::Quantity::Time;

/// Longest delay or time that an alarm works with, s: one week.
const LONGEST_S: f64 = 604_800.0;
/// Longest window of the inflow, s: in it the device's ticks are exact.
const LONGEST_WINDOW_S: f64 = 4.0 * 3600.0;
const WRITE_THRESHOLD: &str = "{ utilisation = 0.85, deadband = 0.02, on_delay = \"10 s\", \
                               off_delay = \"60 s\" }";

pub(super) fn alarms(root: &mut Section<'_>) -> Option<Alarms> {
    let mut section = root.table("alarm", "[alarm] with warn, alarm and response_time")?;
    let span = section.span;
    let warn = section.need_table("warn", WRITE_THRESHOLD).and_then(threshold);
    let alarm = section.need_table("alarm", WRITE_THRESHOLD).and_then(threshold);
    let inward_given = section.item("inward").is_some();
    let inward = section.table("inward", WRITE_THRESHOLD).and_then(threshold);
    let response = section.need(field(
        "response_time",
        Time,
        Range::above(0.0, LONGEST_S),
        "\"15 min\", from the alarm until the filling has stopped",
    ));
    let again = section.take(field(
        "sounds_again_after",
        Time,
        Range::above(0.0, LONGEST_S),
        "\"10 min\", after an acknowledgement while the condition stands",
    ));
    let window = section.take(field(
        "inflow_window",
        Time,
        Range::between(1.0, LONGEST_WINDOW_S),
        "\"5 min\", over which the inflow is taken for the time to limit; it lags by as much",
    ));
    section.finish();
    if inward_given && inward.is_none() {
        return None;
    }
    Some(Alarms {
        warn: warn?,
        alarm: alarm?,
        inward,
        response_time_s: response?,
        inflow_window_s: window,
        sounds_again_after_s: again,
        span,
    })
}

fn threshold(mut section: Section<'_>) -> Option<Threshold> {
    let span = section.span;
    let utilisation =
        section.need_ratio("utilisation", Range::SHARE, "0.85, the share of the capacity");
    let deadband = section.need_ratio(
        "deadband",
        Range::between(0.0, 1.0),
        "0.02, how far below the threshold it has gone again",
    );
    let delays = Range::between(0.0, LONGEST_S);
    let on = section.need(field("on_delay", Time, delays, "\"10 s\", before it counts"));
    let off = section.need(field("off_delay", Time, delays, "\"60 s\", before it has gone"));
    let latch = section.flag("latch").is_some_and(|latch| latch.value);
    section.finish();
    Some(Threshold {
        utilisation: utilisation?,
        deadband: deadband?,
        on_delay_s: on?,
        off_delay_s: off?,
        latch,
        span,
    })
}
