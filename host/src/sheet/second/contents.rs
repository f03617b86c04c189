//! What stands in the tank and what the sensor allows, from the tank file in f64.

use super::profile::{Envelope, Liquid, Profile};
use crate::assess::Request;
use crate::tank::{PressureReference, Sensing, TankFile};

/// Least, stated and greatest density.
type Band = [f64; 3];

/// The three values of everything.
pub(super) struct Contents {
    pub(super) gravity_m_s2: f64,
    /// Lowest, usual and highest gas pressure.
    gas_pa: [f64; 3],
    level_m: f64,
    top: Band,
    /// Layers below: surface, half-width of the surface, density.
    below: Vec<(f64, f64, Band)>,
    /// Height of the brim of an open tank.
    brim_m: Option<f64>,
}

/// Which end is meant.
#[derive(Clone, Copy)]
enum End {
    Low,
    Stated,
    High,
}

impl Contents {
    pub(super) fn of(file: &TankFile, request: &Request) -> Self {
        let stated = request.contents.density_kg_m3();
        let band =
            |(low, high): (f64, f64), stated: f64| [low.min(stated), stated, high.max(stated)];
        let below = file.below.iter().map(|layer| {
            let liquid = &layer.liquid;
            let band = band(liquid.band_kg_m3(), liquid.density_kg_m3.value);
            (layer.surface_m.value, layer.surface_uncertainty_m.value, band)
        });
        let open = file.fill.closed.is_some_and(|closed| !closed.value);
        let top_m = file.vessel.height_m().or(file.fill.overflow_m.map(|level| level.value));
        Self {
            gravity_m_s2: file.gravity.m_s2(),
            gas_pa: request.contents.gas_pa,
            level_m: request.level_m,
            top: band(request.contents.band_kg_m3(), stated),
            below: below.collect(),
            brim_m: top_m.filter(|_| open),
        }
    }

    /// Specific weight of the densest liquid.
    pub(super) fn heaviest_n_m3(&self) -> f64 {
        self.gravity_m_s2 * self.all().map(|band| band[2]).fold(0.0, f64::max)
    }

    fn all(&self) -> impl Iterator<Item = Band> + '_ {
        std::iter::once(self.top).chain(self.below.iter().map(|layer| layer.2))
    }

    pub(super) fn estimate(&self) -> Profile {
        self.column(self.level_m, End::Stated)
    }

    /// Everything at one end. An interface stands no higher than the surface, and a lower layer is
    /// at least as heavy as what stands on it.
    fn column(&self, level_m: f64, end: End) -> Profile {
        let (index, shift) = match end {
            End::Low => (0, -1.0),
            End::Stated => (1, 0.0),
            End::High => (2, 1.0),
        };
        let mut weight = self.top[index] * self.gravity_m_s2;
        let mut layers = vec![(level_m, weight)];
        for (surface_m, half_m, band) in &self.below {
            weight = weight.max(band[index] * self.gravity_m_s2);
            layers.push(((surface_m + shift * half_m).min(level_m), weight));
        }
        let liquid = Liquid::Column(layers);
        Profile { gas_pa: self.gas_pa[index], liquid, outside: Vec::new() }
    }

    /// The upper and the lower profile, and the largest pressure that was read.
    pub(super) fn bounds(&self, file: &TankFile, estimate: &Profile) -> (Profile, Profile, f64) {
        let capped = |level_m: f64| self.brim_m.map_or(level_m, |brim_m| level_m.min(brim_m));
        let surface = |half_m: f64| {
            let (high_m, low_m) = (capped(self.level_m + half_m), capped(self.level_m - half_m));
            (self.column(high_m, End::High), self.column(low_m, End::Low), 0.0)
        };
        let Some(level) = &file.level else { return surface(0.0) };
        let half = level.uncertainty.value;
        match level.sensing {
            Sensing::Innage { .. } => surface(half),
            Sensing::Ullage { reference_m, uncertainty_of_distance } => {
                let distance_m = (reference_m.value - self.level_m).max(0.0);
                surface(half + uncertainty_of_distance.value * distance_m)
            }
            Sensing::Head { at_m, reference } => {
                self.envelopes(at_m.value, reference.value, half, estimate)
            }
        }
    }

    /// A head sensor that reads the estimate: as light as can be above it and as heavy as can be
    /// below it, and the other way round.
    fn envelopes(
        &self,
        at_m: f64,
        reference: PressureReference,
        half_pa: f64,
        estimate: &Profile,
    ) -> (Profile, Profile, f64) {
        let [gas_low, gas, gas_high] = self.gas_pa;
        let true_pa = estimate.at(at_m);
        // Air that the transmitter counts in, and whether the gas is in the reading.
        let (air, with_gas) = match reference {
            PressureReference::Atmosphere => ([0.0; 3], 1.0),
            PressureReference::GasSpace => ([0.0; 3], 0.0),
            PressureReference::Absolute { lowest_pa, highest_pa } => {
                ([lowest_pa, 0.5 * (lowest_pa + highest_pa), highest_pa], 1.0)
            }
        };
        let read_pa = true_pa - (1.0 - with_gas) * gas + air[1];
        let (high_pa, low_pa) = (read_pa + half_pa, read_pa - half_pa);
        let light =
            self.gravity_m_s2 * self.all().map(|band| band[0]).fold(f64::INFINITY, f64::min);
        let heavy = self.heaviest_n_m3();
        let upper = Envelope {
            at_m,
            excess_pa: (high_pa - air[0] - with_gas * gas_high).max(0.0),
            above_n_m3: light,
            below_n_m3: heavy,
            roof_m: f64::INFINITY,
            brim: self.brim_m.map(|brim_m| (brim_m, heavy)),
        };
        let wet = low_pa - air[2] - with_gas * gas_high > 0.0;
        let lower = Envelope {
            at_m,
            excess_pa: (low_pa - air[2] - with_gas * gas_low).max(0.0),
            above_n_m3: heavy,
            below_n_m3: light,
            roof_m: self.brim_m.unwrap_or(f64::INFINITY),
            brim: None,
        };
        let profile = |gas_pa: f64, liquid: Liquid| Profile { gas_pa, liquid, outside: Vec::new() };
        let lower = if wet { Liquid::Envelope(lower) } else { Liquid::Column(Vec::new()) };
        (profile(gas_high, Liquid::Envelope(upper)), profile(gas_low, lower), high_pa.abs())
    }
}
