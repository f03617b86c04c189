//! What stands in the tank, above it and outside.

use crate::{between, single};
use strake_core::liquid::{Band, DensityTable, Gas, LAYERS_MAX, Layer, Outside, PRODUCTS_MAX};
use strake_core::plan::{LiquidPlan, OUTSIDE_MAX, TemperaturePlan};
use strake_oracle::random::Random;

/// A density between two numbers with a band of up to 5 %, one in three without.
fn band(random: &mut Random, low_kg_m3: f64, high_kg_m3: f64) -> Band {
    let estimate = f64::from(between(random, low_kg_m3, high_kg_m3));
    let mut end = |sign: f64| {
        let share = if random.one_in(3) { 0.0 } else { random.between(0.0, 0.05) };
        single(estimate * (1.0 + sign * share))
    };
    let (low_kg_m3, high_kg_m3) = (end(-1.0), end(1.0));
    Band { estimate_kg_m3: single(estimate), low_kg_m3, high_kg_m3 }
}

/// Rising temperatures; densities that mostly fall, as a liquid's do.
fn table(random: &mut Random, near_kg_m3: f64) -> DensityTable {
    let mut celsius = random.between(-20.0, 10.0);
    let mut points = Vec::new();
    for _ in 0..=random.below(8) {
        let density = near_kg_m3 * (1.0 - 4e-4 * celsius) + random.between(-3.0, 3.0);
        points.push((single(celsius), single(density)));
        celsius += random.between(1.0, 20.0);
    }
    DensityTable::new(&points).unwrap_or_default()
}

fn layers(random: &mut Random, top: Band, height_m: f64) -> Vec<Layer> {
    let count = if random.one_in(2) { 0 } else { random.below(4) as usize };
    let (mut surface_m, mut above) = (0.8 * height_m, f64::from(top.estimate_kg_m3));
    (0..count.min(LAYERS_MAX - 1))
        .map(|_| {
            surface_m -= random.between(0.05, 0.3) * height_m;
            let density = band(random, above, above + 300.0);
            above = f64::from(density.estimate_kg_m3);
            let spread = if random.one_in(3) { 0.0 } else { random.between(0.0, 0.3) };
            Layer { surface_m: single(surface_m), surface_uncertainty_m: single(spread), density }
        })
        .collect()
}

pub(crate) fn liquid(random: &mut Random, height_m: f64) -> LiquidPlan {
    let top = band(random, 600.0, 1900.0);
    let table = if random.one_in(2) {
        table(random, f64::from(top.estimate_kg_m3))
    } else {
        DensityTable::empty()
    };
    let temperature = (!table.points().is_empty() && !random.one_in(4)).then(|| TemperaturePlan {
        celsius_at_zero: between(random, -60.0, 0.0),
        celsius_per_count_16: between(random, 1e-3, 1e-2),
        uncertainty_k: between(random, 0.0, 5.0),
    });
    let products = if random.one_in(3) { random.below(8) as usize } else { 0 };
    LiquidPlan {
        top,
        table,
        table_uncertainty: between(random, 0.0, 0.01),
        temperature,
        below: layers(random, top, height_m).into_iter().collect(),
        products: (0..products.min(PRODUCTS_MAX)).map(|_| band(random, 600.0, 1900.0)).collect(),
    }
}

/// None in half of the plans; else from vacuum to 50 kPa.
pub(crate) fn gas(random: &mut Random) -> Gas {
    if random.one_in(2) {
        return Gas { lowest_pa: 0.0, nominal_pa: 0.0, highest_pa: 0.0 };
    }
    let lowest = random.between(-5e3, 2e3);
    let nominal = lowest + random.between(0.0, 5e3);
    let highest = nominal + random.between(0.0, 45e3);
    Gas { lowest_pa: single(lowest), nominal_pa: single(nominal), highest_pa: single(highest) }
}

pub(crate) fn outside(random: &mut Random, height_m: f64) -> Vec<Outside> {
    let count = if random.one_in(2) { 0 } else { 1 + random.below(2) as usize };
    (0..count.min(OUTSIDE_MAX))
        .map(|_| {
            let lowest = random.between(-0.5, 0.5 * height_m);
            let highest = lowest + random.between(0.0, 0.5 * height_m);
            let density = band(random, 600.0, 1400.0);
            Outside { highest_m: single(highest), lowest_m: single(lowest), density }
        })
        .collect()
}
