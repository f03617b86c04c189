//! True states of a tank, for the tests: stable profiles of density, integrated in f64 without any
//! of the formulas of this crate.
#![expect(clippy::cast_precision_loss, reason = "53 random bits and small numbers of strips")]

use super::Band;

/// A small generator of numbers (Steele, Lea and Flood, "Fast splittable pseudorandom number
/// generators", finaliser as published by Vigna).
pub(crate) struct Random(pub(crate) u64);

impl Random {
    pub(crate) fn bits(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9E37_79B9_7F4A_7C15);
        let mut z = self.0;
        z = (z ^ z >> 30).wrapping_mul(0xBF58_476D_1CE4_E5B9);
        z = (z ^ z >> 27).wrapping_mul(0x94D0_49BB_1331_11EB);
        z ^ z >> 31
    }

    /// A number of an interval; its ends come often.
    pub(crate) fn between(&mut self, low: f64, high: f64) -> f64 {
        match self.bits() % 8 {
            0 => low,
            1 => high,
            _ => low + (high - low) * (self.bits() >> 11) as f64 / (1_u64 << 53) as f64,
        }
    }

    pub(crate) fn in_band(&mut self, band: Band) -> f64 {
        self.between(f64::from(band.low_kg_m3), f64::from(band.high_kg_m3))
    }

    pub(crate) fn below(&mut self, count: u64) -> u64 {
        self.bits() % count
    }
}

/// What really stands in a tank.
#[derive(Clone, Debug)]
pub(crate) struct Profile {
    pub(crate) gravity_m_s2: f64,
    pub(crate) gas_pa: f64,
    /// Height of the top of each layer (m) and its density (kg/m³), top to bottom.
    pub(crate) layers: Vec<(f64, f64)>,
}

impl Profile {
    /// A stable profile of up to five layers within a band, with this surface.
    pub(crate) fn stable(
        random: &mut Random,
        band: Band,
        gravity_m_s2: f64,
        gas_pa: f64,
        surface_m: f64,
    ) -> Self {
        let count = 1 + random.below(5);
        let mut tops: Vec<f64> =
            (1..count).map(|_| random.between(surface_m - 12.0, surface_m)).collect();
        tops.push(surface_m);
        tops.sort_by(|a, b| b.total_cmp(a));
        let mut densities: Vec<f64> = tops.iter().map(|_| random.in_band(band)).collect();
        densities.sort_by(f64::total_cmp);
        Self { gravity_m_s2, gas_pa, layers: tops.into_iter().zip(densities).collect() }
    }

    /// Pressure at a height: the weight of what stands above it.
    pub(crate) fn pressure_pa(&self, z_m: f64) -> f64 {
        let mut column = 0.0;
        for (index, &(top_m, density)) in self.layers.iter().enumerate() {
            let bottom_m = self.layers.get(index + 1).map_or(f64::NEG_INFINITY, |next| next.0);
            let stands_on = if bottom_m > z_m { bottom_m } else { z_m };
            if top_m > stands_on {
                column += density * (top_m - stands_on);
            }
        }
        self.gas_pa + self.gravity_m_s2 * column
    }
}

/// A plane shape by its width at each distance `s` from the centroid, up the slope.
pub(crate) struct Strips {
    /// Height of the centroid, m.
    pub(crate) centroid_m: f64,
    pub(crate) sine: f64,
    /// Half the length along the slope, m.
    pub(crate) half_m: f64,
    /// Radius of a disc, or the width of a rectangle, m.
    pub(crate) size_m: f64,
    pub(crate) is_disc: bool,
}

impl Strips {
    /// `integral of f(z, s) dA` over the part from `low_s` to `high_s`, by strips (midpoint rule;
    /// with `s = r sin t` on a disc, which leaves nothing singular at its ends).
    pub(crate) fn integral(&self, [low_s, high_s]: [f64; 2], f: impl Fn(f64, f64) -> f64) -> f64 {
        const COUNT: i32 = 1_500;
        let angle = |s: f64| (s / self.half_m).clamp(-1.0, 1.0).asin();
        let (from, to) = if self.is_disc { (angle(low_s), angle(high_s)) } else { (low_s, high_s) };
        let step = (to - from) / f64::from(COUNT);
        let strip = |index: i32| {
            let t = from + step * (f64::from(index) + 0.5);
            let (s, width) = if self.is_disc {
                (self.size_m * t.sin(), 2.0 * (self.size_m * t.cos()) * (self.size_m * t.cos()))
            } else {
                (t, self.size_m)
            };
            f(self.centroid_m + s * self.sine, s) * width * step
        };
        (0..COUNT).map(strip).sum()
    }

    /// The same over pieces that end at the given heights, where `f` may have kinks.
    pub(crate) fn pieces(&self, kinks_m: &[f64], f: impl Fn(f64, f64) -> f64) -> f64 {
        let mut ends: Vec<f64> = kinks_m
            .iter()
            .map(|z| ((z - self.centroid_m) / self.sine).clamp(-self.half_m, self.half_m))
            .collect();
        ends.extend([-self.half_m, self.half_m]);
        ends.sort_by(f64::total_cmp);
        ends.windows(2).map(|pair| self.integral([pair[0], pair[1]], &f)).sum()
    }
}
