//! Random plans that pass the check.
#![expect(clippy::cast_possible_truncation, reason = "figures of the tests fit")]

use super::{
    GAUGE, band, bolted_disc, bolted_rectangle, course, disc, ellipse, exact, gas, head_sensor,
    layer, level_cover, rectangle, surface_sensor, water_tank, with_inward_alarm,
};
use crate::liquid::truth::Random;
use crate::liquid::{Band, DensityTable, Outside};
use crate::part::{Capacities, DesignState, Geometry, Part, Stated};
use crate::plan::{Plan, Reference, TemperaturePlan};

fn random_band(random: &mut Random, least: f64) -> Band {
    let low = random.between(least, least + 300.0);
    let high = random.between(low, low + 400.0);
    band(low as f32, random.between(low, high) as f32, high as f32)
}

/// A tank without parts: open or closed, with gas, products, layers and any sensor.
pub(crate) fn tank(random: &mut Random) -> Plan {
    let mut plan = with_inward_alarm(water_tank());
    plan.parts.clear();
    plan.outside.clear();
    plan.shell_top_m = random.between(3.0, 20.0) as f32;
    plan.overflow_m = plan.shell_top_m;
    plan.closed = random.below(2) == 0;
    let [a, b, c] = [(); 3].map(|()| random.between(-3_000.0, 8_000.0) as f32);
    let mut ordered = [a, b, c];
    ordered.sort_by(f32::total_cmp);
    plan.gas = gas(ordered[0], ordered[1], ordered[2]);
    if random.below(3) == 0 {
        plan.gas = gas(0.0, 0.0, 0.0);
    }
    plan.liquid.top = random_band(random, 600.0);
    for _ in 0..random.below(3) {
        plan.liquid.products.push(random_band(random, 600.0)).unwrap();
    }
    let mut top_m = f64::from(plan.shell_top_m);
    let mut least = f64::from(plan.liquid.top.estimate_kg_m3);
    for _ in 0..random.below(4) {
        top_m -= random.between(0.1, 3.0);
        let density = random_band(random, least);
        least = f64::from(density.estimate_kg_m3);
        let unsure_m = random.between(0.0, 1.5) as f32;
        plan.liquid.below.push(layer(top_m as f32, unsure_m, density)).unwrap();
    }
    plan.level = match random.below(4) {
        0 => surface_sensor(),
        1 => head_sensor(random.between(-1.0, 2.5) as f32, Reference::GasSpace, 0.0),
        2 => head_sensor(random.between(-1.0, 2.5) as f32, GAUGE, 0.0),
        _ => {
            let offset_pa = [101_000.0, 98_000.0, 104_000.0];
            let at_m = random.between(-1.0, 2.5) as f32;
            head_sensor(at_m, Reference::Atmosphere { offset_pa }, 0.0)
        }
    };
    plan
}

/// The same with up to six parts, liquid outside and a temperature sensor.
pub(crate) fn plan(random: &mut Random) -> Plan {
    let mut plan = tank(random);
    for _ in 0..random.below(3) {
        let highest_m = random.between(0.0, 3.0) as f32;
        let outside = Outside { highest_m, lowest_m: 0.5 * highest_m, density: exact(1000.0) };
        plan.outside.push(outside).unwrap();
    }
    if random.below(2) == 0 {
        let density = plan.liquid.top.estimate_kg_m3;
        plan.liquid.table = DensityTable::new(&[(0.0, density), (40.0, 0.98 * density)]).unwrap();
        plan.liquid.table_uncertainty = 0.01;
        plan.liquid.temperature = Some(TemperaturePlan {
            celsius_at_zero: 0.0,
            celsius_per_count_16: 0.1 / 16.0,
            uncertainty_k: 1.0,
        });
    }
    plan.level.uncertainty = match plan.level.sensor {
        crate::plan::LevelSensor::Surface => 0.02,
        crate::plan::LevelSensor::Head { .. } => 200.0,
    };
    for _ in 0..random.below(3) {
        let bottom_m = random.between(0.0, 2.5) as f32;
        super::push_pieces(&mut plan, bottom_m, random.between(0.05, 1.0) as f32);
    }
    for _ in 0..=random.below(6) {
        let mut part = part(random);
        part.outside = (random.bits() as u8) & ((1 << plan.outside.len()) - 1);
        plan.parts.push(part).unwrap();
    }
    // Drawn from a copy: the rest of a walk stays as it was before plans had a curve.
    let mut aside = Random(random.0);
    if aside.below(2) == 0 {
        let window_ms = 1_000 * (20 + aside.below(100) as u32);
        let limits_m = vec![6.0; plan.liquid.products.len() + 2];
        let curve = [[0.0, 0.0], [5.0, 200.0], [10.0, 300.0]];
        plan.state_filling(window_ms, &limits_m, &curve).unwrap();
    }
    plan
}

fn part(random: &mut Random) -> Part {
    let bottom_m = random.between(0.0, 2.5) as f32;
    let sine = random.between(0.05, 1.0) as f32;
    let size = random.between(0.1, 1.2) as f32;
    let mut part = match random.below(7) {
        6 => ellipse(bottom_m, size, random.between(0.2, 5.0) as f32, sine),
        0 => course(bottom_m, 2.4, random.between(1.0, 10.0) as f32, 0.3),
        1 => disc(bottom_m, size, sine),
        2 => rectangle(bottom_m, random.between(0.2, 3.0) as f32, size, sine),
        3 => level_cover(bottom_m, size),
        4 => bolted_disc(bottom_m, size, sine, 4 + 2 * random.below(20) as u16, 1.2 * size),
        _ => {
            let per_moment = random.between(0.05, 1.0) as f32;
            bolted_rectangle(bottom_m, [0.5, size], sine, 3 + random.below(20) as u16, per_moment)
        }
    };
    let mut capacities = || {
        let mut some = |scale: f64| {
            (random.below(2) == 0)
                .then(|| random.between(scale, 20.0 * scale) as f32)
                .and_then(Stated::new)
        };
        let (pressure_pa, force_n) = (some(5.0e3), some(2.0e3));
        let (hoop_tension_n_m, bolt_n) = (some(4.0e4), some(300.0));
        match &part.geometry {
            Geometry::Course { .. } => {
                Capacities { pressure_pa, hoop_tension_n_m, ..Capacities::default() }
            }
            Geometry::Curved(_) => Capacities { pressure_pa, ..Capacities::default() },
            Geometry::Plane { cover, .. } => {
                let bolt_n = if cover.is_some() { bolt_n } else { None };
                Capacities { pressure_pa, force_n, bolt_n, ..Capacities::default() }
            }
        }
    };
    let (outward, inward) = (capacities(), capacities());
    (part.outward, part.inward) = (outward, inward);
    for _ in 0..random.below(3) {
        let state = DesignState {
            level_m: random.between(1.0, 12.0) as f32,
            weight_n_m3: random.between(7.0e3, 1.2e4) as f32,
            gas_pa: random.between(-500.0, 3_000.0) as f32,
        };
        part.designed_for.push(state).unwrap();
    }
    part
}
