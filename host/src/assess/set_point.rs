//! What a level means to a head sensor: it is set in pressure or current, never in level.

use super::desk::Desk;
use crate::tank::{Signal, TankFile};
use serde::Serialize;
use strake_core::liquid::{Band, level_m};
use strake_core::plan::LevelSensor;

/// A set-point of a head sensor, with the surface levels that the same reading means.
#[derive(Clone, Copy, Debug, PartialEq, Serialize)]
pub struct SetPoint {
    /// What the sensor reads, as its reference gives it.
    pub pressure_pa: f64,
    /// The same on a current loop.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub current_a: Option<f64>,
    /// Level of the lightest liquid of the band, the highest of the three.
    pub level_lightest_m: f64,
    /// Level of the nominal liquid.
    pub level_nominal_m: f64,
    /// Level of the densest liquid, the lowest of the three.
    pub level_densest_m: f64,
}

/// The set-point for a level of the estimate; `None` for a sensor that sees the surface itself.
pub(super) fn of(desk: &Desk, file: &TankFile, level: f32) -> Option<SetPoint> {
    let LevelSensor::Head { .. } = desk.plan().level.sensor else { return None };
    let reading = desk.reading(level);
    let pressure_pa = f64::from(reading);
    let signal = file.level.as_ref().and_then(|level| level.signal);
    let current_a = match signal.map(|signal| signal.value) {
        Some(Signal::CurrentLoop { at_4_ma, at_20_ma }) => {
            Some(4e-3 + 16e-3 * (pressure_pa - at_4_ma) / (at_20_ma - at_4_ma))
        }
        _ => None,
    };
    // An open tank cannot hold more than its brim; what the reading means is not cut there.
    let mut plan = desk.plan().clone();
    plan.closed = true;
    let means = |estimate_kg_m3: f32| {
        f64::from(level_m(&plan, reading, Band { estimate_kg_m3, ..plan.liquid.top }))
    };
    Some(SetPoint {
        pressure_pa,
        current_a,
        level_lightest_m: means(plan.liquid.top.low_kg_m3),
        level_nominal_m: means(plan.liquid.top.estimate_kg_m3),
        level_densest_m: means(plan.liquid.top.high_kg_m3),
    })
}
