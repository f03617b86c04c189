//! Density with its band, and its table over temperature.

use heapless::Vec;

/// A density: the estimate and the interval it is held never to leave, kg/m³.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Band {
    /// Entered value.
    pub estimate_kg_m3: f32,
    /// Low end.
    pub low_kg_m3: f32,
    /// High end.
    pub high_kg_m3: f32,
}

impl Band {
    /// The smallest band that holds both, with the estimate of `self`.
    #[must_use]
    pub fn hull(self, other: Self) -> Self {
        Self {
            estimate_kg_m3: self.estimate_kg_m3,
            low_kg_m3: crate::lane::at_most(self.low_kg_m3, other.low_kg_m3),
            high_kg_m3: crate::lane::at_least(self.high_kg_m3, other.high_kg_m3),
        }
    }
}

/// Points of a density table.
pub const TABLE_POINTS_MAX: usize = 8;

/// Density over temperature, straight between its points and constant beyond the ends. Compiled on
/// the host, so that no exponential stands on the load path.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct DensityTable {
    /// Temperature, degrees Celsius, rising; and density, kg/m³.
    points: Vec<(f32, f32), TABLE_POINTS_MAX>,
}

impl DensityTable {
    /// A table from its points; `None` when there are more than [`TABLE_POINTS_MAX`] or the
    /// temperatures do not rise.
    #[must_use]
    pub fn new(points: &[(f32, f32)]) -> Option<Self> {
        let rising = points.windows(2).all(|pair| match pair {
            [(cool, _), (warm, _)] => cool < warm,
            _ => true,
        });
        let points = Vec::from_slice(points).ok()?;
        rising.then_some(Self { points })
    }

    /// A table without points.
    #[must_use]
    pub const fn empty() -> Self {
        Self { points: Vec::new() }
    }

    /// The points, coolest first.
    #[must_use]
    pub fn points(&self) -> &[(f32, f32)] {
        &self.points
    }

    /// Density at a temperature, kg/m³; `None` for an empty table.
    #[must_use]
    pub fn at(&self, temperature_c: f32) -> Option<f32> {
        let mut rest = self.points.iter();
        let (mut cool_c, mut cool_kg_m3) = *rest.next()?;
        if temperature_c <= cool_c {
            return Some(cool_kg_m3);
        }
        for &(warm_c, warm_kg_m3) in rest {
            if temperature_c <= warm_c {
                let share = (temperature_c - cool_c) / (warm_c - cool_c);
                return Some(cool_kg_m3 + share * (warm_kg_m3 - cool_kg_m3));
            }
            (cool_c, cool_kg_m3) = (warm_c, warm_kg_m3);
        }
        Some(cool_kg_m3)
    }

    /// Smallest and largest density between two temperatures, kg/m³; `None` for an empty table.
    #[must_use]
    pub fn extremes(&self, cold_c: f32, hot_c: f32) -> Option<(f32, f32)> {
        let (first, last) = (self.at(cold_c)?, self.at(hot_c)?);
        let mut low = crate::lane::at_most(first, last);
        let mut high = crate::lane::at_least(first, last);
        for &(temperature_c, density_kg_m3) in &self.points {
            if cold_c < temperature_c && temperature_c < hot_c {
                low = crate::lane::at_most(low, density_kg_m3);
                high = crate::lane::at_least(high, density_kg_m3);
            }
        }
        Some((low, high))
    }
}
