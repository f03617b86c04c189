//! Thresholds and times against each other.

use crate::tank::finding::Code;
use crate::tank::model::{Logging, Threshold};
use crate::tank::read::Draft;
use crate::tank::read::section::Sink;
use crate::units::Quantity::Time;
use crate::units::format_si;

pub(super) fn thresholds(draft: &Draft, sink: &Sink) {
    let Some(alarms) = &draft.alarm else { return };
    let inward = alarms.inward.as_ref().map(|inward| ("inward", inward));
    for (key, threshold) in
        [("warn", &alarms.warn), ("alarm", &alarms.alarm)].into_iter().chain(inward)
    {
        deadband(key, threshold, sink);
    }
    let (warn, alarm) = (alarms.warn.utilisation, alarms.alarm.utilisation);
    if warn.value >= alarm.value {
        let message = format!("`warn` is at {}, not below `alarm` at {}", warn.value, alarm.value);
        let hint = "a warning comes before the alarm: lower the one or raise the other";
        sink.report(Code::AlarmOrder, warn.span, message, hint);
    }
    let inward_rated = draft.parts.iter().any(|part| !part.capacity_inward().is_empty());
    if let Some(inward) = alarms.inward.as_ref().filter(|_| draft.parts_complete && !inward_rated) {
        let message = "`inward` in [alarm] has nothing to watch: no part has a capacity_inward";
        let hint = "give the part a capacity_inward, or remove inward";
        sink.report(Code::AlarmOrder, inward.span, message, hint);
    }
}

fn deadband(key: &str, threshold: &Threshold, sink: &Sink) {
    let (band, at) = (threshold.deadband, threshold.utilisation);
    if band.value >= at.value {
        let message = format!(
            "`deadband` of `{key}` is {}, not below its utilisation, {}: it would never go out",
            band.value, at.value
        );
        sink.report(Code::AlarmOrder, band.span, message, "write a small share, as 0.02");
    }
}

/// Four readings at least lie in the window of the inflow, also at rest.
fn window(draft: &Draft, logging: &Logging, sink: &Sink) {
    let Some(window) = draft.alarm.as_ref().and_then(|alarms| alarms.inflow_window_s) else {
        return;
    };
    let least_s = Logging::INTERVALS_IN_WINDOW * logging.idle_interval_s.value;
    if window.value < least_s {
        let message = format!(
            "`inflow_window` in [alarm] is {}, three times `idle_interval` are {}",
            format_si(window.value, Time),
            format_si(least_s, Time)
        );
        let hint = "widen the window, or sample more often at rest: a rate needs four readings";
        sink.report(Code::Interval, window.span, message, hint);
    }
}

pub(super) fn logging(draft: &Draft, sink: &Sink) {
    let Some(logging) = &draft.logging else { return };
    window(draft, logging, sink);
    let (moving, idle) = (logging.interval_s, logging.idle_interval_s);
    if idle.value < moving.value {
        let message = format!(
            "`idle_interval` in [logging] is {}, below `interval`, {}",
            format_si(idle.value, Time),
            format_si(moving.value, Time)
        );
        let hint = "at rest the device samples less often, never more often";
        sink.report(Code::Interval, idle.span, message, hint);
    }
}
