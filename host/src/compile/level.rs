//! The level sensor: what it senses and how its counts scale.
//!
//! Counts are in sixteenths: of a microampere in a current loop, of the register's value on a bus.

use super::faults::Faults;
use super::number::{located, milliseconds, single};
use super::site::HEIGHTS_M;
use crate::tank::{
    Code, Count, LevelSensor as Stated, Modbus, PressureReference, Sensing, Signal, Span, TankFile,
};
use crate::units::Quantity::{Length, Time};
use strake_core::plan::{LevelPlan, LevelSensor, Plan, Reference, SignalKind};

/// Count of a current loop at 4 mA.
const AT_4_MA: i32 = 4_000 * 16;
/// Counts from 4 mA to 20 mA.
const LOOP_SPAN: f64 = 16_000.0 * 16.0;
/// Sixteenths in one count of a register.
const SIXTEENTHS: f64 = 16.0;
/// Longest time that a plan holds, s.
const DELAY_MAX_S: f64 = 24.0 * 86_400.0;

pub(super) fn level(file: &TankFile, plan: &mut Plan, faults: &mut Faults) {
    // Without a sensor, or without its signal, a level stated at the desk is taken as exact or with
    // the stated uncertainty; the scale of counts touches nothing there.
    plan.level.sensor = LevelSensor::Surface;
    plan.level.value_per_count_16 = 1.0;
    plan.level.failed_after_ms = 60_000;
    let Some(stated) = &file.level else { return };
    let level = &mut plan.level;
    let (zero, sign) = match stated.sensing {
        Sensing::Head { at_m, reference } => {
            let below_top_m = (HEIGHTS_M.0, f64::from(plan.shell_top_m));
            faults.within(at_m, below_top_m, Length, "`at` in [level]");
            level.sensor = LevelSensor::Head {
                at_m: located(at_m),
                reference: reference_of(&reference.value),
            };
            (0.0, 1.0)
        }
        Sensing::Innage { zero_m } => {
            faults.within(zero_m, HEIGHTS_M, Length, "`at` in [level]");
            (zero_m.value, 1.0)
        }
        Sensing::Ullage { reference_m, uncertainty_of_distance } => {
            faults.within(reference_m, HEIGHTS_M, Length, "`at` in [level]");
            level.uncertainty_per_distance = located(uncertainty_of_distance);
            level.reference_m = located(reference_m);
            (reference_m.value, -1.0)
        }
    };
    level.uncertainty = located(stated.uncertainty);
    if let Some(failed_after) = stated.failed_after_s {
        faults.within(failed_after, (0.001, DELAY_MAX_S), Time, "`failed_after`");
        level.failed_after_ms = milliseconds(failed_after.value);
    }
    scale(stated, level, zero, sign, faults);
}

fn reference_of(reference: &PressureReference) -> Reference {
    let offset_pa = match *reference {
        PressureReference::GasSpace => return Reference::GasSpace,
        PressureReference::Atmosphere => [0.0; 3],
        PressureReference::Absolute { lowest_pa, highest_pa } => {
            [single(0.5 * (lowest_pa + highest_pa)), single(lowest_pa), single(highest_pa)]
        }
    };
    Reference::Atmosphere { offset_pa }
}

/// Counts into the value sensed: distances down from a reference become heights.
fn scale(stated: &Stated, level: &mut LevelPlan, zero: f64, sign: f64, faults: &mut Faults) {
    match stated.signal.map(|signal| (signal.value, signal.span)) {
        None => {}
        Some((Signal::CurrentLoop { at_4_ma, at_20_ma }, _)) => {
            level.signal = SignalKind::CurrentLoop;
            level.zero_count_16 = AT_4_MA;
            level.value_at_zero = single(zero + sign * at_4_ma);
            level.value_per_count_16 = single(sign * (at_20_ma - at_4_ma) / LOOP_SPAN);
        }
        Some((Signal::Modbus(modbus), span)) => {
            if let Some(signal) = register(&modbus, span, faults) {
                level.signal = signal;
            }
            level.zero_count_16 = 0;
            level.value_at_zero = single(zero);
            level.value_per_count_16 = single(sign * modbus.scale / SIXTEENTHS);
        }
    }
}

fn register(modbus: &Modbus, span: Span, faults: &mut Faults) -> Option<SignalKind> {
    let coding = match modbus.count {
        Count::U16 => 0,
        Count::I16 => 1,
        Count::U32 => 2,
        Count::F32 => {
            let message = "a register that holds an f32 is not offered by this version";
            let hint = "read a register with a whole count: u16, i16 or u32";
            faults.report(Code::NotOffered, span, message, hint);
            return None;
        }
    };
    let Modbus { unit, function, register, .. } = *modbus;
    Some(SignalKind::Register { unit, function, register, coding })
}
