//! What only the device needs: thresholds, times, products, the temperature sensor.

use super::faults::Faults;
use super::liquid;
use super::number::{located, milliseconds, single};
use crate::tank::{Code, TankFile, TemperatureSource, Threshold};
use strake_core::plan::{AlarmPlan, LoggingPlan, Plan, TemperaturePlan, ThresholdPlan};

/// Threshold in place of one that the file does not state; nothing at the desk reads it.
const NOT_STATED: ThresholdPlan = ThresholdPlan {
    utilisation: 1.0,
    deadband: 0.0,
    on_delay_ms: 0,
    off_delay_ms: 0,
    latch: false,
};

pub(super) fn alarm(file: &TankFile, plan: &mut Plan) {
    let rated = file.parts.iter().any(|part| !part.capacity_inward().is_empty());
    plan.alarm = AlarmPlan {
        warn: ThresholdPlan { utilisation: 0.5, ..NOT_STATED },
        alarm: NOT_STATED,
        inward: rated.then_some(NOT_STATED),
        response_time_ms: 0,
        sounds_again_after_ms: 600_000,
    };
    let Some(stated) = &file.alarm else { return };
    plan.alarm.warn = threshold(&stated.warn);
    plan.alarm.alarm = threshold(&stated.alarm);
    if let Some(inward) = &stated.inward {
        plan.alarm.inward = Some(threshold(inward));
    }
    plan.alarm.response_time_ms = milliseconds(stated.response_time_s.value);
    if let Some(again) = stated.sounds_again_after_s {
        plan.alarm.sounds_again_after_ms = milliseconds(again.value);
    }
}

fn threshold(stated: &Threshold) -> ThresholdPlan {
    ThresholdPlan {
        utilisation: located(stated.utilisation),
        deadband: located(stated.deadband),
        on_delay_ms: milliseconds(stated.on_delay_s.value),
        off_delay_ms: milliseconds(stated.off_delay_s.value),
        latch: stated.latch,
    }
}

pub(super) fn logging(file: &TankFile, plan: &mut Plan) {
    plan.logging = LoggingPlan { interval_ms: 1000, idle_interval_ms: 1000, flush_after_ms: 0 };
    let Some(stated) = &file.logging else { return };
    plan.logging = LoggingPlan {
        interval_ms: milliseconds(stated.interval_s.value),
        idle_interval_ms: milliseconds(stated.idle_interval_s.value),
        flush_after_ms: milliseconds(stated.flush_after_s.value),
    };
}

/// Adds what no calculation at the desk uses.
pub(super) fn complete(file: &TankFile, plan: &mut Plan, faults: &mut Faults) {
    for product in &file.products {
        // The tank room lets no more products through than a plan holds.
        let _ = plan.liquid.products.push(liquid::of_file(product));
    }
    let Some(signal) = &file.temperature_signal else { return };
    match signal.source {
        TemperatureSource::Board { scale_k } => {
            if let Some((table, uncertainty)) = liquid::table(&file.liquid) {
                plan.liquid.table = table;
                plan.liquid.table_uncertainty = uncertainty;
            }
            plan.liquid.temperature = Some(TemperaturePlan {
                celsius_at_zero: 0.0,
                celsius_per_count_16: single(scale_k / 16.0),
                uncertainty_k: located(signal.uncertainty_k),
            });
        }
        TemperatureSource::Modbus(_) => {
            let message = "a temperature read from a register is not offered by this version";
            let hint = "give the board's own sensor, { scale = \"0.0625 K\", uncertainty = .. }, \
                        or leave it out: the density band then spans the whole range";
            faults.report(Code::NotOffered, signal.span, message, hint);
        }
    }
}
