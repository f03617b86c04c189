//! Liquids and how their density follows the temperature.

use super::petroleum::Petroleum;
use crate::tank::finding::{Located, Span};

/// A liquid, a layer or a product.
#[derive(Clone, Debug, PartialEq)]
pub struct Liquid {
    /// Its name, 24 bytes at most.
    pub name: Located<String>,
    /// Density at `temperature_c`.
    pub density_kg_m3: Located<f64>,
    /// Temperature of the estimate, inside the range of service.
    pub temperature_c: Located<f64>,
    /// Coldest temperature in service.
    pub coldest_c: Located<f64>,
    /// Hottest temperature in service.
    pub hottest_c: Located<f64>,
    /// How density follows temperature.
    pub thermal: Located<Thermal>,
    /// Half-width of the density as a share of it, never exceeded.
    pub uncertainty: Located<f64>,
    /// Where the table stands.
    pub span: Span,
}

/// How density follows temperature.
#[derive(Clone, Debug, PartialEq)]
pub enum Thermal {
    /// Not at all, as the file says.
    None,
    /// density = density at the reference / (1 + expansion x temperature difference).
    Expansion {
        /// Coefficient of cubic expansion.
        per_k: f64,
    },
    /// As petroleum liquids of a group do.
    Petroleum(Petroleum),
    /// Straight lines between the rows; the rows cover the range of service.
    Table {
        /// Temperature in °C, rising, and density in kg/m³; two rows at least.
        rows: Vec<(f64, f64)>,
    },
}

impl Liquid {
    /// Nominal density at a temperature of the liquid, kg/m³.
    ///
    /// A table holds its end value outside its rows. The temperature is meant to lie in the range
    /// of service; there the result is positive and finite.
    #[must_use]
    pub fn density_at(&self, temperature_c: f64) -> f64 {
        match &self.thermal.value {
            Thermal::None => self.density_kg_m3.value,
            Thermal::Expansion { per_k } => {
                let warmer_by = temperature_c - self.temperature_c.value;
                self.density_kg_m3.value / (1.0 + per_k * warmer_by)
            }
            Thermal::Petroleum(group) => {
                let stated = (self.density_kg_m3.value, self.temperature_c.value);
                group.density_kg_m3(group.base_kg_m3(stated.0, stated.1), temperature_c)
            }
            Thermal::Table { rows } => {
                interpolate(rows, temperature_c).unwrap_or(self.density_kg_m3.value)
            }
        }
    }

    /// Why the density cannot be followed over the temperatures of service and `celsius`.
    #[must_use]
    pub fn beyond(&self, celsius: f64) -> Option<String> {
        let Thermal::Petroleum(group) = self.thermal.value else { return None };
        let coldest_c = self.coldest_c.value.min(celsius);
        let hottest_c = self.hottest_c.value.max(celsius);
        let (density, at) = (self.density_kg_m3.value, self.temperature_c.value);
        group.beyond(density, at, (coldest_c, hottest_c))
    }

    /// Lowest and highest density in service, kg/m³: over the range of temperature, widened by the
    /// uncertainty.
    #[must_use]
    pub fn band_kg_m3(&self) -> (f64, f64) {
        let (cold, hot) = (self.coldest_c.value, self.hottest_c.value);
        let mut low = self.density_at(cold).min(self.density_at(hot));
        let mut high = self.density_at(cold).max(self.density_at(hot));
        if let Thermal::Table { rows } = &self.thermal.value {
            for &(_, density) in rows.iter().filter(|(t, _)| (cold..=hot).contains(t)) {
                low = low.min(density);
                high = high.max(density);
            }
        }
        (low * (1.0 - self.uncertainty.value), high * (1.0 + self.uncertainty.value))
    }
}

/// The value of a table of straight lines; `None` for a table without rows.
pub(super) fn interpolate(rows: &[(f64, f64)], at: f64) -> Option<f64> {
    let first = rows.first()?;
    let last = rows.last()?;
    if at <= first.0 {
        return Some(first.1);
    }
    for pair in rows.windows(2) {
        let [(t0, d0), (t1, d1)] = *pair else { continue };
        if at <= t1 {
            return Some(d0 + (d1 - d0) * (at - t0) / (t1 - t0));
        }
    }
    Some(last.1)
}

/// A heavier liquid below the one before it.
#[derive(Clone, Debug, PartialEq)]
pub struct Layer {
    /// Height of its surface.
    pub surface_m: Located<f64>,
    /// Half-width of that height, never exceeded.
    pub surface_uncertainty_m: Located<f64>,
    /// What it consists of.
    pub liquid: Liquid,
}
