//! Whole plans.

use crate::liquid::{gas, liquid, outside};
use crate::part::{Around, Numbers, part};
use crate::{between, ratio, single};
use strake_core::alarm::PARTS_MAX;
use strake_core::plan::codec::{PLAN_BYTES_MAX, encode};
use strake_core::plan::{
    AlarmPlan, Filling, LevelPlan, LevelSensor, LoggingPlan, Plan, PlanError, PlanHeader,
    Reference, SignalKind, ThresholdPlan,
};
use strake_oracle::random::Random;

/// A plan that passes its check. One in sixteen has as many parts as a plan may hold.
pub fn plan(random: &mut Random) -> Plan {
    let height_m = random.ratio_between(0.8, 20.0);
    let closed = random.one_in(3);
    let above = if closed { random.between(0.7, 1.4) } else { random.between(0.7, 1.0) };
    let outside = outside(random, height_m);
    let parts = match random.below(16) {
        0 => PARTS_MAX,
        _ => 1 + random.below(6) as usize,
    };
    let around = Around { height_m, outside: (1 << outside.len()) - 1 };
    let liquid = liquid(random, height_m);
    let gas = gas(random);
    let heaviest = f64::from(liquid.with_layers(liquid.any_product()).high_kg_m3);
    let level = level(random, height_m * above, heaviest);
    let mut numbers = Numbers::new();
    let parts = (0..parts).map(|_| part(random, around, &mut numbers)).collect();
    let mut plan = Plan {
        gravity_m_s2: between(random, 9.78, 9.832),
        shell_top_m: single(height_m),
        overflow_m: single(height_m * above),
        floor_m: if random.one_in(3) { between(random, -0.5, 0.0) } else { 0.0 },
        closed,
        highest_rise_m_s: ratio(random, 1e-5, 1e-2),
        highest_fall_m_s: ratio(random, 1e-5, 1e-2),
        liquid,
        gas,
        outside: outside.into_iter().collect(),
        level,
        alarm: alarm(random),
        logging: LoggingPlan {
            interval_ms: 10_000,
            idle_interval_ms: 60_000,
            flush_after_ms: 60_000,
        },
        parts,
        numbers,
        filling: Filling::NONE,
    };
    // From a copy: the rest of a run stays as it was before plans had a curve.
    state_filling(&mut random.clone(), &mut plan);
    plan
}

/// Two plans in three have a volume curve: a prism, or one that narrows.
fn state_filling(random: &mut Random, plan: &mut Plan) {
    if random.one_in(3) {
        return;
    }
    let rows = 2 + random.below(31);
    let height_m = f64::from(plan.shell_top_m);
    let area_m2 = random.ratio_between(0.05, 500.0);
    let (mut at_m, mut volume_m3) = (0.0, 0.0);
    let curve = (0..rows).map(|_| {
        let row = [single(at_m), single(volume_m3)];
        let step_m = height_m / f64::from(rows - 1);
        at_m += step_m;
        volume_m3 += step_m * area_m2 * random.between(0.3, 1.0);
        row
    });
    let curve: Vec<[f32; 2]> = curve.collect();
    let limits_m = vec![single(height_m * 0.8); plan.liquid.products.len() + 2];
    // Where the parts leave no room, the plan has none.
    let _ = plan.state_filling(20_000 + random.below(600_000), &limits_m, &curve);
}

/// The plan as a device gets it.
///
/// # Errors
/// What the plan's check refuses; a plan with too many bytes.
pub fn plan_bytes(plan: &Plan) -> Result<Vec<u8>, PlanError> {
    let mut bytes = vec![0; PLAN_BYTES_MAX];
    let names: Vec<String> = (1..=plan.parts.len()).map(|n| format!("p{n}")).collect();
    let names: Vec<&str> = names.iter().map(String::as_str).collect();
    let used = encode(&PlanHeader::default(), plan, "any", &names, &mut bytes)?;
    bytes.truncate(used);
    Ok(bytes)
}

/// Head of every reference, innage and ullage; on a loop or on the bus.
fn level(random: &mut Random, full_m: f64, heaviest_kg_m3: f64) -> LevelPlan {
    let at_m = random.between(-0.2, 0.2 * full_m);
    let column_pa = heaviest_kg_m3 * 9.81 * (full_m - at_m);
    let (sensor, low, high) = match random.below(6) {
        0 => (head(at_m, Reference::GasSpace), 0.0, column_pa),
        1 => (head(at_m, Reference::Atmosphere { offset_pa: [0.0; 3] }), -1e3, column_pa + 2e4),
        2 => {
            let offset_pa = [101_325.0, 95_000.0, 106_000.0];
            (head(at_m, Reference::Atmosphere { offset_pa }), 9e4, column_pa + 1.2e5)
        }
        3 => (LevelSensor::Surface, full_m, 0.0),
        _ => (LevelSensor::Surface, 0.0, full_m),
    };
    let size = if matches!(sensor, LevelSensor::Surface) { full_m } else { column_pa };
    let uncertainty = if random.one_in(4) { 0.0 } else { between(random, 0.0, 0.02 * size) };
    let ullage = high < low;
    let on_loop = random.one_in(2);
    let (signal, zero_count_16, span_16) = if on_loop {
        (SignalKind::CurrentLoop, 4_000 * 16, 256_000.0)
    } else {
        let signal = SignalKind::Register { unit: 1, function: 4, register: 0, coding: 0 };
        (signal, 0, 65_535.0 * 16.0)
    };
    LevelPlan {
        sensor,
        signal,
        zero_count_16,
        value_at_zero: single(low),
        value_per_count_16: single((high - low) / span_16),
        uncertainty,
        uncertainty_per_distance: if ullage { between(random, 0.0, 0.01) } else { 0.0 },
        reference_m: if ullage { single(full_m) } else { 0.0 },
        failed_after_ms: 1 + random.below(300_000),
    }
}

fn head(at_m: f64, reference: Reference) -> LevelSensor {
    LevelSensor::Head { at_m: single(at_m), reference }
}

fn alarm(random: &mut Random) -> AlarmPlan {
    AlarmPlan {
        warn: threshold(random, 0.3, 0.8),
        alarm: threshold(random, 0.81, 1.0),
        inward: Some(threshold(random, 0.3, 1.0)),
        response_time_ms: random.below(3_600_000),
        sounds_again_after_ms: 1 + random.below(3_600_000),
    }
}

fn threshold(random: &mut Random, low: f64, high: f64) -> ThresholdPlan {
    let mut delay_ms = || if random.one_in(2) { 0 } else { random.below(120_000) };
    ThresholdPlan {
        on_delay_ms: delay_ms(),
        off_delay_ms: delay_ms(),
        utilisation: between(random, low, high),
        deadband: between(random, 0.0, 0.1),
        latch: random.one_in(2),
    }
}
