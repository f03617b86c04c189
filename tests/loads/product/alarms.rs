//! Transitions of one alarm, by the core's table.

use strake_core::alarm::{AlarmEvent, AlarmState};
use strake_oracle::cases::{Answer, Reason, Row};

pub(super) fn answer(row: &Row) -> Result<Answer, Reason> {
    let from = match row.get("from") {
        Some("normal") => AlarmState::Normal,
        Some("unacknowledged") => AlarmState::Unacknowledged,
        Some("acknowledged") => AlarmState::Acknowledged,
        _ => return Err("a state that the table does not name"),
    };
    let event = match row.get("event") {
        Some("return") => AlarmEvent::Return,
        Some("shelve") => AlarmEvent::Shelve,
        Some("suppress") => AlarmEvent::Suppress,
        Some("remove_from_service") => AlarmEvent::RemoveFromService,
        _ => return Err("an event that the table does not name"),
    };
    let to = from.after(event, false).ok_or("the table has no such transition")?;
    let name = match to {
        AlarmState::Normal => "normal",
        AlarmState::Unacknowledged => "unacknowledged",
        AlarmState::Acknowledged => "acknowledged",
        AlarmState::ReturnedUnacknowledged => "rtn_unacknowledged",
        AlarmState::LatchedUnacknowledged => "latched_unacknowledged",
        AlarmState::LatchedAcknowledged => "latched_acknowledged",
        AlarmState::Shelved => "shelved",
        AlarmState::SuppressedByDesign => "suppressed_by_design",
        AlarmState::OutOfService => "out_of_service",
    };
    Ok(Answer::Text(name.into()))
}
