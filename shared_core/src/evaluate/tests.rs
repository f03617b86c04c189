//! The step for one sample and for sixty-four at once, and what it makes of a morning at the tank.

use super::{Digest, Output, Rhythm, State, judge, loads, step};
use crate::alarm::{AlarmState, FaultCause, MachineId, Threshold};
use crate::journal::entry::{Sample, TransitionCause};
use crate::liquid::truth::Random;
use crate::part::{PartLoads, Stated};
use crate::plan::builder::{count_of, random, reads, water_tank};
use crate::plan::{Filling, LevelSensor, Plan};
use crate::signal::{Channel, Quality, ReadingClass, Resolved, SensorError, resolve};
use proptest::prelude::*;

const LANES: usize = 64;

/// Sixty-four samples: a level that wanders, with failed and wild readings among them.
fn samples(random: &mut Random, plan: &Plan) -> Vec<Sample> {
    let scale = if plan.level.sensor == LevelSensor::Surface { 1.0 } else { 9_806.65 };
    let mut level_m = random.between(0.0, 8.0);
    let mut tick_ms = random.below(1 << 40);
    let mut one = || {
        tick_ms += 1_000 + random.below(20_000);
        level_m += random.between(-0.4, 0.4);
        let level = match random.below(12) {
            0 => Channel::failed(SensorError::Garbled),
            1 => Channel::default(),
            2 => Channel::good(i32::MAX),
            3 => Channel::good(i32::MIN),
            _ => Channel::good(count_of(plan, level_m * scale)),
        };
        let temperature = Channel::good(i32::try_from(random.below(8_000)).unwrap());
        Sample { tick_ms, level, temperature, battery_mv: 0 }
    };
    (0..LANES).map(|_| one()).collect()
}

/// As the replay does it: readings one by one, loads of all at once, machines one by one.
fn in_lanes(plan: &Plan, state: &mut State, samples: &[Sample]) -> Vec<(u64, Vec<[u32; 3]>)> {
    let resolved: Vec<Resolved> = samples
        .iter()
        .map(|s| resolve(plan, &mut state.sight, s.tick_ms, s.level, s.temperature))
        .collect();
    let resolved: [Resolved; LANES] = resolved.try_into().unwrap();
    let mut parts: Vec<PartLoads<LANES>> = Vec::new();
    let digest = loads(plan, &resolved, |_, part| parts.push(*part));
    let mut results = Vec::new();
    for (lane, (sample, resolved)) in samples.iter().zip(&resolved).enumerate() {
        let judged: Vec<_> = parts
            .iter()
            .map(|part| (part.utilisation_bound.lane(lane), part.utilisation_inward.lane(lane)))
            .collect();
        judge(plan, state, sample.tick_ms, resolved, &judged, (&digest, lane), |_| {});
        let bits = parts.iter().map(|part| utilisation_bits(part, lane)).collect();
        results.push((digest.lane(lane), bits));
    }
    results
}

fn utilisation_bits<const N: usize>(part: &PartLoads<N>, lane: usize) -> [u32; 3] {
    [part.utilisation, part.utilisation_bound, part.utilisation_inward]
        .map(|number| (number.lane(lane) + 0.0).to_bits())
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(200))]

    #[test]
    fn sixty_four_lanes_are_sixty_four_steps(seed in any::<u64>()) {
        let mut random = Random(seed);
        let plan = random::plan(&mut random);
        prop_assert_eq!(plan.check(), Ok(()), "{:?}", plan);
        let samples = samples(&mut random, &plan);
        let mut together = State::default();
        let lanes = in_lanes(&plan, &mut together, &samples);
        let mut alone = State::default();
        let mut sight = alone.sight;
        for (sample, (digest, bits)) in samples.iter().zip(lanes) {
            let one = resolve(&plan, &mut sight, sample.tick_ms, sample.level, sample.temperature);
            let mut alone_bits = Vec::new();
            let alone_digest: Digest<1> =
                loads(&plan, &[one], |_, part| alone_bits.push(utilisation_bits(part, 0)));
            prop_assert_eq!(alone_bits, bits);
            prop_assert_eq!(alone_digest.lane(0), digest);
            step(&plan, &mut alone, sample, |_| {});
        }
        // The sights differ in nothing, and so do machines and hash.
        prop_assert_eq!(alone, together);
    }

    /// A pending delay is known to the device, which takes a sample at its end.
    #[test]
    fn the_next_expiry_is_when_something_moves(seed in any::<u64>()) {
        let mut random = Random(seed);
        let mut plan = random::plan(&mut random);
        // The same level once more says that filling has stopped.
        plan.filling = Filling::NONE;
        for threshold in [&mut plan.alarm.warn, &mut plan.alarm.alarm] {
            threshold.on_delay_ms = 5_000;
            threshold.off_delay_ms = 9_000;
        }
        let mut state = State::default();
        for sample in samples(&mut random, &plan) {
            step(&plan, &mut state, &sample, |_| {});
            let Some(wait_ms) = state.next_expiry_ms(&plan, sample.tick_ms) else { continue };
            let mut early = state.clone();
            let mut moved = 0;
            // The same reading a little later; a stale one goes on rising and is left out.
            if sample.level.quality != Quality::Good {
                continue;
            }
            let tick_ms = sample.tick_ms + u64::from(wait_ms) - 1;
            step(&plan, &mut early, &Sample { tick_ms, ..sample }, |_| moved += 1);
            prop_assert!(wait_ms == 0 || moved == 0);
            let tick_ms = sample.tick_ms + u64::from(wait_ms);
            step(&plan, &mut state.clone(), &Sample { tick_ms, ..sample }, |_| moved += 1);
            prop_assert!(moved > 0);
        }
    }
}

/// Hoop capacity for 6 m of water at the design point of a course of 8 m diameter.
fn course_tank() -> Plan {
    let mut plan = water_tank();
    plan.parts[0].outward.hoop_tension_n_m = Stated::new(9_806.65 * 5.7 * 4.0);
    plan
}

fn shown(state: &State) -> Rhythm {
    Output::of(state).rhythm
}

#[test]
fn a_rise_past_both_thresholds_and_back() {
    let plan = course_tank();
    let mut state = State::default();
    let mut moves = Vec::new();
    for (tick_ms, level_m) in [(0, 5.0), (1, 5.2), (2, 5.6), (3, 5.8), (4, 5.2), (5, 4.0)] {
        step(&plan, &mut state, &reads(&plan, tick_ms, level_m), |moved| {
            let (_, threshold) = moved.machine.part().unwrap();
            moves.push((tick_ms, threshold, moved.step.cause));
            let expected = (level_m - 0.3) / 5.7;
            assert!((f64::from(moved.utilisation) - expected).abs() < 1e-5);
        });
    }
    let (raised, returned) = (TransitionCause::Raised, TransitionCause::Returned);
    let expected = [
        (1, Threshold::Warn, raised),
        (3, Threshold::Alarm, raised),
        (4, Threshold::Alarm, returned),
        (5, Threshold::Warn, returned),
    ];
    assert_eq!(moves, expected);
    assert_eq!(state.samples, 6);
    let alarm = MachineId::of_part(0, Threshold::Alarm).unwrap();
    assert_eq!(state.machine(alarm).state, AlarmState::LatchedUnacknowledged);
    assert_eq!(shown(&state), Rhythm::ActNow);
}

#[test]
fn not_yet_read_cannot_see_until_the_time_is_over() {
    let plan = course_tank();
    let silent = Channel::failed(SensorError::Silent);
    let mut state = State::default();
    state.restart(1_000);
    let sample = |tick_ms| Sample { tick_ms, level: silent, ..Sample::default() };
    let resolved = step(&plan, &mut state, &sample(2_000), |_| {});
    assert_eq!(resolved.class, ReadingClass::NotYetRead);
    assert_eq!(shown(&state), Rhythm::CannotSee);
    assert!(Output::of(&state).sounding, "as loud as an alarm");
    step(&plan, &mut state, &sample(61_000), |_| {});
    assert_eq!(shown(&state), Rhythm::CannotSee);
    // Then full is taken for possible.
    step(&plan, &mut state, &sample(61_001), |_| {});
    assert_eq!(shown(&state), Rhythm::ActNow);
}

#[test]
fn a_sensor_that_falls_silent_raises_its_cause_and_the_projected_load() {
    let plan = course_tank();
    let mut state = State::default();
    step(&plan, &mut state, &reads(&plan, 0, 4.7), |_| {});
    assert_eq!(shown(&state), Rhythm::Healthy);
    let silent = Channel::failed(SensorError::Silent);
    let mut raised = Vec::new();
    for seconds in 1..=500_u32 {
        let tick_ms = 1_000 * u64::from(seconds);
        let sample = Sample { tick_ms, level: silent, ..Sample::default() };
        step(&plan, &mut state, &sample, |moved| raised.push((seconds, moved.machine)));
    }
    let fault = MachineId::of_fault;
    let part = |threshold| MachineId::of_part(0, threshold).unwrap();
    // The cause stood for 60 s from its first sample; nothing was read for more than 60 s; at
    // 1 mm/s the level may have risen from 4.7 m past the thresholds at 5.145 m and 5.715 m.
    let expected = [
        (61, fault(FaultCause::Silent)),
        (61, fault(FaultCause::Stale)),
        (445, part(Threshold::Warn)),
    ];
    assert_eq!(raised.iter().map(|one| one.1).collect::<Vec<_>>(), expected.map(|one| one.1));
    for ((seconds, _), (about, _)) in raised.iter().zip(expected) {
        assert!(seconds.abs_diff(about) <= 1, "{seconds} is not about {about}");
    }
}

#[test]
fn a_failing_current_between_the_bands_keeps_its_alarm() {
    use crate::plan::builder::{on_loop, surface_sensor};
    let mut plan = course_tank();
    plan.level = on_loop(surface_sensor(), 0.0, 10.0);
    let mut state = State::default();
    let current = |tick_ms, microamperes: i32| Sample {
        tick_ms,
        level: Channel::good(microamperes * 16),
        ..Sample::default()
    };
    step(&plan, &mut state, &current(0, 8_000), |_| {});
    for tick_ms in [1_000, 61_000, 62_000] {
        step(&plan, &mut state, &current(tick_ms, 3_500), |_| {});
    }
    let low = MachineId::of_fault(FaultCause::CurrentLow);
    assert_eq!(state.machine(low).state, AlarmState::Unacknowledged);
    step(&plan, &mut state, &current(63_000, 3_700), |_| {});
    assert_eq!(state.machine(low).state, AlarmState::Unacknowledged);
    step(&plan, &mut state, &current(64_000, 8_000), |_| {});
    assert_eq!(state.machine(low).state, AlarmState::ReturnedUnacknowledged);
}

#[test]
fn reported_faults_latch_and_others_are_left_alone() {
    let plan = course_tank();
    let mut state = State::default();
    step(&plan, &mut state, &reads(&plan, 0, 1.0), |_| {});
    state.report(&plan, FaultCause::Silent, 1, |_| panic!("follows from samples"));
    let mut moved = 0;
    state.report(&plan, FaultCause::Journal, 1, |_| moved += 1);
    state.report(&plan, FaultCause::Journal, 2, |_| moved += 1);
    assert_eq!(moved, 1);
    step(&plan, &mut state, &reads(&plan, 3, 1.0), |_| {});
    let id = MachineId::of_fault(FaultCause::Journal);
    assert_eq!(state.machine(id).state, AlarmState::LatchedUnacknowledged);
    assert_eq!(shown(&state), Rhythm::CannotSee);
    state.acknowledge(4, |_| {});
    state.acknowledge(5, |_| {});
    assert_eq!(shown(&state), Rhythm::Healthy);
}

#[test]
fn presses_and_samples_enter_the_hash_in_their_order() {
    let plan = course_tank();
    let mut state = State::default();
    step(&plan, &mut state, &reads(&plan, 0, 5.5), |_| {});
    let mut pressed = state.clone();
    pressed.acknowledge(1, |_| {});
    assert_ne!(pressed.hash, state.hash);
    step(&plan, &mut pressed, &reads(&plan, 2, 5.5), |_| {});
    step(&plan, &mut state, &reads(&plan, 2, 5.5), |_| {});
    state.acknowledge(3, |_| {});
    assert_ne!(pressed.hash, state.hash);
    // A press that moves nothing is nothing.
    let before = state.clone();
    state.acknowledge(4, |_| {});
    assert_eq!(state, before);
}
