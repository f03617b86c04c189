//! What presses on a wall: gas, layers of liquid inside, one liquid outside.
//!
//! The pressure at a height is found by walking down through the layers and adding the weight of
//! each thickness met. No layer reaches above the top surface.

/// A body of liquid up to a surface.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Layer {
    /// Height of its upper surface above the datum, m.
    pub surface_m: f64,
    /// Density, kg/m3.
    pub density_kg_m3: f64,
}

/// Gas and liquids at rest on both sides of a wall.
#[derive(Clone, Debug, PartialEq)]
pub struct Liquid {
    /// Acceleration of gravity, m/s2.
    pub gravity_m_s2: f64,
    /// Gauge pressure of the gas above the liquid, Pa.
    pub gas_pa: f64,
    /// Layers inside from the top down. Surfaces above that of the first are taken at the first.
    pub layers: Vec<Layer>,
    /// Liquid against the outer side, open to the atmosphere.
    pub outside: Option<Layer>,
}

/// Net pressure (inside less outside) as a function of height alone.
pub trait Pressure {
    /// Net pressure at height `z_m`, Pa.
    fn at(&self, z_m: f64) -> f64;
    /// Every height at which the slope of the pressure may jump. Between them it is linear.
    fn kinks(&self) -> Vec<f64>;
}

/// Standard gravity, m/s2 (ISO 80000-3).
pub const STANDARD_GRAVITY: f64 = 9.806_65;

impl Liquid {
    /// One liquid of `density_kg_m3` up to `surface_m` under atmospheric pressure.
    #[must_use]
    pub fn uniform(density_kg_m3: f64, surface_m: f64) -> Self {
        let layers = vec![Layer { surface_m, density_kg_m3 }];
        Self { gravity_m_s2: STANDARD_GRAVITY, gas_pa: 0.0, layers, outside: None }
    }

    /// The same liquids under gas at `gas_pa`.
    #[must_use]
    pub fn with_gas(mut self, gas_pa: f64) -> Self {
        self.gas_pa = gas_pa;
        self
    }

    /// The same liquids with `density_kg_m3` up to `surface_m` on the outer side.
    #[must_use]
    pub fn with_outside(mut self, density_kg_m3: f64, surface_m: f64) -> Self {
        self.outside = Some(Layer { surface_m, density_kg_m3 });
        self
    }

    /// The same state with the top surface moved to `surface_m`, lower surfaces held.
    #[must_use]
    pub fn filled_to(mut self, surface_m: f64) -> Self {
        if let Some(top) = self.layers.first_mut() {
            top.surface_m = surface_m;
        }
        self
    }

    /// Height of the top surface, m; minus infinity without liquid.
    #[must_use]
    pub fn surface_m(&self) -> f64 {
        self.layers.first().map_or(f64::NEG_INFINITY, |layer| layer.surface_m)
    }

    /// Layers as (upper surface, lower surface, density) after clamping to the top surface.
    #[must_use]
    pub fn bodies(&self) -> Vec<(f64, f64, f64)> {
        let mut ceiling = f64::INFINITY;
        let mut bodies = Vec::new();
        for (i, layer) in self.layers.iter().enumerate() {
            let top = layer.surface_m.min(ceiling);
            ceiling = top;
            let below = self.layers.get(i + 1);
            let bottom = below.map_or(f64::NEG_INFINITY, |next| next.surface_m.min(top));
            bodies.push((top, bottom, layer.density_kg_m3));
        }
        bodies
    }
}

impl Pressure for Liquid {
    fn at(&self, z_m: f64) -> f64 {
        let mut pressure = self.gas_pa;
        for (top, bottom, density) in self.bodies() {
            pressure += self.gravity_m_s2 * density * (top - bottom.max(z_m)).max(0.0);
        }
        let outside = self.outside.map_or(0.0, |body| {
            self.gravity_m_s2 * body.density_kg_m3 * (body.surface_m - z_m).max(0.0)
        });
        pressure - outside
    }

    fn kinks(&self) -> Vec<f64> {
        let mut kinks: Vec<f64> = self.bodies().iter().map(|body| body.0).collect();
        kinks.extend(self.outside.map(|body| body.surface_m));
        kinks
    }
}

/// The kinks and, between and beyond them, the heights at which the pressure changes sign.
#[must_use]
pub fn kinks_and_zeros(pressure: &dyn Pressure) -> Vec<f64> {
    let mut cuts: Vec<f64> = pressure.kinks().into_iter().filter(|z| z.is_finite()).collect();
    cuts.sort_by(f64::total_cmp);
    let mut ends = cuts.clone();
    if let (Some(first), Some(last)) = (cuts.first(), cuts.last()) {
        ends.insert(0, first - 1e4);
        ends.push(last + 1e4);
    }
    for pair in ends.windows(2) {
        let (below, above) = (pressure.at(pair[0]), pressure.at(pair[1]));
        if below * above < 0.0 {
            cuts.push(pair[0] + (pair[1] - pair[0]) * below / (below - above));
        }
    }
    cuts
}
