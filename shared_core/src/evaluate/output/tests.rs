//! What the box shows for every machine and state.

use super::{Output, Rhythm};
use crate::alarm::{AlarmState, FaultCause, MachineId, Threshold};
use crate::evaluate::State;

fn seeing() -> State {
    let mut state = State::default();
    state.sight.last_level = Some((0, 0));
    state
}

fn shown(machines: &[(MachineId, AlarmState)]) -> (bool, Rhythm, bool) {
    let mut state = seeing();
    for &(id, alarm) in machines {
        state.machine_mut(id).unwrap().state = alarm;
    }
    let output = Output::of(&state);
    (output.contact_closed, output.rhythm, output.sounding)
}

#[test]
fn every_state_of_parts_and_faults() {
    use AlarmState as S;
    let part = MachineId::of_part(31, Threshold::Inward).unwrap();
    let fault = MachineId::of_fault(FaultCause::AboveShell);
    for (machine, rhythm) in [(part, Rhythm::ActNow), (fault, Rhythm::CannotSee)] {
        for (state, expected) in [
            (S::Normal, (true, Rhythm::Healthy, false)),
            (S::Unacknowledged, (false, rhythm, true)),
            (S::Acknowledged, (false, rhythm, false)),
            (S::ReturnedUnacknowledged, (true, rhythm, false)),
            (S::LatchedUnacknowledged, (false, rhythm, true)),
            (S::LatchedAcknowledged, (false, rhythm, false)),
        ] {
            assert_eq!(shown(&[(machine, state)]), expected, "{state:?}");
        }
    }
    // "Act now" outranks "cannot see", in whatever order they stand.
    let early = MachineId::of_part(0, Threshold::Warn).unwrap();
    let both = [(early, S::Acknowledged), (fault, S::Unacknowledged)];
    assert_eq!(shown(&both), (false, Rhythm::ActNow, true));
}

#[test]
fn nothing_read_is_never_healthy() {
    let output = Output::of(&State::default());
    assert_eq!((output.contact_closed, output.rhythm), (false, Rhythm::CannotSee));
    let mut state = seeing();
    assert_eq!(Output::of(&state).rhythm, Rhythm::Healthy);
    state.restart(0);
    assert_eq!(Output::of(&state).rhythm, Rhythm::CannotSee);
}
