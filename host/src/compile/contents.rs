//! What stands in the tank: as the file says, or as an override has it.

use crate::tank::{Liquid, TankFile, Thermal};

/// The liquid on top, its temperature and the gas. Bounds stay those of the file; an override
/// widens them where it lies outside, it never narrows them.
#[derive(Clone, Debug, PartialEq)]
pub struct Contents {
    /// The liquid, or the top layer.
    pub liquid: Liquid,
    /// Temperature of the estimate, °C.
    pub temperature_c: f64,
    /// Lowest, usual and highest gas pressure, Pa gauge.
    pub gas_pa: [f64; 3],
}

impl Contents {
    /// What the file says.
    #[must_use]
    pub fn of(file: &TankFile) -> Self {
        Self {
            liquid: file.liquid.clone(),
            temperature_c: file.liquid.temperature_c.value,
            gas_pa: file.gas.range_pa(),
        }
    }

    /// Another liquid at its own temperature.
    pub fn take_liquid(&mut self, liquid: &Liquid) {
        self.liquid = liquid.clone();
        self.temperature_c = liquid.temperature_c.value;
    }

    /// Another density at the reference temperature; expansion and uncertainty stay.
    pub fn take_density(&mut self, density_kg_m3: f64) {
        let factor = density_kg_m3 / self.liquid.density_kg_m3.value;
        if let Thermal::Table { rows } = &mut self.liquid.thermal.value {
            for (_, density) in rows {
                *density *= factor;
            }
        }
        self.liquid.density_kg_m3.value = density_kg_m3;
    }

    /// Another gas pressure, Pa gauge.
    pub fn take_gas(&mut self, gas_pa: f64) {
        let [lowest, _, highest] = self.gas_pa;
        self.gas_pa = [lowest.min(gas_pa), gas_pa, highest.max(gas_pa)];
    }

    /// Density of the estimate, kg/m³.
    #[must_use]
    pub fn density_kg_m3(&self) -> f64 {
        if self.is_at_reference() {
            self.liquid.density_kg_m3.value
        } else {
            self.liquid.density_at(self.temperature_c)
        }
    }

    /// Lowest and highest density, kg/m³: over the range of service and the temperature of the
    /// estimate, widened by the uncertainty.
    #[must_use]
    pub fn band_kg_m3(&self) -> (f64, f64) {
        let (low, high) = self.liquid.band_kg_m3();
        let estimate = self.density_kg_m3();
        let share = if self.is_at_reference() { 0.0 } else { self.liquid.uncertainty.value };
        (low.min(estimate * (1.0 - share)), high.max(estimate * (1.0 + share)))
    }

    fn is_at_reference(&self) -> bool {
        (self.temperature_c - self.liquid.temperature_c.value).abs() <= f64::EPSILON
    }
}
