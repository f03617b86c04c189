//! The pressure at a height, straight from the tank file: the estimate, and the highest and lowest
//! pressure that the level reading, the densities and the gas allow.
//!
//! No superposition of surfaces here: a column is the weight of what stands above the height, layer
//! by layer, and an envelope is the smaller or larger of plain straight lines.

use super::contents::Contents;
use crate::assess::Request;
use crate::tank::{PressureReference, Sensing, TankFile};

/// What single precision loses of a number, with a few operations behind it.
const SINGLE: f64 = 2e-7;

/// One pressure distribution.
#[derive(Clone, Debug)]
pub(crate) struct Profile {
    pub(super) gas_pa: f64,
    pub(super) liquid: Liquid,
    /// Liquid against the outside: surface and specific weight.
    pub(super) outside: Vec<(f64, f64)>,
}

#[derive(Clone, Debug)]
pub(super) enum Liquid {
    /// Layers from the top: surface and specific weight.
    Column(Vec<(f64, f64)>),
    /// What a head sensor allows.
    Envelope(Envelope),
}

/// Above the sensor as steep as `above`, below it as steep as `below`.
#[derive(Clone, Copy, Debug)]
pub(super) struct Envelope {
    pub(super) at_m: f64,
    /// Pressure at the sensor above that of the gas.
    pub(super) excess_pa: f64,
    pub(super) above_n_m3: f64,
    pub(super) below_n_m3: f64,
    /// Height above which no liquid stands.
    pub(super) roof_m: f64,
    /// Brimful with the densest liquid: height and specific weight.
    pub(super) brim: Option<(f64, f64)>,
}

/// The three distributions that act on one part.
#[derive(Clone, Debug)]
pub(crate) struct Profiles {
    pub(crate) estimate: Profile,
    pub(crate) upper: Profile,
    pub(crate) lower: Profile,
    /// Gas pressure that a reading may count as liquid, Pa: its whole band where it holds the gas.
    pub(super) traded_pa: f64,
    /// Largest specific weight and height, and the largest pressure that was read: for rounding.
    scale: [f64; 3],
}

impl Profile {
    /// Pressure at a height, Pa gauge.
    pub(crate) fn at(&self, z_m: f64) -> f64 {
        let inside = match &self.liquid {
            Liquid::Column(layers) => column(layers, z_m),
            Liquid::Envelope(envelope) => envelope.at(z_m),
        };
        let outside: f64 = self.outside.iter().map(|&(h, w)| w * (h - z_m).max(0.0)).sum();
        self.gas_pa + inside - outside
    }

    /// Whether liquid stands above a height once so much more of it does under a head sensor.
    pub(super) fn reaches(&self, z_m: f64, more_pa: f64) -> bool {
        match &self.liquid {
            Liquid::Column(layers) => column(layers, z_m) > 0.0,
            Liquid::Envelope(one) => {
                let excess_pa = one.excess_pa + more_pa;
                Envelope { excess_pa, brim: None, ..*one }.at(z_m) > 0.0
            }
        }
    }

    /// Heights at which the pressure turns.
    pub(crate) fn kinks(&self) -> Vec<f64> {
        let mut found: Vec<f64> = match &self.liquid {
            Liquid::Column(layers) => layers.iter().map(|layer| layer.0).collect(),
            Liquid::Envelope(envelope) => envelope.kinks(),
        };
        found.extend(self.outside.iter().map(|one| one.0));
        found
    }
}

/// Weight per area of what stands above a height.
fn column(layers: &[(f64, f64)], z_m: f64) -> f64 {
    let bottoms = layers.iter().skip(1).map(|layer| layer.0).chain([f64::NEG_INFINITY]);
    let weights = layers.iter().zip(bottoms);
    weights.map(|(&(top, weight), bottom)| weight * (top - z_m.max(bottom)).max(0.0)).sum()
}

impl Envelope {
    fn at(&self, z_m: f64) -> f64 {
        let above_m = (z_m - self.at_m).max(0.0);
        let read = self.excess_pa - self.above_n_m3 * above_m;
        let room = self.above_n_m3 * (self.roof_m - z_m.max(self.at_m));
        let p = read.min(room).max(0.0) + self.below_n_m3 * (self.at_m - z_m).max(0.0);
        match self.brim {
            Some((brim_m, weight)) => p.min(weight * (brim_m - z_m).max(0.0)),
            None => p,
        }
    }

    fn kinks(&self) -> Vec<f64> {
        let surface_m = self.at_m + self.excess_pa.max(0.0) / self.above_n_m3;
        let mut found = vec![self.at_m, surface_m, self.roof_m];
        found.retain(|kink| kink.is_finite());
        if let Some((brim_m, weight)) = self.brim {
            let meets = (weight * brim_m - self.excess_pa - self.above_n_m3 * self.at_m)
                / (weight - self.above_n_m3);
            found.extend([brim_m, meets]);
        }
        found
    }
}

impl Profiles {
    /// What acts on the part of that name; without one what stands in the tank.
    pub(crate) fn of(file: &TankFile, request: &Request, part: Option<&str>) -> Self {
        let contents = Contents::of(file, request);
        let mut estimate = contents.estimate();
        let (mut upper, mut lower, read_pa) = contents.bounds(file, &estimate);
        for outside in file.outside.iter().filter(|one| part.is_some_and(|name| one.touches(name)))
        {
            let weight = outside.density_kg_m3.value * contents.gravity_m_s2;
            if let Some(lowest) = outside.lowest_m {
                estimate.outside.push((lowest.value, weight));
                upper.outside.push((lowest.value, weight));
            }
            lower.outside.push((outside.highest_m.value, weight));
        }
        let kinks = [&estimate, &upper, &lower].map(Profile::kinks);
        let highest_m = kinks.iter().flatten().map(|kink| kink.abs()).fold(0.0, f64::max);
        let scale = [contents.heaviest_n_m3(), highest_m, read_pa];
        let holds_gas = file.level.as_ref().is_some_and(|level| match level.sensing {
            Sensing::Head { reference, .. } => reference.value != PressureReference::GasSpace,
            _ => false,
        });
        let traded_pa = if holds_gas { upper.gas_pa - lower.gas_pa } else { 0.0 };
        Self { estimate, upper, lower, traded_pa, scale }
    }

    /// The three in the order estimate, upper, lower.
    pub(crate) const fn all(&self) -> [&Profile; 3] {
        [&self.estimate, &self.upper, &self.lower]
    }

    /// Heights at which any of them turns.
    pub(crate) fn kinks(&self) -> Vec<f64> {
        self.all().iter().flat_map(|one| one.kinks()).collect()
    }

    /// Specific weight of the densest liquid, N/m³.
    pub(super) const fn heaviest_n_m3(&self) -> f64 {
        self.scale[0]
    }

    /// What rounding the file's decimals to single precision may cost at a height, Pa.
    pub(super) fn rounding_pa(&self, z_m: f64) -> f64 {
        let [weight_n_m3, highest_m, read_pa] = self.scale;
        let gas_pa = self.all().iter().map(|one| one.gas_pa.abs()).fold(0.0, f64::max);
        SINGLE * (weight_n_m3 * (highest_m + z_m.abs()) + read_pa + gas_pa)
    }
}
