//! Density of petroleum liquids over temperature: ASTM D1250 / API MPMS 11.1 in the form of 1980,
//! base 15 degC, without pressure.
//!
//! density(t) = base x exp(-a dT (1 + 0.8 a dT)) with dT = t - 15 degC and the coefficient of
//! expansion at the base a = K0/base² + K1/base + K2; base is the density at 15 degC. The editions
//! since 2004 give the same factors to about 1e-4.

use crate::units::Quantity::{Density, Temperature};
use crate::units::format_si;

/// A group of petroleum liquids with constants of its own.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Petroleum {
    /// Crude oils (table 54A).
    Crude,
    /// Refined products (table 54B).
    Refined,
    /// Lubricating oils (table 54D).
    Lubricating,
}

/// A base density in kg/m³, and K0, K1 and K2 from there on.
type Constants = (f64, [f64; 3]);

const BASE_C: f64 = 15.0;
/// Coldest temperature of the tables.
const COLDEST_C: f64 = -18.0;
/// Hottest temperature of the tables, from a base density on.
const HOTTEST_C: [(f64, f64); 3] = [(0.0, 95.0), (778.0, 125.0), (824.0, 150.0)];

impl Petroleum {
    /// The words of the tank file.
    pub const WORDS: [(&'static str, Self); 3] = [
        ("crude", Self::Crude),
        ("refined", Self::Refined),
        ("lubricating oil", Self::Lubricating),
    ];

    /// Its word in the tank file.
    #[must_use]
    pub fn word(self) -> &'static str {
        Self::WORDS.iter().find(|(_, group)| *group == self).map_or("", |(word, _)| word)
    }

    /// The tables that its constants stand behind.
    #[must_use]
    pub const fn table(self) -> &'static str {
        match self {
            Self::Crude => "table 54A",
            Self::Refined => "table 54B",
            Self::Lubricating => "table 54D",
        }
    }

    const fn constants(self) -> &'static [Constants] {
        match self {
            Self::Crude => &[(610.5, [613.9723, 0.0, 0.0])],
            // Gasolines, a transition, jet fuels and kerosenes, diesel and fuel oils.
            Self::Refined => &[
                (653.0, [346.4228, 0.4388, 0.0]),
                (770.5, [2680.3206, 0.0, -0.003_363_12]),
                (787.5, [594.5418, 0.0, 0.0]),
                (839.0, [186.9696, 0.4862, 0.0]),
            ],
            Self::Lubricating => &[(800.0, [0.0, 0.6278, 0.0])],
        }
    }

    /// Least and largest density at 15 degC, kg/m³.
    #[must_use]
    pub fn base_range_kg_m3(self) -> (f64, f64) {
        let least = self.constants().first().map_or(0.0, |(from, _)| *from);
        let largest = if self == Self::Lubricating { 1164.0 } else { 1075.0 };
        (least, largest)
    }

    /// Density at a temperature, kg/m³, of the liquid whose density at 15 degC is `base_kg_m3`.
    #[must_use]
    pub fn density_kg_m3(self, base_kg_m3: f64, celsius: f64) -> f64 {
        let all = self.constants();
        let fits = all.iter().rev().find(|(from, _)| *from <= base_kg_m3);
        let Some((_, [k0, k1, k2])) = fits.or(all.first()) else {
            return base_kg_m3;
        };
        let alpha = (k0 / base_kg_m3 + k1) / base_kg_m3 + k2;
        let step = alpha * (celsius - BASE_C);
        base_kg_m3 * (-step * (1.0 + 0.8 * step)).exp()
    }

    /// Density at 15 degC, kg/m³, of the liquid that has `density_kg_m3` at a temperature; held to
    /// the range of the group. By bisection, for the density rises with its base.
    #[must_use]
    pub fn base_kg_m3(self, density_kg_m3: f64, celsius: f64) -> f64 {
        let (mut low, mut high) = self.base_range_kg_m3();
        for _ in 0..64 {
            let middle = 0.5 * (low + high);
            if self.density_kg_m3(middle, celsius) < density_kg_m3 {
                low = middle;
            } else {
                high = middle;
            }
        }
        0.5 * (low + high)
    }

    /// Why the tables do not hold for a liquid with this density at a temperature, in service from
    /// the coldest to the hottest; `None` when they do.
    #[must_use]
    pub fn beyond(
        self,
        density_kg_m3: f64,
        celsius: f64,
        (coldest_c, hottest_c): (f64, f64),
    ) -> Option<String> {
        let (least, largest) = self.base_range_kg_m3();
        let reached = |base| self.density_kg_m3(base, celsius);
        let within = reached(least) * (1.0 - 1e-9)..=reached(largest) * (1.0 + 1e-9);
        if !within.contains(&density_kg_m3) {
            let side = if density_kg_m3 < reached(least) { "below" } else { "above" };
            return Some(format!(
                "{} at {} lies {side} the tables for {}, {} to {} at 15 degC",
                format_si(density_kg_m3, Density),
                format_si(celsius, Temperature),
                self.word(),
                format_si(least, Density),
                format_si(largest, Density)
            ));
        }
        let base = self.base_kg_m3(density_kg_m3, celsius);
        let upto = HOTTEST_C.iter().rev().find(|(from, _)| *from <= base);
        let highest_c = upto.map_or(f64::NEG_INFINITY, |(_, upto)| *upto);
        (coldest_c < COLDEST_C || hottest_c > highest_c).then(|| {
            format!(
                "{} to {} reaches beyond the tables for {} of {} at 15 degC, {} to {}",
                format_si(coldest_c, Temperature),
                format_si(hottest_c, Temperature),
                self.word(),
                format_si(base, Density),
                format_si(COLDEST_C, Temperature),
                format_si(highest_c, Temperature)
            )
        })
    }
}

#[cfg(test)]
mod tests;
