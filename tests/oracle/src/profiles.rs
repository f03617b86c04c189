//! Brute force against the envelope: liquids with many stable density profiles that all give a
//! head sensor the same reading.

use crate::envelope::Head;
use crate::liquid::Pressure;
use crate::random::Random;

/// A stable profile through a measured pressure: density falls or stays with height.
#[derive(Clone, Debug, PartialEq)]
pub struct Profile {
    at_m: f64,
    pressure_pa: f64,
    gas_pa: f64,
    gravity_m_s2: f64,
    /// (interface, density above it), ascending; the first interface lies below everything.
    steps: Vec<(f64, f64)>,
    surface_m: f64,
}

impl Profile {
    /// A profile within the bands of `head`, its interfaces spread over `reach` metres either
    /// side of the sensor. One in four takes only the ends of the bands.
    pub fn random(head: &Head, reach: f64, random: &mut Random) -> Self {
        let at_ends = random.one_in(4);
        let mut draw = |low: f64, high: f64| {
            if at_ends {
                if random.one_in(2) { low } else { high }
            } else {
                random.between(low, high)
            }
        };
        let pressure_pa = draw(head.pressure_pa.low, head.pressure_pa.high);
        let gas_pa = draw(head.gas_pa.low, head.gas_pa.high).min(pressure_pa);
        let (low, high) = (head.density_kg_m3.low, head.density_kg_m3.high);
        let mut densities: Vec<f64> = (0..6).map(|_| draw(low, high)).collect();
        densities.sort_by(|a, b| b.total_cmp(a));
        let mut interfaces: Vec<f64> =
            (0..5).map(|_| random.between(head.at_m - reach, head.at_m + reach)).collect();
        if random.one_in(3) {
            interfaces[0] = head.at_m;
        }
        interfaces.sort_by(f64::total_cmp);
        interfaces.insert(0, f64::NEG_INFINITY);
        let mut profile = Self {
            at_m: head.at_m,
            pressure_pa,
            gas_pa,
            gravity_m_s2: head.gravity_m_s2,
            steps: interfaces.into_iter().zip(densities).collect(),
            surface_m: f64::INFINITY,
        };
        profile.surface_m = profile.find_surface();
        profile
    }

    /// Column weight per area between two heights of liquid, Pa.
    fn column(&self, low: f64, high: f64) -> f64 {
        let tops = self.steps.iter().skip(1).map(|step| step.0).chain([f64::INFINITY]);
        let bodies = self.steps.iter().zip(tops);
        let mass: f64 = bodies
            .map(|((bottom, density), top)| (top.min(high) - bottom.max(low)).max(0.0) * density)
            .sum();
        self.gravity_m_s2 * mass
    }

    /// Where the pressure has fallen to that of the gas.
    fn find_surface(&self) -> f64 {
        let excess = self.pressure_pa - self.gas_pa;
        let lightest = self.steps.last().map_or(1.0, |step| step.1);
        let highest = self.at_m + excess / (lightest * self.gravity_m_s2) + 1e-9;
        crate::limit::root(self.at_m, highest, |z| excess - self.column(self.at_m, z))
            .unwrap_or(self.at_m)
    }

    /// Height of the surface, m.
    #[must_use]
    pub fn surface_m(&self) -> f64 {
        self.surface_m
    }
}

impl Pressure for Profile {
    fn at(&self, z_m: f64) -> f64 {
        if z_m >= self.surface_m {
            self.gas_pa
        } else if z_m > self.at_m {
            self.pressure_pa - self.column(self.at_m, z_m)
        } else {
            self.pressure_pa + self.column(z_m, self.at_m)
        }
    }

    fn kinks(&self) -> Vec<f64> {
        let mut kinks = vec![self.surface_m, self.at_m];
        kinks.extend(self.steps.iter().map(|step| step.0).filter(|z| z.is_finite()));
        kinks
    }
}

/// Least and largest value of `load` over `tries` random profiles.
pub fn extremes(
    head: &Head,
    reach: f64,
    (tries, seed): (u32, u64),
    load: impl Fn(&Profile) -> f64,
) -> (f64, f64) {
    let mut random = Random::new(seed);
    (0..tries).fold((f64::INFINITY, f64::NEG_INFINITY), |(least, largest), _| {
        let value = load(&Profile::random(head, reach, &mut random));
        (least.min(value), largest.max(value))
    })
}
