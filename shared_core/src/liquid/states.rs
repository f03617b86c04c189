//! From a reading to three pressure distributions: the estimate, and an upper and a lower bound.
//!
//! * A *surface sensor* (innage, ullage) bounds every pressure by taking every quantity at its high
//!   (low) end: all derivatives have one sign.
//! * A *head sensor* at `z_s` reading `P` bounds every stable profile within the density band
//!   `[rho-, rho+]`, layers and unknown product included: for the upper bound `rho-` above the
//!   sensor, `rho+` below it and the surface at `z_s + (P+ - p_g+)/(rho- g)`; for the lower bound
//!   the two swapped. The upper bound is itself a stable state, so it is attained. The lower one is
//!   only a bound: its denser liquid lies on top.
//! * An open tank cannot be fuller than full: the upper bound is also at most
//!   `p_g+ + rho+ g (z_top - z)`.
//!
//! All three are the one formula with a few surfaces (hydrostatic equilibrium, `dp/dz = -rho g`).

use super::{Band, Layer};
use crate::lane::Lane;
use crate::plan::{LevelSensor, Plan, Reference};
use crate::pressure::Pressure;

/// Readings of `N` samples in the sensor's own quantity: Pa for a head sensor (as its reference
/// gives it), metres above the datum for a surface sensor. Uncertainty and projection are in.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Readings<const N: usize> {
    /// Best estimate.
    pub estimate: Lane<N>,
    /// Lower end.
    pub low: Lane<N>,
    /// Upper end.
    pub high: Lane<N>,
    /// Density of the top liquid, kg/m³: the estimate and its band, product and temperature in.
    pub density: [Lane<N>; 3],
}

/// The three pressure distributions of a reading, without liquid outside.
#[derive(Clone, Debug, PartialEq)]
pub struct States<const N: usize> {
    /// Best estimate.
    pub estimate: Pressure<N>,
    /// No pressure in the tank is above this.
    pub upper: Pressure<N>,
    /// No pressure in the tank is below this.
    pub lower: Pressure<N>,
    /// Height of the estimated surface, m above the datum.
    pub level_m: Lane<N>,
    /// Whether the reading counts the gas in, so that more of it means less liquid.
    pub tied: bool,
}

/// The three states of a reading.
#[must_use]
pub fn states<const N: usize>(plan: &Plan, readings: &Readings<N>) -> States<N> {
    match plan.level.sensor {
        LevelSensor::Head { at_m, reference } => head(plan, readings, at_m, reference),
        LevelSensor::Surface => surface(plan, readings),
    }
}

/// Height of the surface for a reading in the sensor's own quantity, m above the datum, with the
/// estimate of the density and of the gas, interfaces held.
#[must_use]
pub fn level_m(plan: &Plan, reading: f32, density: Band) -> f32 {
    estimated(plan, Lane([reading]), Lane([density.estimate_kg_m3])).lane(0)
}

fn estimated<const N: usize>(plan: &Plan, reading: Lane<N>, density: Lane<N>) -> Lane<N> {
    let level_m = match plan.level.sensor {
        LevelSensor::Surface => reading,
        LevelSensor::Head { at_m, reference } => {
            // Pressure at the diaphragm above the gas pressure.
            let excess = match reference {
                Reference::Atmosphere { offset_pa: [nominal, ..] } => {
                    reading - (nominal + plan.gas.nominal_pa)
                }
                Reference::GasSpace => reading,
            };
            surface_from_head(plan, excess.ramp(), at_m, density)
        }
    };
    capped(plan, level_m)
}

/// Surface sensor: everything at one end.
fn surface<const N: usize>(plan: &Plan, readings: &Readings<N>) -> States<N> {
    let [estimate, low, high] = readings.density;
    let level_m = estimated(plan, readings.estimate, estimate);
    let stack = |gas_pa: f32, level_m: Lane<N>, top: Lane<N>, end: End| {
        layered(plan, gas_pa, level_m, top, end)
    };
    States {
        estimate: stack(plan.gas.nominal_pa, level_m, estimate, End::Estimate),
        upper: stack(plan.gas.highest_pa, capped(plan, readings.high), high, End::High),
        lower: stack(plan.gas.lowest_pa, capped(plan, readings.low), low, End::Low),
        level_m,
        tied: false,
    }
}

/// Height above which no liquid in the tank stands, m, for a reading not above `high` and a top
/// liquid not lighter than `light_kg_m3`.
///
/// It is no height of the upper pressure bound: that has the highest gas pressure, while a surface
/// over a diaphragm stands highest under the lowest.
#[must_use]
pub fn highest_surface_m(plan: &Plan, high: f32, light_kg_m3: f32) -> f32 {
    let surface_m = match plan.level.sensor {
        LevelSensor::Surface => high,
        LevelSensor::Head { at_m, reference } => {
            let layers = plan.liquid.below.iter();
            let light = layers.fold(light_kg_m3, |light, layer| {
                crate::lane::at_most(light, layer.density.low_kg_m3)
            });
            let gas_pa = match reference {
                Reference::Atmosphere { offset_pa: [_, lowest, _] } => lowest + plan.gas.lowest_pa,
                Reference::GasSpace => 0.0,
            };
            // Below the diaphragm nothing is seen.
            at_m + crate::lane::ramp(high - gas_pa) / (light * plan.gravity_m_s2)
        }
    };
    capped(plan, Lane([surface_m])).lane(0)
}

/// A level that does not stand above the brim of an open tank.
fn capped<const N: usize>(plan: &Plan, level_m: Lane<N>) -> Lane<N> {
    match plan.open_top_m() {
        Some(top_m) => level_m.at_most(Lane::splat(top_m)),
        None => level_m,
    }
}

/// Head sensor: the envelope of the module's head.
fn head<const N: usize>(
    plan: &Plan,
    readings: &Readings<N>,
    at_m: f32,
    reference: Reference,
) -> States<N> {
    let g = plan.gravity_m_s2;
    let gas = plan.gas;
    let [estimate, mut low, mut high] = readings.density;
    // Layers always belong to the band.
    for layer in &plan.liquid.below {
        low = low.at_most(Lane::splat(layer.density.low_kg_m3));
        high = high.at_least(Lane::splat(layer.density.high_kg_m3));
    }
    let (light, heavy) = (low * g, high * g);

    // Pressure at the diaphragm above the gas pressure, by what the transmitter refers to.
    let (excess_high, wet, excess_low) = match reference {
        Reference::Atmosphere { offset_pa: [_, lowest, highest] } => (
            readings.high - (lowest + gas.highest_pa),
            readings.low - (highest + gas.highest_pa),
            readings.low - (highest + gas.lowest_pa),
        ),
        Reference::GasSpace => (readings.high, readings.low, readings.low),
    };

    let level_m = estimated(plan, readings.estimate, estimate);
    States {
        estimate: layered(plan, gas.nominal_pa, level_m, estimate, End::Estimate),
        upper: upper_envelope(plan, excess_high.ramp(), at_m, light, heavy),
        lower: lower_envelope(plan, wet, excess_low, at_m, light, heavy),
        level_m,
        tied: matches!(reference, Reference::Atmosphere { .. }),
    }
}

/// `light` above the diaphragm, `heavy` below, cut by the brimful open tank.
fn upper_envelope<const N: usize>(
    plan: &Plan,
    excess: Lane<N>,
    at_m: f32,
    light: Lane<N>,
    heavy: Lane<N>,
) -> Pressure<N> {
    let mut upper = Pressure::gas(Lane::splat(plan.gas.highest_pa));
    let spread = heavy - light;
    let level = excess / light + at_m;
    if let Some(top_m) = plan.open_top_m() {
        let over = level - top_m;
        if !over.none_positive() {
            // From the brim down with the heavy liquid, until that meets the envelope.
            let room = heavy * (top_m - at_m) - excess;
            let meet = room.ramp() / spread.at_least(Lane::splat(1e-6)) + at_m;
            // Lanes that are not cut have no such height: the same numbers as one lane alone.
            let meet = over.positive_selects(meet, Lane::splat(at_m));
            upper.add(level.at_most(Lane::splat(top_m)), over.positive_selects(heavy, light));
            upper.add(meet, over.positive_selects(-spread, Lane::ZERO));
            upper.add(Lane::splat(at_m), spread);
            return upper;
        }
    }
    upper.add(level, light);
    upper.add(Lane::splat(at_m), spread);
    upper
}

/// `heavy` above the diaphragm, `light` below; the empty tank where the sensor may be dry.
fn lower_envelope<const N: usize>(
    plan: &Plan,
    wet: Lane<N>,
    excess: Lane<N>,
    at_m: f32,
    light: Lane<N>,
    heavy: Lane<N>,
) -> Pressure<N> {
    let mut lower = Pressure::gas(Lane::splat(plan.gas.lowest_pa));
    let level = capped(plan, excess.ramp() / heavy + at_m);
    lower.add(level, wet.positive_selects(heavy, Lane::ZERO));
    lower.add(Lane::splat(at_m), wet.positive_selects(light - heavy, Lane::ZERO));
    lower
}

/// Surface height from the excess pressure at the diaphragm, interfaces held at their entered
/// heights. The pressure is used up layer by layer from the diaphragm upwards.
fn surface_from_head<const N: usize>(
    plan: &Plan,
    excess: Lane<N>,
    at_m: f32,
    top: Lane<N>,
) -> Lane<N> {
    let g = plan.gravity_m_s2;
    let mut left = excess;
    let mut z_m = Lane::splat(at_m);
    for layer in plan.liquid.below.iter().rev() {
        // As in [`layered`]: at least as heavy as what stands above it.
        let weight = Lane::splat(layer.density.estimate_kg_m3).at_least(top) * g;
        let thickness = (Lane::splat(layer.surface_m) - z_m).ramp();
        let full = left - thickness * weight;
        let partial = z_m + left / weight;
        z_m = full.positive_selects(z_m + thickness, partial);
        left = full.ramp();
    }
    z_m + left / (top * g)
}

/// Which end of a band.
#[derive(Clone, Copy)]
enum End {
    Estimate,
    Low,
    High,
}

impl End {
    const fn density(self, band: &Band) -> f32 {
        match self {
            Self::Estimate => band.estimate_kg_m3,
            Self::Low => band.low_kg_m3,
            Self::High => band.high_kg_m3,
        }
    }

    fn interface(self, layer: &Layer) -> f32 {
        match self {
            Self::Estimate => layer.surface_m,
            Self::Low => layer.surface_m - layer.surface_uncertainty_m,
            Self::High => layer.surface_m + layer.surface_uncertainty_m,
        }
    }
}

/// The top liquid with its surface at `level_m` over the plan's layers, whose interfaces cannot
/// stand above that surface.
fn layered<const N: usize>(
    plan: &Plan,
    gas_pa: f32,
    level_m: Lane<N>,
    top: Lane<N>,
    end: End,
) -> Pressure<N> {
    let g = plan.gravity_m_s2;
    let mut pressure = Pressure::gas(Lane::splat(gas_pa));
    let mut weight = top * g;
    pressure.add(level_m, weight);
    for layer in &plan.liquid.below {
        // Heavier lies below. Where the bands overlap, a lower layer is at least as heavy as the
        // one above it, which keeps each bound on its side whatever the interface does.
        let heavier = Lane::splat(end.density(&layer.density) * g).at_least(weight);
        pressure.add(level_m.at_most(Lane::splat(end.interface(layer))), heavier - weight);
        weight = heavier;
    }
    pressure
}

#[cfg(test)]
mod tests;
