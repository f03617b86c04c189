//! The level sensor of a plan in words.

use super::Words;
use crate::units::Quantity::{self, Length, Pressure};
use strake_core::plan::{LevelPlan, LevelSensor, Reference, SignalKind};

impl Words {
    pub(super) fn sensor(&mut self, level: &LevelPlan) {
        let LevelPlan {
            sensor,
            signal,
            zero_count_16,
            value_at_zero,
            value_per_count_16,
            uncertainty,
            uncertainty_per_distance,
            reference_m,
            failed_after_ms,
        } = level;
        self.section("level sensor");
        let quantity = match sensor {
            LevelSensor::Surface => Length,
            LevelSensor::Head { .. } => Pressure,
        };
        self.line("measures", sensor, self.measures(sensor));
        let scaling = (signal, zero_count_16, value_at_zero, value_per_count_16);
        self.line("scaling", &scaling, self.scaling(level, quantity));
        let mut within = format!("+-{}", self.show(*uncertainty, quantity));
        if *uncertainty_per_distance > 0.0 {
            let share = self.show(*uncertainty_per_distance, Quantity::Ratio);
            let from = self.show(*reference_m, Length);
            within = format!("{within} and {share} of the distance from {from}");
        }
        self.line("uncertainty", &(uncertainty, uncertainty_per_distance, reference_m), within);
        self.line("cannot see after", failed_after_ms, self.time(*failed_after_ms));
    }

    fn measures(&self, sensor: &LevelSensor) -> String {
        let LevelSensor::Head { at_m, reference } = sensor else {
            return "the height of the surface".to_owned();
        };
        let against = match reference {
            Reference::GasSpace => "the gas space".to_owned(),
            Reference::Atmosphere { offset_pa: [0.0, 0.0, 0.0] } => "the air".to_owned(),
            Reference::Atmosphere { offset_pa: [nominal, low, high] } => format!(
                "vacuum, air pressure {} from {} to {}",
                self.show(*nominal, Pressure),
                self.show(*low, Pressure),
                self.show(*high, Pressure)
            ),
        };
        format!("pressure at {}, against {against}", self.show(*at_m, Length))
    }

    /// The values at two counts, as a simulator at the terminals would prove them.
    fn scaling(&self, level: &LevelPlan, quantity: Quantity) -> String {
        // In f64: what is shown is rounded once.
        let at_count = |count: f64| {
            let counts_16 = count * 16.0 - f64::from(level.zero_count_16);
            let value =
                f64::from(level.value_at_zero) + counts_16 * f64::from(level.value_per_count_16);
            self.show(value, quantity)
        };
        match level.signal {
            // A raw count of a loop is one microampere.
            SignalKind::CurrentLoop => {
                format!("4 mA is {}, 20 mA is {}", at_count(4_000.0), at_count(20_000.0))
            }
            SignalKind::Register { unit, function, register, coding } => format!(
                "bus unit {unit}, function {function}, register {register}, {}: count 0 is {}, \
                 count 1000 is {}",
                coding_in_words(coding),
                at_count(0.0),
                at_count(1_000.0)
            ),
        }
    }
}

fn coding_in_words(coding: u8) -> String {
    match coding {
        0 => "u16".to_owned(),
        1 => "i16".to_owned(),
        2 => "u32".to_owned(),
        other => format!("coding {other}"),
    }
}
