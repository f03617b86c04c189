//! When alarms come on measured levels: with the adaptive interval at the same sample as at the
//! fixed one, where a long interval alone would be late.

use crate::bench::{HOUR_MS, run};
use std::fmt::Write;
use strake::trial::Series;
use strake_core::alarm::{MachineId, Threshold};
use strake_core::journal::Entry;
use strake_core::journal::entry::TransitionCause;
use strake_core::liquid::Band;
use strake_core::part::{Capacities, Geometry, Part, Stated};
use strake_core::plan::{LevelPlan, LevelSensor, Plan, SignalKind, ThresholdPlan};

/// A tank around a series: one course whose thresholds lie within what the series reaches.
fn plan(levels: &[(f64, f64)], interval_s: u32, idle_s: u32) -> Plan {
    let (low_m, high_m) =
        levels.iter().fold((f64::INFINITY, f64::NEG_INFINITY), |(low, high), row| {
            (low.min(row.1), high.max(row.1))
        });
    let rates = levels.windows(2).map(|pair| (pair[1].1 - pair[0].1) / (pair[1].0 - pair[0].0));
    let (fall, rise) =
        rates.fold((0.0_f64, 0.0_f64), |(fall, rise), rate| (fall.min(rate), rise.max(rate)));
    // A course's hoop tension is that of the level above its design point, here the bottom.
    let warn_m = low_m + 0.6 * (high_m - low_m);
    let alarm_m = low_m + 0.9 * (high_m - low_m);
    let threshold = |level_m: f64| ThresholdPlan {
        utilisation: (level_m / (1.1 * high_m)) as f32,
        deadband: (0.05 * (high_m - low_m) / (1.1 * high_m)) as f32,
        on_delay_ms: 5_000,
        off_delay_ms: 60_000,
        latch: false,
    };
    let mut plan = Plan {
        gravity_m_s2: 9.80665,
        shell_top_m: 20.0,
        overflow_m: 19.0,
        highest_rise_m_s: (1.001 * rise) as f32,
        highest_fall_m_s: (-1.001 * fall) as f32,
        level: LevelPlan {
            sensor: LevelSensor::Surface,
            signal: SignalKind::Register { unit: 1, function: 4, register: 0, coding: 0 },
            zero_count_16: 0,
            value_at_zero: 0.0,
            value_per_count_16: 1.0 / 32_000.0,
            uncertainty: 0.002,
            uncertainty_per_distance: 0.0,
            reference_m: 0.0,
            failed_after_ms: 60_000,
        },
        ..Plan::empty()
    };
    plan.liquid.top = Band { estimate_kg_m3: 1000.0, low_kg_m3: 1000.0, high_kg_m3: 1000.0 };
    (plan.alarm.warn, plan.alarm.alarm) = (threshold(warn_m), threshold(alarm_m));
    plan.alarm.response_time_ms = 900_000;
    plan.alarm.sounds_again_after_ms = 600_000;
    plan.logging.interval_ms = 1000 * interval_s;
    plan.logging.idle_interval_ms = 1000 * idle_s;
    plan.logging.flush_after_ms = 60_000;
    let full = 9.80665 * 1000.0 * 1.1 * high_m * 4.0;
    let course = Part {
        geometry: Geometry::Course { half_diameter_m: 4.0, design_point_m: 0.0, height_m: 19.0 },
        bottom_m: 0.0,
        top_m: 19.0,
        outward: Capacities { hoop_tension_n_m: Stated::new(full as f32), ..Capacities::default() },
        inward: Capacities::default(),
        designed_for: heapless::Vec::new(),
        outside: 0,
    };
    plan.parts.push(course).unwrap();
    plan
}

/// Alarms as they were raised: tick and threshold.
type Raised = Vec<(u64, Threshold)>;

fn raised(entries: &[Entry]) -> Raised {
    let moves = entries.iter().filter_map(|entry| match entry {
        Entry::Transition(moved) if moved.cause == TransitionCause::Raised => {
            let (_, threshold) = MachineId::part(moved.machine)?;
            Some((moved.tick_ms, threshold))
        }
        _ => None,
    });
    moves.collect()
}

/// The longest time from an alarm at the fixed interval to the next one of its kind here; alarms of
/// which there are fewer are missed.
fn latest(fixed: &Raised, here: &Raised) -> (usize, u64) {
    let mut latest_ms = 0;
    let mut missed = 0;
    for threshold in [Threshold::Warn, Threshold::Alarm] {
        let of = |list: &Raised| -> Vec<u64> {
            list.iter().filter(|one| one.1 == threshold).map(|one| one.0).collect()
        };
        let (fixed, here) = (of(fixed), of(here));
        missed += fixed.len().saturating_sub(here.len());
        for (then, now) in fixed.iter().zip(&here) {
            latest_ms = latest_ms.max(now.saturating_sub(*then));
        }
    }
    (missed, latest_ms)
}

#[test]
fn alarms_come_at_the_same_sample_as_at_the_fixed_interval() {
    let mut table = String::from(
        "series                      interval   idle  samples  alarms  missed  latest\n",
    );
    for name in [
        "river_blacksmithfork_15min",
        "tide_newlondon_6min",
        "well_transducer_2min",
        "laboratory_tank_1s",
    ] {
        let path = format!("{}/../tests/series/{name}.csv", env!("CARGO_MANIFEST_DIR"));
        let text = std::fs::read_to_string(path).unwrap();
        let rows: Vec<(f64, f64)> = text
            .lines()
            .skip(1)
            .map(|row| {
                let fields: Vec<f64> = row.split(',').map(|field| field.parse().unwrap()).collect();
                (fields[0], fields[1])
            })
            .collect();
        let play = |interval_s, idle_s| {
            let series = Series::parse(&text).unwrap();
            let end_ms = (rows[rows.len() - 1].0 * 1e3) as u64;
            let plan = plan(&rows, interval_s, idle_s);
            run(&plan, Box::new(series), 0.0, &[], end_ms.max(HOUR_MS))
        };
        let fixed = play(10, 10);
        let at_fixed = raised(&fixed.entries);
        assert!(at_fixed.len() >= 2, "{name}: {at_fixed:?}");
        for (interval_s, idle_s) in [(10, 10), (10, 60), (10, 300), (60, 60), (300, 300)] {
            let logged = play(interval_s, idle_s);
            let here = raised(&logged.entries);
            let (missed, latest_ms) = latest(&at_fixed, &here);
            if interval_s == 10 {
                assert_eq!(here, at_fixed, "{name} with {idle_s} s at rest");
            }
            writeln!(
                table,
                "{name:26}  {interval_s:6} s  {idle_s:3} s  {:7}  {:6}  {missed:6}  {:4} s",
                logged.samples(),
                here.len(),
                latest_ms / 1000
            )
            .unwrap();
        }
    }
    println!("{table}");
    assert_eq!(table, include_str!("measured.txt"));
}
