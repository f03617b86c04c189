//! The checkpoint's bytes, restarts and plan changes.

use super::{CHECKPOINT_BYTES_MAX, State};
use crate::alarm::{AlarmState, FaultCause, MachineId, Threshold};
use crate::evaluate::step;
use crate::journal::entry::Sample;
use crate::liquid::truth::Random;
use crate::part::Stated;
use crate::plan::Plan;
use crate::plan::builder::{random, reads, water_tank};
use crate::signal::{Channel, SensorError};
use proptest::prelude::*;

fn encoded(state: &State) -> Vec<u8> {
    let mut bytes = [0; CHECKPOINT_BYTES_MAX];
    let length = state.encode(&mut bytes).unwrap();
    bytes[..length].to_vec()
}

/// A state after a random walk of samples and presses.
fn walked(random: &mut Random, plan: &Plan) -> State {
    let mut state = State::default();
    for index in 0..random.below(30) {
        let tick_ms = index * 7_000;
        if random.below(6) == 0 {
            state.acknowledge(tick_ms, |_| {});
        }
        if random.below(9) == 0 {
            state.report(plan, FaultCause::Journal, tick_ms, |_| {});
        }
        let level = match random.below(4) {
            0 => Channel::failed(SensorError::Silent),
            _ => Channel::good(i32::try_from(random.below(3_000_000)).unwrap()),
        };
        let temperature = Channel::good(i32::try_from(random.below(6_000)).unwrap());
        step(plan, &mut state, &Sample { tick_ms, level, temperature, battery_mv: 0 }, |_| {});
    }
    state
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(300))]

    #[test]
    fn a_checkpoint_holds_everything(seed in any::<u64>()) {
        let mut random = Random(seed);
        let plan = random::plan(&mut random);
        let mut state = walked(&mut random, &plan);
        let mut restored = State::decode(&encoded(&state)).unwrap();
        prop_assert_eq!(&restored, &state);
        let next = reads(&plan, 300_000, 1.0);
        step(&plan, &mut state, &next, |_| {});
        step(&plan, &mut restored, &next, |_| {});
        prop_assert_eq!(restored, state);
    }

    /// Bytes that are none are refused; what is taken is written back the same.
    #[test]
    fn decoding_is_total(
        seed in any::<u64>(),
        noise in prop::collection::vec(any::<u8>(), 0..200),
    ) {
        let mut random = Random(seed);
        let plan = random::plan(&mut random);
        let mut bytes = encoded(&walked(&mut random, &plan));
        for length in 0..bytes.len() {
            prop_assert!(State::decode(&bytes[..length]).is_none());
        }
        for _ in 0..3 {
            let place = usize::try_from(random.below(1_000)).unwrap() % bytes.len();
            bytes[place] ^= 1 << random.below(8);
            if let Some(state) = State::decode(&bytes) {
                let again = State::decode(&encoded(&state));
                prop_assert_eq!(again, Some(state));
            }
        }
        let mut noise = noise;
        let _ = State::decode(&noise);
        noise.insert(0, 1);
        let _ = State::decode(&noise);
    }
}

/// Two machines: the warning of part 1, acknowledged, with its off-delay running; a broken wire.
#[test]
fn the_bytes_of_version_1() {
    let mut state = State { hash: 0x1122_3344_5566_7788, samples: 77, ..State::default() };
    state.sight.last_level = Some((-2, 0x0102_0304_0506));
    state.sight.level_ok = true;
    state.sight.started_ms = 9;
    state.sight.product = Some(3);
    let warn = MachineId::of_part(1, Threshold::Warn).unwrap();
    let machine = state.machine_mut(warn).unwrap();
    machine.state = AlarmState::Acknowledged;
    (machine.pending, machine.since_ms, machine.entered_ms) = (true, 0x0A0B_0C0D, 0x0102_0304);
    let wire = MachineId::of_fault(FaultCause::WireBreak);
    state.machine_mut(wire).unwrap().state = AlarmState::Unacknowledged;
    let expected: Vec<u8> = [
        &[1][..],
        &[0x88, 0x77, 0x66, 0x55, 0x44, 0x33, 0x22, 0x11],
        &[77, 0, 0, 0],
        &[0b1101],
        &[0xFE, 0xFF, 0xFF, 0xFF],
        &[6, 5, 4, 3, 2, 1, 0, 0],
        &[0, 0, 0, 0],
        &[9, 0, 0, 0, 0, 0, 0, 0],
        &[3],
        &[2],
        &[3, 0x82, 0x0D, 0x0C, 0x0B, 0x0A, 4, 3, 2, 1],
        &[98, 1, 0, 0, 0, 0, 0, 0, 0, 0],
    ]
    .concat();
    assert_eq!(encoded(&state), expected);
    assert_eq!(State::decode(&expected), Some(state.clone()));
    // Another version, an unknown flag, a machine twice, unknown or out of order, a hidden alarm.
    for (place, byte) in
        [(0, 2), (13, 0x10), (50, 3), (50, 2), (50, 110), (40, 98), (41, 0x06), (41, 9)]
    {
        let mut wrong = expected.clone();
        wrong[place] = byte;
        assert_eq!(State::decode(&wrong), None, "byte {place} as {byte}");
    }
    assert_eq!(State::decode(&[expected, vec![0]].concat()), None);
    assert_eq!(state.encode(&mut [0; 59]), None);
}

#[test]
fn the_largest_state_fits() {
    let mut state = State::default();
    let mut listed = 0;
    for number in 0..=u8::MAX {
        if let Some(machine) = MachineId::from_number(number).and_then(|id| state.machine_mut(id)) {
            machine.state = AlarmState::LatchedUnacknowledged;
            listed += 1;
        }
    }
    let bytes = encoded(&state);
    assert_eq!(bytes.len(), 40 + 10 * listed);
    assert!(bytes.len() <= CHECKPOINT_BYTES_MAX);
    assert_eq!(State::decode(&bytes), Some(state));
}

/// The alarm latches; the pressure is in the tank for the first sample only.
fn latched() -> (Plan, State, MachineId, MachineId) {
    let mut plan = water_tank();
    plan.parts[0].outward.hoop_tension_n_m = Stated::new(200_000.0);
    let mut state = State::default();
    step(&plan, &mut state, &reads(&plan, 10_000, 8.0), |_| {});
    step(&plan, &mut state, &reads(&plan, 20_000, 1.0), |_| {});
    state.report(&plan, FaultCause::Journal, 20_000, |_| {});
    let alarm = MachineId::of_part(0, Threshold::Alarm).unwrap();
    let journal = MachineId::of_fault(FaultCause::Journal);
    assert_eq!(state.machine(alarm).state, AlarmState::LatchedUnacknowledged);
    assert_eq!(state.machine(journal).state, AlarmState::Unacknowledged);
    (plan, state, alarm, journal)
}

#[test]
fn a_start_clears_no_latch_and_forgets_every_reading() {
    let (plan, mut state, alarm, journal) = latched();
    state.sight.product = Some(0);
    let hash = state.hash;
    state.restart(5);
    assert_eq!(state.machine(alarm).state, AlarmState::LatchedUnacknowledged);
    assert_eq!(state.machine(journal).state, AlarmState::Unacknowledged);
    assert_eq!(state.sight.last_level, None);
    assert_eq!(state.sight.started_ms, 5);
    assert_eq!(state.sight.product, Some(0), "a confirmed product outlasts a power cut");
    assert_eq!((state.hash, state.samples), (hash, 2));
    step(&plan, &mut state, &reads(&plan, 1_000, 1.0), |_| {});
    assert_eq!(state.machine(alarm).state, AlarmState::LatchedUnacknowledged);
    state.acknowledge(2_000, |_| {});
    state.acknowledge(3_000, |_| {});
    assert_eq!(state.machine(alarm).state, AlarmState::Normal);
}

#[test]
fn another_plan_starts_its_parts_anew_and_keeps_the_faults() {
    let (_, mut state, alarm, journal) = latched();
    state.acknowledge(30_000, |_| {});
    state.sight.product = Some(1);
    state.change_plan(90_000_000);
    assert!(state.machine(alarm).is_normal());
    assert_eq!(state.machine(journal).state, AlarmState::Acknowledged);
    assert_eq!(state.machine(journal).entered_ms, 90_000_000);
    assert_eq!((state.sight.product, state.sight.last_level), (None, None));
}
