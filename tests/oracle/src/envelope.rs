//! Bounds of the pressure from what a level sensor can and cannot know, as functions of height.
//!
//! Band: the interval a quantity is held never to leave. Each bound is written down directly as
//! the largest or smallest pressure at one height, without asking whether one liquid state
//! attains it.

use crate::liquid::{Layer, Liquid, Pressure};

/// An interval.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Band {
    /// Lower end.
    pub low: f64,
    /// Upper end.
    pub high: f64,
}

impl Band {
    /// The interval between two numbers.
    #[must_use]
    pub fn new(low: f64, high: f64) -> Self {
        Self { low, high }
    }

    /// An interval of no width.
    #[must_use]
    pub fn exactly(value: f64) -> Self {
        Self { low: value, high: value }
    }
}

/// A pressure measured at one height over liquid of uncertain density.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Head {
    /// Height of the diaphragm, m.
    pub at_m: f64,
    /// Gauge pressure there, Pa.
    pub pressure_pa: Band,
    /// Density of whatever stands in the tank, kg/m3.
    pub density_kg_m3: Band,
    /// Gas pressure, Pa.
    pub gas_pa: Band,
    /// Acceleration of gravity, m/s2.
    pub gravity_m_s2: f64,
    /// Top of the shell of an open tank, above which no liquid can stand, m.
    pub shell_top_m: Option<f64>,
    /// A second sensor: height of the surface, m.
    pub surface_m: Option<Band>,
}

/// One end of the bound.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Bound {
    /// The largest pressure at each height.
    Upper(Head),
    /// The least pressure at each height.
    Lower(Head),
}

impl Head {
    fn upper(&self, z: f64) -> f64 {
        let gas = self.gas_pa.high;
        let at_sensor = self.pressure_pa.high.max(gas);
        let head = self.gravity_m_s2 * (self.at_m - z);
        let mut bound = if z < self.at_m {
            at_sensor + self.density_kg_m3.high * head
        } else {
            gas.max(at_sensor + self.density_kg_m3.low * head)
        };
        if let Some(surface) = self.surface_m {
            let span = surface.high - self.at_m;
            if z >= surface.high {
                bound = gas;
            } else if z > self.at_m && span > 0.0 {
                let line = at_sensor + (gas - at_sensor) * (z - self.at_m) / span;
                bound = bound.min(line);
            }
        }
        if let Some(top) = self.shell_top_m {
            let column = self.gravity_m_s2 * (top - z).max(0.0);
            bound = bound.min(gas + self.density_kg_m3.high * column);
        }
        bound
    }

    fn lower(&self, z: f64) -> f64 {
        let gas = self.gas_pa.low;
        let at_sensor = self.pressure_pa.low;
        if at_sensor <= self.gas_pa.high {
            return gas;
        }
        let head = self.gravity_m_s2 * (self.at_m - z);
        if z < self.at_m {
            at_sensor + self.density_kg_m3.low * head
        } else {
            gas.max(at_sensor + self.density_kg_m3.high * head)
        }
    }
}

impl Pressure for Bound {
    fn at(&self, z_m: f64) -> f64 {
        match self {
            Self::Upper(head) => head.upper(z_m),
            Self::Lower(head) => head.lower(z_m),
        }
    }

    fn kinks(&self) -> Vec<f64> {
        let (Self::Upper(head) | Self::Lower(head)) = self;
        let mut kinks = vec![head.at_m];
        kinks.extend(head.shell_top_m);
        kinks.extend(head.surface_m.map(|band| band.high));
        // Every crossing of two of the straight lines of which the bounds are made.
        let g = head.gravity_m_s2;
        let (p, rho, gas) = (head.pressure_pa, head.density_kg_m3, head.gas_pa);
        let at_sensor = p.high.max(gas.high);
        kinks.push(head.at_m + (at_sensor - gas.high) / (rho.low * g));
        kinks.push(head.at_m + (p.low - gas.low) / (rho.high * g));
        if let Some(top) = head.shell_top_m {
            for density in [rho.low, rho.high] {
                let steeper = (rho.high - density) * g;
                if steeper > 0.0 {
                    let excess = gas.high - at_sensor + g * (rho.high * top - density * head.at_m);
                    kinks.push(excess / steeper);
                }
            }
            if let Some(span) = head.surface_m.map(|band| band.high - head.at_m) {
                let fall = (at_sensor - gas.high) / span;
                let steeper = rho.high * g - fall;
                let excess = gas.high - at_sensor + rho.high * g * top - fall * head.at_m;
                kinks.push(excess / steeper);
            }
        }
        kinks.retain(|z| z.is_finite());
        kinks
    }
}

/// The liquids of largest and of least load under a surface sensor: every quantity at its high,
/// or its low, end. `layers` are (surface, density) bands from the top down.
#[must_use]
pub fn surface_bounds(
    layers: &[(Band, Band)],
    gas_pa: Band,
    gravity_m_s2: f64,
) -> (Liquid, Liquid) {
    let end = |pick: fn(&Band) -> f64| Liquid {
        gravity_m_s2,
        gas_pa: pick(&gas_pa),
        layers: layers
            .iter()
            .map(|(surface, density)| Layer {
                surface_m: pick(surface),
                density_kg_m3: pick(density),
            })
            .collect(),
        outside: None,
    };
    (end(|band| band.low), end(|band| band.high))
}
