//! Numbers of the link in words: one for scripts, one for people.

use strake_core::alarm::{AlarmState, FaultCause};

/// A state's name for scripts.
pub(super) fn state_name(number: u8) -> &'static str {
    match AlarmState::from_number(number) {
        Some(AlarmState::Normal) => "normal",
        Some(AlarmState::Unacknowledged) => "unacknowledged",
        Some(AlarmState::Acknowledged) => "acknowledged",
        Some(AlarmState::ReturnedUnacknowledged) => "returned_unacknowledged",
        Some(AlarmState::LatchedUnacknowledged) => "latched_unacknowledged",
        Some(AlarmState::LatchedAcknowledged) => "latched_acknowledged",
        Some(AlarmState::Shelved) => "shelved",
        Some(AlarmState::SuppressedByDesign) => "suppressed_by_design",
        Some(AlarmState::OutOfService) => "out_of_service",
        None => "unknown",
    }
}

/// A state by its name, for people.
#[must_use]
pub fn state_words(name: &str) -> &'static str {
    match name {
        "normal" => "normal",
        "unacknowledged" => "stands, not acknowledged",
        "acknowledged" => "stands, acknowledged",
        "returned_unacknowledged" => "gone, not acknowledged",
        "latched_unacknowledged" => "gone, latched, not acknowledged",
        "latched_acknowledged" => "gone, latched, waits for its reset",
        "shelved" => "shelved",
        "suppressed_by_design" => "suppressed",
        "out_of_service" => "out of service",
        _ => "in a state unknown here",
    }
}

/// A fault cause by its number, for people.
#[must_use]
pub fn cause_words(number: usize) -> String {
    let cause = u8::try_from(number).ok().and_then(FaultCause::from_number);
    cause.map_or_else(|| format!("fault cause {number}"), |cause| cause.to_string())
}

pub(super) fn health_name(output: u8) -> &'static str {
    match output {
        0 => "healthy",
        1 => "cannot_see",
        2 => "act_now",
        _ => "unknown",
    }
}

pub(super) fn reading_name(class: u8) -> &'static str {
    match class {
        0 => "not_yet_read",
        1 => "valid",
        2 => "held",
        3 => "projected",
        4 => "failed",
        _ => "unknown",
    }
}
