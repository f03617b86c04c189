//! The machine over every state, condition, latch and delay; then delays, presses and time.

use super::{Condition, Machine, Move, Settings};
use crate::alarm::AlarmState as S;
use crate::journal::entry::TransitionCause as Cause;
use proptest::prelude::*;

const CONDITIONS: [Condition; 3] = [Condition::Stands, Condition::Between, Condition::Gone];

const fn settings(on_delay_ms: u32, off_delay_ms: u32, latch: bool) -> Settings {
    Settings { on_delay_ms, off_delay_ms, latch, sounds_again_after_ms: 1_000_000 }
}

const fn in_state(state: S) -> Machine {
    Machine { state, pending: false, since_ms: 0, entered_ms: 0 }
}

/// For each state: after the condition stands, is between, is gone (without and with latch), and
/// after a press. `-`: it stays. Alarm state diagram of ISA-18.2; hidden alarms do not move.
const TABLE: [&str; 9] = [
    "1----", // normal
    "--342", // unacknowledged
    "--05-", // acknowledged
    "1---0", // returned unacknowledged
    "1---5", // latched unacknowledged
    "1---0", // latched acknowledged
    "-----", // shelved
    "-----", // suppressed by design
    "-----", // out of service
];

#[test]
fn every_state_condition_press_latch_and_delay() {
    for (number, row) in (0_u8..).zip(TABLE) {
        let state = S::from_number(number).unwrap();
        let columns: Vec<Option<S>> = row
            .bytes()
            .map(|c| c.is_ascii_digit().then(|| S::from_number(c - b'0').unwrap()))
            .collect();
        for latch in [false, true] {
            let gone = columns[if latch { 3 } else { 2 }];
            for (condition, expected) in CONDITIONS.into_iter().zip([columns[0], columns[1], gone])
            {
                for delay_ms in [0, 1, 5_000] {
                    sample_moves(state, condition, settings(delay_ms, delay_ms, latch), expected);
                }
            }
        }
        let pressed = in_state(state).acknowledge(70);
        assert_eq!(pressed.map(|step| (step.from, step.to)), columns[4].map(|to| (state, to)));
    }
}

fn sample_moves(state: S, condition: Condition, settings: Settings, expected: Option<S>) {
    let delay_ms = u64::from(settings.on_delay_ms);
    let mut machine = in_state(state);
    let what = format!("{state:?} {condition:?} {settings:?}");
    if delay_ms > 0 {
        assert_eq!(machine.sample(&settings, condition, 100), None, "{what}");
        assert_eq!(machine.sample(&settings, condition, 100 + delay_ms - 1), None, "{what}");
        assert_eq!(machine.state, state, "{what}");
    }
    let step = machine.sample(&settings, condition, 100 + delay_ms);
    assert_eq!(step.map(|step| (step.from, step.to)), expected.map(|to| (state, to)), "{what}");
    assert_eq!(machine.state, expected.unwrap_or(state), "{what}");
    let cause = if condition == Condition::Stands { Cause::Raised } else { Cause::Returned };
    assert!(step.is_none_or(|step| step.cause == cause), "{what}");
}

#[test]
fn what_is_not_a_number_stands() {
    assert_eq!(Condition::of(f32::NAN, 0.9, 0.02), Condition::Stands);
    assert_eq!(Condition::of(0.9, 0.9, 0.02), Condition::Stands);
    assert_eq!(Condition::of(0.899, 0.9, 0.02), Condition::Between);
    assert_eq!(Condition::of(0.88, 0.9, 0.02), Condition::Between);
    assert_eq!(Condition::of(0.879, 0.9, 0.02), Condition::Gone);
}

#[test]
fn a_delay_counts_from_the_first_sample_and_not_past_a_gap() {
    let settings = settings(5_000, 3_000, false);
    let mut machine = Machine::default();
    assert_eq!(machine.sample(&settings, Condition::Stands, 10_000), None);
    assert_eq!(machine.expires_in_ms(&settings, 11_000), Some(4_000));
    assert_eq!(machine.sample(&settings, Condition::Between, 12_000), None);
    assert_eq!(machine.expires_in_ms(&settings, 12_000), None);
    assert_eq!(machine.sample(&settings, Condition::Stands, 13_000), None);
    assert_eq!(machine.sample(&settings, Condition::Stands, 17_999), None);
    let raised = machine.sample(&settings, Condition::Stands, 18_000);
    assert_eq!(raised.map(|step| step.to), Some(S::Unacknowledged));
    // The deadband keeps an alarm, and its off-delay starts anew.
    assert_eq!(machine.sample(&settings, Condition::Gone, 20_000), None);
    assert_eq!(machine.sample(&settings, Condition::Between, 22_999), None);
    assert_eq!(machine.sample(&settings, Condition::Gone, 23_000), None);
    assert_eq!(machine.expires_in_ms(&settings, 25_000), Some(1_000));
    let returned = machine.sample(&settings, Condition::Gone, 26_000);
    assert_eq!(returned.map(|step| step.to), Some(S::ReturnedUnacknowledged));
}

#[test]
fn a_press_does_not_restart_the_off_delay() {
    let settings = settings(0, 60_000, false);
    let mut machine = Machine::default();
    machine.sample(&settings, Condition::Stands, 0);
    machine.sample(&settings, Condition::Gone, 10_000);
    assert!(machine.acknowledge(40_000).is_some());
    assert_eq!(machine.expires_in_ms(&settings, 40_000), Some(30_000));
    let returned = machine.sample(&settings, Condition::Gone, 70_000);
    assert_eq!(returned.map(|step| step.to), Some(S::Normal));
}

#[test]
fn presses_do_not_postpone_the_next_alarm() {
    let settings = settings(10_000, 0, true);
    let mut machine = in_state(S::LatchedUnacknowledged);
    machine.sample(&settings, Condition::Stands, 1_000);
    assert!(machine.acknowledge(8_000).is_some());
    assert!(machine.acknowledge(9_000).is_some());
    assert_eq!(machine.state, S::Normal);
    let raised = machine.sample(&settings, Condition::Stands, 11_000);
    assert_eq!(raised.map(|step| step.to), Some(S::Unacknowledged));
}

#[test]
fn delays_run_through_the_wrap_of_the_tick() {
    let settings = settings(5_000, 0, false);
    let wrap = u64::from(u32::MAX) + 1;
    let mut machine = Machine::default();
    assert_eq!(machine.sample(&settings, Condition::Stands, 3 * wrap - 2_000), None);
    assert_eq!(machine.expires_in_ms(&settings, 3 * wrap + 1_000), Some(2_000));
    assert_eq!(machine.sample(&settings, Condition::Stands, 3 * wrap + 2_999), None);
    assert!(machine.sample(&settings, Condition::Stands, 3 * wrap + 3_000).is_some());
}

#[test]
fn an_acknowledged_condition_sounds_again_and_a_start_counts_anew() {
    let settings = Settings { sounds_again_after_ms: 600_000, ..settings(0, 0, false) };
    let mut machine = Machine::default();
    machine.sample(&settings, Condition::Stands, 0);
    machine.acknowledge(100_000);
    assert_eq!(machine.sample(&settings, Condition::Stands, 699_999), None);
    let again = machine.sample(&settings, Condition::Between, 700_000);
    let expected = Move { from: S::Acknowledged, to: S::Unacknowledged, cause: Cause::SoundsAgain };
    assert_eq!(again, Some(expected));

    machine.acknowledge(800_000);
    machine.restart(50);
    assert_eq!(machine.state, S::Acknowledged);
    assert_eq!(machine.sample(&settings, Condition::Stands, 600_049), None);
    assert!(machine.sample(&settings, Condition::Stands, 600_050).is_some());
}

#[test]
fn sounding_again_does_not_restart_the_off_delay() {
    let settings = Settings { sounds_again_after_ms: 50_000, ..settings(0, 60_000, false) };
    let mut machine = Machine::default();
    machine.sample(&settings, Condition::Stands, 0);
    machine.acknowledge(0);
    machine.sample(&settings, Condition::Gone, 10_000);
    assert!(machine.sample(&settings, Condition::Gone, 50_000).is_some());
    let returned = machine.sample(&settings, Condition::Gone, 70_000);
    assert_eq!(returned.map(|step| step.to), Some(S::ReturnedUnacknowledged));
}

/// A count between the deadband's two sides, at any pace: as long as the alarm has not returned, an
/// acknowledged one sounds again in time.
#[test]
fn chattering_cannot_postpone_sounding_again() {
    proptest!(|(conditions in prop::collection::vec(0_usize..3, 80))| {
        let settings = Settings { sounds_again_after_ms: 300_000, ..settings(0, 60_000, true) };
        let mut machine = Machine::default();
        machine.sample(&settings, Condition::Stands, 0);
        machine.acknowledge(5_000);
        let mut gone_since = None;
        for (tick_ms, condition) in (10_000..).step_by(10_000).zip(conditions) {
            let condition = CONDITIONS[condition];
            gone_since = match (condition, gone_since) {
                (Condition::Gone, None) => Some(tick_ms),
                (Condition::Gone, since) => since,
                _ => None,
            };
            let returned = gone_since.is_some_and(|since| tick_ms - since >= 60_000);
            machine.sample(&settings, condition, tick_ms);
            if returned {
                prop_assert_eq!(machine.state, S::LatchedAcknowledged);
                return Ok(());
            }
            let sounds = tick_ms >= 305_000;
            prop_assert_eq!(machine.state == S::Unacknowledged, sounds, "at {}", tick_ms);
            if sounds {
                return Ok(());
            }
        }
    });
}
