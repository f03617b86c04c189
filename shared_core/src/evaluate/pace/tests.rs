//! No alarm comes later than at the fixed interval, whatever the plan, the path and the sensor's
//! errors; and what the rule does at a tank whose figures one can work out by hand.
#![expect(clippy::cast_possible_truncation, clippy::cast_precision_loss, reason = "small numbers")]

use super::Pace;
use crate::evaluate::{State, loads, part_loads, step};
use crate::journal::entry::{Sample, TransitionCause};
use crate::lane::at_least;
use crate::liquid::truth::Random;
use crate::part::{Capacities, Stated};
use crate::plan::builder::{count_of, exact, random, reads, water_tank};
use crate::plan::{LevelSensor, Plan, Reference};
use crate::signal::{Channel, Resolved, SensorError, resolve};

const INTERVAL_MS: u64 = 10_000;
const SPAN_MS: u64 = 6 * 3_600_000;
const SEEDS: u64 = 150;

/// What a sensor within its uncertainty shows of a level that keeps to its highest rates.
struct World {
    /// Level at each second, m.
    levels_m: Vec<f64>,
    /// Weight of the liquid for a head sensor, N/m³.
    weight_n_m3: f64,
    seed: u64,
}

impl World {
    /// Rests, moves about its first level at rates up to the highest, often at the highest itself.
    fn new(random: &mut Random, plan: &Plan, rates: f64) -> Self {
        let brim_m = f64::from(plan.overflow_m) - 0.3;
        let first_m = random.between(0.3, 0.9) * brim_m;
        let mut level_m = first_m;
        let mut levels_m = Vec::new();
        while levels_m.len() as u64 <= SPAN_MS / 1000 {
            let rests_s = 300 + random.below(3_000) as usize;
            levels_m.extend(core::iter::repeat_n(level_m, rests_s));
            let to_m = (first_m + random.between(-0.6, 0.6)).clamp(0.2, brim_m);
            let highest_m_s =
                if to_m > level_m { plan.highest_rise_m_s } else { plan.highest_fall_m_s };
            let step_m = rates * f64::from(highest_m_s) * random.between(0.05, 1.0);
            while (to_m - level_m).abs() > step_m {
                level_m += step_m * (to_m - level_m).signum();
                levels_m.push(level_m);
            }
        }
        let density = random.in_band(plan.liquid.any_product());
        let weight_n_m3 = density * f64::from(plan.gravity_m_s2);
        Self { levels_m, weight_n_m3, seed: random.bits() }
    }

    /// The sample at a tick, the same for everyone who asks.
    fn sample(&self, plan: &Plan, tick_ms: u64) -> Sample {
        let second = (tick_ms / 1000) as usize;
        let (now_m, then_m) = (self.levels_m[second], self.levels_m[second + 1]);
        let level_m = now_m + (then_m - now_m) * (tick_ms % 1000) as f64 * 1e-3;
        // Most of a sensor's error, and the gas, stand for a while; a little of it is noise.
        let mut random = Random(self.seed ^ (tick_ms / 2_400_000));
        let standing = random.between(-0.7, 0.7);
        let gas_pa = random.between(plan.gas.lowest_pa.into(), plan.gas.highest_pa.into());
        let noise = Random(self.seed ^ tick_ms << 20).between(-0.3, 0.3);
        let sensed = match plan.level.sensor {
            LevelSensor::Surface => level_m,
            LevelSensor::Head { at_m, reference } => {
                let column = self.weight_n_m3 * (level_m - f64::from(at_m)).max(0.0);
                match reference {
                    Reference::GasSpace => column,
                    Reference::Atmosphere { offset_pa: [nominal, ..] } => {
                        column + gas_pa + f64::from(nominal)
                    }
                }
            }
        };
        let error = f64::from(plan.level.uncertainty) * (standing + noise);
        let level = Channel::good(count_of(plan, sensed + error));
        Sample { tick_ms, level, ..Sample::default() }
    }
}

type Moves = Vec<(u64, u8, TransitionCause, u8)>;

/// Ticks at which a device looks, and what moves; `pace` judges by `known`.
fn run(plan: &Plan, known: &Plan, world: &World, adaptive: bool) -> (usize, Moves) {
    let (mut state, mut pace) = (State::default(), Pace::default());
    let (mut tick_ms, mut samples, mut moves) = (0, 0, Vec::new());
    while tick_ms < SPAN_MS {
        samples += 1;
        let resolved = step(plan, &mut state, &world.sample(plan, tick_ms), |moved| {
            let (id, step) = (moved.machine, moved.step);
            moves.push((tick_ms, id.number(), step.cause, step.to.number()));
        });
        let next_ms = u64::from(pace.next_ms(known, &resolved, tick_ms));
        assert!((INTERVAL_MS..=known.longest_ms().into()).contains(&next_ms));
        assert_eq!(next_ms % INTERVAL_MS, 0);
        let next_ms = if adaptive { next_ms } else { INTERVAL_MS };
        let beat_ms = tick_ms / INTERVAL_MS * INTERVAL_MS + next_ms;
        let expiry_ms =
            state.next_expiry_ms(plan, tick_ms).map(|wait| tick_ms + u64::from(wait.max(1)));
        tick_ms = beat_ms.min(expiry_ms.unwrap_or(u64::MAX));
    }
    (samples, moves)
}

/// Strengthens a part that is loaded beyond what a plan near its thresholds could show.
fn ease(plan: &mut Plan, index: usize, reading: &Resolved) {
    let worst = |plan: &Plan| {
        let loads = part_loads(plan, index, &[*reading]).unwrap();
        at_least(loads.utilisation_bound.lane(0), loads.utilisation_inward.lane(0))
    };
    let stronger = 2.0 * worst(plan);
    if stronger > 1.4 {
        let part = &mut plan.parts[index];
        for capacities in [&mut part.outward, &mut part.inward] {
            let Capacities { pressure_pa, hoop_tension_n_m, force_n, bolt_n, moment_n_m } =
                capacities;
            for capacity in
                [pressure_pa, hoop_tension_n_m, force_n, bolt_n, moment_n_m].into_iter().flatten()
            {
                *capacity = Stated::new(capacity.get() * stronger).unwrap();
            }
        }
        if worst(plan) > 0.7 {
            plan.parts[index].designed_for.clear();
        }
    }
}

/// A random plan whose thresholds stand near what its parts carry in this world's first hours.
fn plan_near_its_thresholds(random: &mut Random, rates: f64) -> (Plan, World) {
    let mut plan = random::plan(random);
    plan.liquid.temperature = None;
    plan.logging.idle_interval_ms = 60_000 * (1 + random.below(8) as u32);
    plan.level.uncertainty *= 0.2;
    plan.highest_rise_m_s = random.between(3e-4, 6e-3) as f32;
    plan.highest_fall_m_s = random.between(3e-4, 6e-3) as f32;
    let world = World::new(random, &plan, rates);
    let mut state = State::default();
    let first = step(&plan, &mut state, &world.sample(&plan, 0), |_| {});
    for index in 0..plan.parts.len() {
        ease(&mut plan, index, &first);
    }
    let (mut outward, mut inward) = (0.0, 0.0);
    loads(&plan, &[first], |_, part| {
        let bounds = [part.utilisation_bound.lane(0), part.utilisation_inward.lane(0)];
        (outward, inward) = (at_least(outward, bounds[0]), at_least(inward, bounds[1]));
    });
    let near = |worst: f32, share: f64| (worst * share as f32).clamp(0.05, 0.9);
    plan.alarm.warn.utilisation = near(outward, random.between(1.01, 1.2));
    plan.alarm.alarm.utilisation = plan.alarm.warn.utilisation + 0.05;
    let mut at_inward = plan.alarm.warn;
    at_inward.utilisation = near(inward, random.between(1.01, 1.2));
    plan.alarm.inward = Some(at_inward);
    for threshold in [&mut plan.alarm.warn, &mut plan.alarm.alarm] {
        threshold.deadband = random.between(0.001, 0.01) as f32;
        threshold.on_delay_ms = [0, 5_000, 25_000][random.below(3) as usize];
        threshold.off_delay_ms = [0, 60_000][random.below(2) as usize];
    }
    assert_eq!(plan.check(), Ok(()));
    (plan, world)
}

#[test]
fn every_alarm_comes_at_the_sample_at_which_it_comes_at_the_fixed_interval() {
    let (mut left_out, mut moved) = (0, 0);
    for seed in 0..SEEDS {
        let mut random = Random(seed);
        let (plan, world) = plan_near_its_thresholds(&mut random, 1.0);
        let (often, fixed) = run(&plan, &plan, &world, false);
        let (rarely, adaptive) = run(&plan, &plan, &world, true);
        assert_eq!(adaptive, fixed, "seed {seed}: {plan:?}");
        left_out += often - rarely;
        moved += fixed.iter().filter(|one| one.0 > 0).count();
    }
    // Otherwise the comparison would say nothing.
    println!("{left_out} samples left out, {moved} moves of machines");
    assert!(left_out > 45_000 && moved > 250, "{left_out} {moved}");
}

/// The control: a rule that takes the level for slower than it is comes late.
#[test]
fn a_level_beyond_the_highest_rates_is_noticed_late() {
    let late = (0..SEEDS).filter(|&seed| {
        let mut random = Random(seed);
        let (plan, world) = plan_near_its_thresholds(&mut random, 1.0);
        let mut known = plan.clone();
        (known.highest_rise_m_s, known.highest_fall_m_s) = (0.0, 0.0);
        run(&plan, &known, &world, true).1 != run(&plan, &known, &world, false).1
    });
    let late = late.count();
    println!("{late} of {SEEDS} late");
    assert!(late > 5, "{late}");
}

/// Seconds until the next sample after `minutes` of this level.
fn next_s(plan: &Plan, minutes: u64, level_m: f64) -> u32 {
    let (mut state, mut pace) = (State::default(), Pace::default());
    let mut next_ms = 0;
    for sample in 0..=6 * minutes {
        let sample = reads(plan, sample * INTERVAL_MS, level_m);
        let resolved = step(plan, &mut state, &sample, |_| {});
        next_ms = pace.next_ms(plan, &resolved, sample.tick_ms);
    }
    next_ms / 1000
}

/// A course for 6 m of water at its design point, 0.3 m up: 0.83 of it at 5.031 m.
fn tank() -> Plan {
    let mut plan = water_tank();
    plan.level.uncertainty = 0.002;
    plan.parts[0].outward.hoop_tension_n_m = Stated::new(9_806.65 * 5.7 * 4.0);
    plan.logging.idle_interval_ms = 300_000;
    plan
}

#[test]
fn the_distance_to_the_threshold_decides() {
    let plan = tank();
    assert_eq!(next_s(&plan, 4, 3.0), 10, "too short to show that it rests");
    // 1 mm/s for 300 s is 0.3 m, and five half-widths are 0.01 m.
    assert_eq!(next_s(&plan, 10, 5.031 - 0.312), 300);
    assert_eq!(next_s(&plan, 10, 5.031 - 0.309), 150);
    assert_eq!(next_s(&plan, 10, 5.031 - 0.162), 150);
    assert_eq!(next_s(&plan, 10, 5.031 - 0.159), 70);
    assert_eq!(next_s(&plan, 10, 5.031 - 0.015), 10);
    assert_eq!(next_s(&plan, 10, 5.5), 10, "in the deadband or in alarm");
}

#[test]
fn never_later_than_the_response_time() {
    let mut plan = tank();
    plan.alarm.response_time_ms = 125_000;
    assert_eq!(next_s(&plan, 10, 1.0), 120);
    plan.alarm.response_time_ms = 0;
    assert_eq!(next_s(&plan, 10, 1.0), 10);
}

#[test]
fn what_moves_fails_or_is_new_is_watched() {
    let plan = tank();
    let (mut state, mut pace) = (State::default(), Pace::default());
    let mut tick_ms = 0;
    let mut look = |level: Option<f64>, times: u64| {
        let mut next_ms = 0;
        for _ in 0..times {
            tick_ms += INTERVAL_MS;
            let mut sample = reads(&plan, tick_ms, level.unwrap_or(0.0));
            if level.is_none() {
                sample.level = Channel::failed(SensorError::Silent);
            }
            let resolved =
                resolve(&plan, &mut state.sight, tick_ms, sample.level, sample.temperature);
            next_ms = pace.next_ms(&plan, &resolved, tick_ms);
        }
        next_ms / 1000
    };
    assert_eq!(look(Some(3.0), 40), 300);
    assert_eq!(look(Some(3.001), 1), 300, "within the sensor's half-width");
    assert_eq!(look(Some(3.003), 1), 10, "beyond it");
    assert_eq!(look(Some(3.003), 40), 300);
    assert_eq!(look(None, 1), 10);
    assert_eq!(look(Some(3.003), 20), 10, "a new rest begins");
    assert_eq!(look(Some(3.003), 20), 300);
}

/// Heavier products count, whatever is said to be in the tank.
#[test]
fn the_heaviest_product_decides() {
    let mut plan = tank();
    assert_eq!(next_s(&plan, 10, 4.0), 300);
    plan.liquid.products.push(exact(1_300.0)).unwrap();
    assert_eq!(next_s(&plan, 10, 4.0), 10);
    assert_eq!(next_s(&plan, 10, 3.0), 300);
}

#[test]
fn samples_wait_as_the_plan_says() {
    let mut logging = tank().logging;
    assert_eq!(logging.wait_ms(10_000), 60_000);
    assert_eq!(logging.wait_ms(60_000), 360_000, "six samples");
    assert_eq!(logging.wait_ms(300_000), 600_000, "never above ten minutes");
    logging.flush_after_ms = 0;
    assert_eq!(logging.wait_ms(300_000), 0, "written at once");
    logging.flush_after_ms = 1_200_000;
    assert_eq!(logging.wait_ms(300_000), 1_200_000, "as long as the plan says");
    let plan = tank();
    assert_eq!(plan.missing_ms_max(), 900_000);
}
