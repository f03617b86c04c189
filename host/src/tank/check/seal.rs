//! What a sealed plan needs beyond a calculation at the desk.

use crate::tank::finding::{Code, Finding, Span};
use crate::tank::model::TankFile;

/// One finding for each thing missing.
pub(crate) fn missing(file: &TankFile) -> Vec<Finding> {
    let mut found = Vec::new();
    let end = Span { start: file.text.len(), end: file.text.len() };
    let mut need = |present: bool, span: Span, what: &str, write: &str| {
        if !present {
            found.push(Finding {
                code: Code::NeededForSeal,
                span,
                message: format!("{what} is missing, the device needs it"),
                hint: format!("write {write}"),
            });
        }
    };
    let fill = &file.fill;
    let rise = fill.highest_rise_m_s.is_some();
    need(rise, end, "`highest_rise`", "highest_rise = \"0.2 mm/s\" in [fill]");
    let fall = fill.highest_fall_m_s.is_some();
    need(fall, end, "`highest_fall`", "highest_fall = \"0.3 mm/s\" in [fill]");
    need(fill.closed.is_some(), end, "`closed`", "closed = false, or true, in [fill]");
    // The projection of a lost level is capped somewhere.
    let capped = fill.overflow_m.is_some() || file.vessel.height_m().is_some();
    need(capped, end, "`overflow`", "overflow = \"9.3 m\" in [fill]");
    match &file.level {
        None => {
            let write = "[level] with sensor, at, uncertainty and signal";
            need(false, end, "table [level]", write);
        }
        Some(level) => {
            let write = "signal = { current_loop = [..] } or { modbus = {..} } in [level]";
            need(level.signal.is_some(), level.span, "`signal`", write);
            let write = "failed_after = \"60 s\" in [level]";
            need(level.failed_after_s.is_some(), level.span, "`failed_after`", write);
        }
    }
    match &file.alarm {
        None => need(false, end, "table [alarm]", "[alarm] with warn, alarm and response_time"),
        Some(alarm) => {
            let write = "sounds_again_after = \"10 min\" in [alarm]";
            let again = alarm.sounds_again_after_s.is_some();
            need(again, alarm.span, "`sounds_again_after`", write);
            let rated = file.parts.iter().any(|part| !part.capacity_inward().is_empty());
            let write = "inward = { utilisation = 0.8, .. } in [alarm]: a part has capacity_inward";
            need(alarm.inward.is_some() || !rated, alarm.span, "`inward`", write);
        }
    }
    let write = "[logging] with interval, idle_interval and flush_after";
    need(file.logging.is_some(), end, "table [logging]", write);
    found
}
