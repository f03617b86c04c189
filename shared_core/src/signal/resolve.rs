//! From the integers of one cycle to a reading with its bounds.
//!
//! A stale reading is projected both ways: up at the highest rise and down at the highest fall,
//! capped at overflow and at empty. A head sensor's projection is a pressure: the heaviest liquid
//! at the highest rise, and the swing of the gas where the reading holds it.

use super::{Channel, LoopClass, Quality, SensorError, classify};
use crate::alarm::FaultCause;
use crate::lane::{at_least, at_most};
use crate::liquid::Band;
use crate::plan::{LevelSensor, Plan, Reference, SignalKind};

/// What is known of the level. The numbers travel over the link and never change.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
#[repr(u8)]
pub enum ReadingClass {
    /// No reading since the start: full and empty are both possible.
    #[default]
    NotYetRead = 0,
    /// Measured in this cycle.
    Valid = 1,
    /// Measured in this cycle, outside the sensor's specification or between the bands of NAMUR
    /// NE 43; the last status is held.
    Held = 2,
    /// Not measured in this cycle; projected from the last valid reading.
    Projected = 3,
    /// Not measured for longer than the plan allows; the projection goes on.
    Failed = 4,
}

/// What the device remembers of its sensors from cycle to cycle.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Sight {
    /// Last valid level count and its tick.
    pub last_level: Option<(i32, u64)>,
    /// Last valid temperature count.
    pub last_temperature: Option<i32>,
    /// Whether the last current that had a meaning was a measurement.
    pub level_ok: bool,
    /// Tick from which "not yet read" is counted.
    pub started_ms: u64,
    /// Which product is confirmed to be in the tank: 0 the plan's liquid, then its products.
    pub product: Option<u8>,
}

impl Sight {
    /// Nothing is remembered.
    pub const NONE: Self = Self {
        last_level: None,
        last_temperature: None,
        level_ok: false,
        started_ms: 0,
        product: None,
    };
}

/// A reading with its bounds, in the sensor's own quantity (Pa or m).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Resolved {
    /// What is known.
    pub class: ReadingClass,
    /// Best estimate; meaningless when not yet read.
    pub estimate: f32,
    /// Lower end.
    pub low: f32,
    /// Upper end.
    pub high: f32,
    /// Density of the top liquid.
    pub density: Band,
    /// Why the level was not read in this cycle.
    pub fault: Option<FaultCause>,
}

/// Judges one cycle's channels and remembers what the next one needs.
pub fn resolve(
    plan: &Plan,
    sight: &mut Sight,
    tick_ms: u64,
    level: Channel,
    temperature: Channel,
) -> Resolved {
    match temperature.quality {
        Quality::Good | Quality::Sparse => sight.last_temperature = Some(temperature.count_16),
        // A temperature of some time ago must not narrow the density band.
        Quality::Failed(_) => sight.last_temperature = None,
        Quality::NotRead => {}
    }
    let density = density(plan, sight);
    let fault = match judge(plan, sight, level) {
        Ok(held) => {
            sight.last_level = Some((level.count_16, tick_ms));
            let value = value(plan, level.count_16);
            let half = half_width(plan, value);
            let class = if held { ReadingClass::Held } else { ReadingClass::Valid };
            let fault = implausible(plan, value, half, density);
            let (low, high) = (value - half, value + half);
            return Resolved { class, estimate: value, low, high, density, fault };
        }
        Err(fault) => fault,
    };
    project(plan, sight, tick_ms, density, fault)
}

/// `Ok(held)` when the count is a measurement; otherwise the cause, if there is one.
fn judge(plan: &Plan, sight: &mut Sight, level: Channel) -> Result<bool, Option<FaultCause>> {
    let cause = match level.quality {
        Quality::NotRead => return Err(None),
        Quality::Failed(error) => {
            sight.level_ok = false;
            return Err(Some(match error {
                SensorError::Silent => FaultCause::Silent,
                SensorError::Garbled => FaultCause::Garbled,
                SensorError::Unexpected => FaultCause::Unexpected,
                SensorError::Exception => FaultCause::Exception,
                SensorError::Converter => FaultCause::Converter,
            }));
        }
        Quality::Good | Quality::Sparse => match plan.level.signal {
            SignalKind::Register { .. } => {
                sight.level_ok = true;
                return Ok(false);
            }
            SignalKind::CurrentLoop => match classify(level.count_16) {
                LoopClass::Measurement { in_specification } => {
                    sight.level_ok = true;
                    return Ok(!in_specification);
                }
                LoopClass::Between if sight.level_ok => return Ok(true),
                LoopClass::WireBreak => FaultCause::WireBreak,
                // Between the bands: the last status was a failure, or there is none. It stays so.
                LoopClass::FailureLow | LoopClass::Between if level.count_16 < 12_000 * 16 => {
                    FaultCause::CurrentLow
                }
                LoopClass::FailureLow | LoopClass::FailureHigh | LoopClass::Between => {
                    FaultCause::CurrentHigh
                }
            },
        },
    };
    sight.level_ok = false;
    Err(Some(cause))
}

/// Value of a count in the sensor's quantity, Pa or m.
#[must_use]
pub(crate) fn value(plan: &Plan, count_16: i32) -> f32 {
    let level = &plan.level;
    #[expect(clippy::cast_precision_loss, reason = "counts above 2^24 sixteenths round by 6e-8")]
    let counts = count_16.saturating_sub(level.zero_count_16) as f32;
    level.value_at_zero + counts * level.value_per_count_16
}

/// Half-width of a value, Pa or m.
#[must_use]
pub fn half_width(plan: &Plan, value: f32) -> f32 {
    let level = &plan.level;
    let distance_m = crate::lane::ramp(level.reference_m - value);
    level.uncertainty + level.uncertainty_per_distance * distance_m
}

/// A value that cannot be: the sensor is at the end of what it can see, or something is wrong.
fn implausible(plan: &Plan, value: f32, half: f32, density: Band) -> Option<FaultCause> {
    match (plan.level.sensor, plan.open_top_m()) {
        (LevelSensor::Surface, None) => {
            (value + half >= plan.shell_top_m).then_some(FaultCause::AtRoof)
        }
        (LevelSensor::Surface, Some(top_m)) => {
            (value - half > top_m).then_some(FaultCause::AboveShell)
        }
        (LevelSensor::Head { .. }, Some(top_m)) => {
            let brimful = full(plan, density, top_m).1;
            (value - half > brimful).then_some(FaultCause::AboveShell)
        }
        (LevelSensor::Head { .. }, None) => None,
    }
}

/// Readings of an empty tank and of one full to `level_m`, outermost, in the sensor's quantity.
fn full(plan: &Plan, density: Band, level_m: f32) -> (f32, f32) {
    match plan.level.sensor {
        LevelSensor::Surface => (plan.floor_m, level_m),
        LevelSensor::Head { at_m, reference } => {
            let heaviest = plan.liquid.with_layers(density).high_kg_m3;
            let column = heaviest * plan.gravity_m_s2 * crate::lane::ramp(level_m - at_m);
            match reference {
                Reference::GasSpace => (0.0, column),
                Reference::Atmosphere { offset_pa: [_, lowest, highest] } => {
                    (plan.gas.lowest_pa + lowest, plan.gas.highest_pa + highest + column)
                }
            }
        }
    }
}

fn project(
    plan: &Plan,
    sight: &Sight,
    tick_ms: u64,
    density: Band,
    fault: Option<FaultCause>,
) -> Resolved {
    let (empty, brim) = full(plan, density, plan.overflow_m);
    let Some((count_16, read_ms)) = sight.last_level else {
        let class = ReadingClass::NotYetRead;
        return Resolved { class, estimate: brim, low: empty, high: brim, density, fault };
    };
    let age_ms = tick_ms.saturating_sub(read_ms);
    let estimate = value(plan, count_16);
    let half = half_width(plan, estimate);
    let (rise, fall) = reach(plan, density, u32::try_from(age_ms).unwrap_or(u32::MAX));
    // A cap never cuts what was measured: the projection only stops there.
    let high = at_least(at_most(estimate + half + rise, brim), estimate + half);
    let low = at_most(at_least(estimate - half - fall, empty), estimate - half);
    let class = if age_ms > u64::from(plan.level.failed_after_ms) {
        ReadingClass::Failed
    } else {
        ReadingClass::Projected
    };
    Resolved { class, estimate, low, high, density, fault }
}

/// How far a reading may rise and fall within some time, in the sensor's quantity.
pub(crate) fn reach(plan: &Plan, density: Band, within_ms: u32) -> (f32, f32) {
    #[expect(clippy::cast_precision_loss, reason = "times beyond 2^24 ms are long past every cap")]
    let within_s = within_ms as f32 * 1.0e-3;
    let weight = plan.gravity_m_s2 * plan.liquid.with_layers(density).high_kg_m3;
    // What the gas may add to a gauge or absolute head without any rise of the level.
    let (per_metre, swing) = match plan.level.sensor {
        LevelSensor::Surface => (1.0, 0.0),
        LevelSensor::Head { reference: Reference::GasSpace, .. } => (weight, 0.0),
        LevelSensor::Head { reference: Reference::Atmosphere { .. }, .. } => {
            (weight, plan.gas.highest_pa - plan.gas.lowest_pa)
        }
    };
    let rise = plan.highest_rise_m_s * within_s * per_metre + swing;
    let fall = plan.highest_fall_m_s * within_s * per_metre + swing;
    (rise, fall)
}

/// Density of the top liquid: of the confirmed product, else of any; narrowed by a temperature
/// sensor where the plan has one and its own liquid is confirmed, or the only one.
fn density(plan: &Plan, sight: &Sight) -> Band {
    let liquid = &plan.liquid;
    match sight.product {
        None if !liquid.products.is_empty() => liquid.any_product(),
        None | Some(0) => at_temperature(plan, sight).unwrap_or(liquid.top),
        Some(index) => {
            let product = liquid.products.get(usize::from(index) - 1);
            product.copied().unwrap_or_else(|| liquid.any_product())
        }
    }
}

/// Density at the liquid's temperature; `None` when that is not known or beyond the table.
fn at_temperature(plan: &Plan, sight: &Sight) -> Option<Band> {
    let liquid = &plan.liquid;
    let (sensor, count_16) = (liquid.temperature?, sight.last_temperature?);
    #[expect(clippy::cast_precision_loss, reason = "temperature counts are small")]
    let celsius = sensor.celsius_at_zero + count_16 as f32 * sensor.celsius_per_count_16;
    let [(coolest_c, _), .., (warmest_c, _)] = liquid.table.points() else { return None };
    if !(*coolest_c <= celsius && celsius <= *warmest_c) {
        return None;
    }
    let estimate_kg_m3 = liquid.table.at(celsius)?;
    let (low, high) =
        liquid.table.extremes(celsius - sensor.uncertainty_k, celsius + sensor.uncertainty_k)?;
    Some(Band {
        estimate_kg_m3,
        low_kg_m3: low * (1.0 - liquid.table_uncertainty),
        high_kg_m3: high * (1.0 + liquid.table_uncertainty),
    })
}

#[cfg(test)]
mod tests;
