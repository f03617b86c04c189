//! The table of transitions, written out a second time by state and event.

use super::AlarmState as S;
use super::{AlarmEvent as E, AlarmState};

const STATES: [S; 9] = [
    S::Normal,
    S::Unacknowledged,
    S::Acknowledged,
    S::ReturnedUnacknowledged,
    S::LatchedUnacknowledged,
    S::LatchedAcknowledged,
    S::Shelved,
    S::SuppressedByDesign,
    S::OutOfService,
];

/// Per event the state after each of [`STATES`], as its number; `-` where there is no transition.
/// Read off the alarm state diagram of ISA-18.2.
const TABLE: [(E, bool, &str); 14] = [
    (E::Raise, false, "1--111---"),
    (E::Raise, true, "1--111---"),
    (E::Return, false, "-30------"),
    (E::Return, true, "-45------"),
    (E::Acknowledge, false, "-2-05----"),
    (E::Acknowledge, true, "-2-05----"),
    (E::Reset, false, "-----0---"),
    (E::SoundAgain, false, "--1------"),
    (E::Shelve, false, "666666---"),
    (E::Unshelve, false, "------0--"),
    (E::Suppress, false, "777777---"),
    (E::Unsuppress, false, "-------0-"),
    (E::RemoveFromService, false, "888888---"),
    (E::ReturnToService, false, "--------0"),
];

#[test]
fn every_state_and_event_is_the_diagram_s() {
    for (event, latch, row) in TABLE {
        for (state, expected) in STATES.into_iter().zip(row.chars()) {
            let expected = expected.to_digit(10).map(|number| STATES[number as usize]);
            assert_eq!(state.after(event, latch), expected, "{state:?} {event:?} latch {latch}");
        }
    }
}

/// alarm-003, 005 to 008, 010 and 011: alarm state diagram of ISA-18.2.
#[test]
fn published_transitions() {
    assert_eq!(S::Unacknowledged.after(E::Return, false), Some(S::ReturnedUnacknowledged));
    for from in [S::Normal, S::Unacknowledged, S::Acknowledged] {
        assert_eq!(from.after(E::Shelve, false), Some(S::Shelved));
    }
    assert_eq!(S::Normal.after(E::Suppress, false), Some(S::SuppressedByDesign));
    for from in [S::Normal, S::Unacknowledged] {
        assert_eq!(from.after(E::RemoveFromService, false), Some(S::OutOfService));
    }
}

#[test]
fn numbers_stand_for_one_state_each() {
    for (number, state) in (0_u8..).zip(STATES) {
        assert_eq!(state.number(), number);
        assert_eq!(AlarmState::from_number(number), Some(state));
    }
    for number in 9..=u8::MAX {
        assert_eq!(AlarmState::from_number(number), None);
    }
}
