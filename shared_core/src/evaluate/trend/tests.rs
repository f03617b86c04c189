//! Inflow and time to limit.

use super::{Point, TimeToLimit, Trend};
use crate::alarm::{AlarmState, MachineId};
use crate::evaluate::{Moved, State, step};
use crate::journal::entry::Sample;
use crate::liquid::truth::Random;
use crate::plan::Plan;
use crate::plan::builder::{reads, water_tank};
use crate::signal::{Channel, Resolved, SensorError};

/// 10 m tall, 50 m² across, limit at 8 m, samples every 10 s, a window of 100 s.
fn tank() -> Plan {
    let mut plan = water_tank();
    // Faster than anything here rises: the curve alone decides.
    plan.highest_rise_m_s = 0.01;
    plan.state_filling(100_000, &[8.0, 8.0], &[[0.0, 0.0], [10.0, 500.0]]).unwrap();
    plan
}

/// The same with another curve and limit.
fn with_curve(limit_m: f32, curve: &[[f32; 2]]) -> Plan {
    let mut plan = water_tank();
    // Faster than anything here rises: the curve alone decides.
    plan.highest_rise_m_s = 0.01;
    plan.state_filling(100_000, &[limit_m; 2], curve).unwrap();
    plan
}

/// Plays levels, one each 10 s; gives the last reading and all moves of the machine.
fn play(
    plan: &Plan,
    state: &mut State,
    from: u64,
    levels_m: impl IntoIterator<Item = f64>,
) -> (Option<Resolved>, Vec<Moved>) {
    let (mut last, mut moves) = (None, Vec::new());
    for (index, level_m) in (from..).zip(levels_m) {
        let sample = reads(plan, index * 10_000, level_m);
        last = Some(step(plan, state, &sample, |moved| {
            if moved.machine == MachineId::TIME_TO_LIMIT {
                moves.push(moved);
            }
        }));
    }
    (last, moves)
}

fn rising(from_m: f64, per_sample_m: f64, count: u32) -> impl Iterator<Item = f64> {
    (0..count).map(move |index| from_m + per_sample_m * f64::from(index))
}

fn near(found: f32, expected: f64, relative: f64) {
    let found = f64::from(found);
    assert!((found - expected).abs() <= relative * expected, "{found} for {expected}");
}

#[test]
fn a_steady_inflow_gives_the_time_to_the_limit() {
    let plan = tank();
    let mut state = State::default();
    // 2 mm/s into 50 m²: 0.1 m³/s; 100 m³ are left at 6 m.
    let (last, moves) = play(&plan, &mut state, 0, rising(6.0 - 0.4, 0.02, 21));
    let TimeToLimit::Filling { time_s, inflow_m3_s } = state.time_to_limit(&plan, &last.unwrap())
    else {
        panic!("it fills");
    };
    near(inflow_m3_s, 0.1, 1e-4);
    near(time_s, 1000.0, 1e-4);
    assert!(moves.is_empty(), "1000 s are left, 900 s are needed");
}

#[test]
fn the_alarm_comes_with_the_response_time_and_goes_when_filling_stops() {
    let plan = tank();
    let mut state = State::default();
    let (_, moves) = play(&plan, &mut state, 0, rising(5.0, 0.02, 80));
    assert_eq!(moves.len(), 1);
    let raised = moves[0];
    assert!(raised.step.to.is_active() && raised.step.to != AlarmState::Acknowledged);
    near(raised.utilisation, 1.0, 0.03);
    // 6.2 m are reached at the sixtieth sample; not before, and not two samples later.
    let tick_ms = u64::from(state.machine(MachineId::TIME_TO_LIMIT).entered_ms);
    assert!((590_000..=620_000).contains(&tick_ms), "{tick_ms}");
    state.acknowledge(800_000, |_| {});
    let (last, moves) = play(&plan, &mut state, 80, rising(6.58, 0.0, 30));
    assert_eq!(state.time_to_limit(&plan, &last.unwrap()), TimeToLimit::NotFilling);
    assert_eq!(moves.len(), 1, "it returned: {moves:?}");
}

#[test]
fn not_rising_falling_and_below_its_own_uncertainty_are_not_filling() {
    let plan = tank();
    for per_sample_m in [0.0, -0.01] {
        let mut state = State::default();
        let (last, _) = play(&plan, &mut state, 0, rising(6.0, per_sample_m, 30));
        assert_eq!(state.time_to_limit(&plan, &last.unwrap()), TimeToLimit::NotFilling);
    }
    // 5 mm of noise on a level at rest: the upper end of the rate alone would be some 10 m³/h.
    let mut random = Random(5);
    let mut filling = 0;
    let mut state = State::default();
    let mut last = None;
    for from in 0..400 {
        let noisy = [6.0 + random.between(-0.005, 0.005)];
        last = play(&plan, &mut state, from, noisy).0.or(last);
        let seen = state.time_to_limit(&plan, &last.unwrap());
        filling += u32::from(matches!(seen, TimeToLimit::Filling { .. }));
    }
    // One-sided 95 % on the slope: a share of false rates of that order.
    assert!(filling < 60, "{filling} of 400");
}

#[test]
fn the_upper_end_of_the_rate_holds_the_true_one() {
    let plan = tank();
    let (mut random, mut late, mut all) = (Random(9), 0, 0);
    let mut state = State::default();
    for (index, level_m) in (0..).zip(rising(1.0, 0.005, 1000)) {
        let noisy = [level_m + random.between(-0.003, 0.003)];
        let (last, _) = play(&plan, &mut state, index, noisy);
        if let TimeToLimit::Filling { inflow_m3_s, .. } = state.time_to_limit(&plan, &last.unwrap())
        {
            all += 1;
            late += u32::from(f64::from(inflow_m3_s) < 0.5e-3 * 50.0);
        }
    }
    assert!(all > 800 && late * 100 < all * 12, "{late} of {all} below the true inflow");
}

/// A tank that narrows: by the present level's rate alone the time would be too long.
#[test]
fn the_curve_counts_not_the_present_rate_of_rise() {
    let plan = with_curve(8.0, &[[0.0, 0.0], [6.0, 300.0], [10.0, 400.0]]);
    let mut state = State::default();
    let (last, _) = play(&plan, &mut state, 0, rising(5.6, 0.02, 21));
    let TimeToLimit::Filling { time_s, .. } = state.time_to_limit(&plan, &last.unwrap()) else {
        panic!("it fills");
    };
    // 50 m³ at 0.1 m³/s; 2 m at 2 mm/s would be 1000 s.
    near(time_s, 500.0, 2e-4);
}

/// A rate beyond what the plan knows as the highest is noise.
#[test]
fn no_rise_beyond_the_highest_is_believed() {
    let mut plan = tank();
    plan.highest_rise_m_s = 0.001;
    let mut state = State::default();
    let (last, moves) = play(&plan, &mut state, 0, rising(6.0 - 0.4, 0.02, 21));
    let TimeToLimit::Filling { time_s, inflow_m3_s } = state.time_to_limit(&plan, &last.unwrap())
    else {
        panic!("it fills");
    };
    near(inflow_m3_s, 0.1, 1e-4);
    near(time_s, 2000.0, 1e-4);
    assert!(moves.is_empty());
}

#[test]
fn the_lag_is_the_window() {
    let plan = tank();
    let mut state = State::default();
    play(&plan, &mut state, 0, rising(5.0, 0.01, 30));
    let mut level_m = 5.3;
    let mut slopes = Vec::new();
    for index in 30..45 {
        level_m += 0.03;
        let (last, _) = play(&plan, &mut state, index, [level_m]);
        if let TimeToLimit::Filling { inflow_m3_s, .. } = state.time_to_limit(&plan, &last.unwrap())
        {
            slopes.push(inflow_m3_s);
        }
    }
    near(slopes[14], 0.15, 1e-3);
    assert!(slopes.iter().skip(5).all(|&slope| slope > 0.1), "half way after half the window");
}

#[test]
fn what_is_not_measured_adds_nothing_and_is_taken_at_its_upper_end() {
    let plan = tank();
    let mut state = State::default();
    let (last, _) = play(&plan, &mut state, 0, rising(5.0, 0.02, 30));
    let before = state.time_to_limit(&plan, &last.unwrap());
    let kept = state.trend;
    let silent = Channel::failed(SensorError::Silent);
    let sample = Sample { level: silent, ..reads(&plan, 300_000, 0.0) };
    let projected = step(&plan, &mut state, &sample, |_| {});
    assert_eq!(state.trend.points().last(), kept.points().last(), "no point came of it");
    let after = state.time_to_limit(&plan, &projected);
    let (TimeToLimit::Filling { time_s: a, .. }, TimeToLimit::Filling { time_s: b, .. }) =
        (before, after)
    else {
        panic!("both fill");
    };
    assert!(b < a, "{b} after {a}");
    // Too old for a rate, in the end: neither filling nor not.
    let sample = Sample { level: silent, ..reads(&plan, 1_000_000, 0.0) };
    let failed = step(&plan, &mut state, &sample, |_| {});
    assert_eq!(state.time_to_limit(&plan, &failed), TimeToLimit::NotKnown);
    state.restart(0);
    assert_eq!(state.trend, Trend::NONE);
}

#[test]
fn a_plan_without_a_curve_is_judged_as_ever() {
    let plan = water_tank();
    let mut state = State::default();
    let (last, moves) = play(&plan, &mut state, 0, rising(1.0, 0.1, 80));
    assert_eq!(state.time_to_limit(&plan, &last.unwrap()), TimeToLimit::NotStated);
    assert!(moves.is_empty());
    assert_eq!(state.trend, Trend::NONE);
    let mut with = tank();
    with.alarm.response_time_ms = 0;
    let mut other = State::default();
    play(&with, &mut other, 0, rising(1.0, 0.1, 80));
    assert_ne!(state.hash, other.hash, "the volumes are in the hash of a plan with a curve");
}

/// A lying drum of 2.4 m by 6 m at 20 m³/h from 1.5 to 2.2 m: 24.65 min; by the rate of rise 29.3.
#[test]
fn a_drum_is_not_late() {
    let (radius_m, length_m) = (1.2_f64, 6.0);
    let volume = |h: f64| {
        let s = radius_m - h;
        let chord = (radius_m * radius_m - s * s).max(0.0).sqrt();
        length_m * (radius_m * radius_m * (s / radius_m).acos() - s * chord)
    };
    #[expect(clippy::cast_possible_truncation, reason = "figures of the test fit")]
    let row = |index: i32| {
        let angle = f64::from(index) * std::f64::consts::PI / 31.0;
        let height_m = radius_m * (1.0 - angle.cos());
        [height_m as f32, volume(height_m) as f32]
    };
    let curve: Vec<[f32; 2]> = (0..32).map(row).collect();
    let mut plan = with_curve(2.2, &curve);
    let inflow = 20.0 / 3600.0;
    // The levels that a steady inflow gives, by bisection.
    let level = |target: f64| {
        let (mut low, mut high) = (0.0, 2.4);
        for _ in 0..60 {
            let middle = 0.5 * (low + high);
            if volume(middle) < target { low = middle } else { high = middle }
        }
        low
    };
    let start = volume(1.5) - inflow * 300.0;
    let mut state = State::default();
    plan.level.value_per_count_16 /= 100.0;
    let levels = (0..31).map(|index| level(start + inflow * 10.0 * f64::from(index)));
    let (last, _) = play(&plan, &mut state, 0, levels);
    let TimeToLimit::Filling { time_s, .. } = state.time_to_limit(&plan, &last.unwrap()) else {
        panic!("it fills");
    };
    // Never later than it is; the chords of the curve and the band of the rate cost 1 %.
    let true_s = 24.65 * 60.0;
    assert!((0.985 * true_s..=1.0005 * true_s).contains(&f64::from(time_s)), "{time_s}");
}

#[test]
fn points_beyond_the_last_push_the_first_out() {
    let mut trend = Trend::NONE;
    for index in 0..9_u32 {
        trend.push(Point { tick_ms: index, volume_bits: index });
    }
    let ticks: Vec<u32> = trend.points().iter().map(|point| point.tick_ms).collect();
    assert_eq!(ticks, [3, 4, 5, 6, 7, 8]);
}
