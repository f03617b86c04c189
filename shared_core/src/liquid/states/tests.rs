//! No state that a reading allows leaves the bounds; published and own cases; lanes.
#![expect(clippy::cast_possible_truncation, reason = "figures of the tests fit")]

use super::{States, states};
use crate::evaluate::pressures;
use crate::lane::Lane;
use crate::liquid::truth::{Profile, Random};
use crate::liquid::{Band, Readings};
use crate::plan::builder::{
    G, GAUGE, band, exact, gas, head_sensor, layer, random, reading, water_tank,
};
use crate::plan::{LevelSensor, Plan, Reference};
use crate::pressure::Pressure;
use crate::shape::{Circle, Face, Rectangle, Shape};
use proptest::prelude::*;

fn at(pressure: &Pressure<1>, z_m: f64) -> f64 {
    f64::from(pressure.at(Lane([z_m as f32])).lane(0))
}

fn near(value: f64, expected: f64, tolerance: f64) {
    assert!((value - expected).abs() <= tolerance, "{value} is not {expected}");
}

/// The three states of an exact reading.
fn of(plan: &Plan, value: f64) -> States<1> {
    let value = value as f32;
    pressures(plan, &[reading(plan, value, value, value)])
}

fn head(at_m: f32, density: Band) -> Plan {
    let mut plan = water_tank();
    plan.shell_top_m = 30.0;
    plan.liquid.top = density;
    plan.level = head_sensor(at_m, GAUGE, 0.0);
    plan
}

/// A state of the tank that the plan allows, and the sensor's true quantity in it.
fn random_truth(random: &mut Random, plan: &Plan) -> Option<(Profile, f64)> {
    let g = f64::from(plan.gravity_m_s2);
    let gas_pa = random.between(plan.gas.lowest_pa.into(), plan.gas.highest_pa.into());
    let brim_m = f64::from(plan.shell_top_m) + if plan.closed { 4.0 } else { 0.0 };
    let surface_m = random.between(-1.0, brim_m);
    match plan.level.sensor {
        LevelSensor::Head { at_m, reference } => {
            let band = plan.liquid.with_layers(plan.liquid.any_product());
            let profile = Profile::stable(random, band, g, gas_pa, surface_m);
            let pressure = profile.pressure_pa(at_m.into());
            let offset = match reference {
                Reference::GasSpace => -gas_pa,
                Reference::Atmosphere { offset_pa: [_, low, high] } => {
                    random.between(low.into(), high.into())
                }
            };
            Some((profile, pressure + offset))
        }
        LevelSensor::Surface => {
            let mut layers = vec![(surface_m, random.in_band(plan.liquid.any_product()))];
            for layer in &plan.liquid.below {
                let &(above_m, lighter) = layers.last()?;
                let (middle, half) =
                    (f64::from(layer.surface_m), f64::from(layer.surface_uncertainty_m));
                let top_m = random.between(middle - half, middle + half);
                let density = random.in_band(layer.density);
                // The entered bands and heights must leave the layers in their order.
                let clear = above_m >= middle - half || (above_m - surface_m).abs() < 1e-9;
                if density < lighter || !clear {
                    return None;
                }
                layers.push((if top_m < above_m { top_m } else { above_m }, density));
            }
            Some((Profile { gravity_m_s2: g, gas_pa, layers }, surface_m))
        }
    }
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(300))]

    #[test]
    fn no_state_leaves_the_bounds(seed in any::<u64>()) {
        let mut random = Random(seed);
        let plan = random::tank(&mut random);
        for _ in 0..20 {
            let Some((profile, quantity)) = random_truth(&mut random, &plan) else { continue };
            let is_surface = plan.level.sensor == LevelSensor::Surface;
            let half = random.between(0.0, if is_surface { 0.3 } else { 3_000.0 });
            let read = quantity + random.between(-half, half);
            let resolved =
                reading(&plan, read as f32, (read - half) as f32, (read + half) as f32);
            let bounds = pressures(&plan, &[resolved]);
            for _ in 0..30 {
                let z_m = f64::from(random.between(-2.0, 22.0) as f32);
                let truth = profile.pressure_pa(z_m);
                let (low, high) = (at(&bounds.lower, z_m), at(&bounds.upper, z_m));
                let slack = 0.1 + 2e-6 * (truth.abs() + quantity.abs());
                prop_assert!(truth <= high + slack, "{truth} above {high} at {z_m}: {profile:?}");
                prop_assert!(truth >= low - slack, "{truth} below {low} at {z_m}: {profile:?}");
            }
        }
    }

    /// Whatever is read, even what cannot be: lower <= estimate <= upper at every height, and every
    /// number finite.
    #[test]
    fn the_estimate_lies_between_the_bounds(seed in any::<u64>(), far in any::<bool>()) {
        let mut random = Random(seed);
        let plan = random::tank(&mut random);
        let reach = if far { 1.0e15 } else { 300_000.0 };
        let scale = if plan.level.sensor == LevelSensor::Surface { 1e-4 } else { 1.0 };
        let read = random.between(-reach, reach) * scale;
        let half = random.between(0.0, 1_000.0) * scale;
        let resolved = reading(&plan, read as f32, (read - half) as f32, (read + half) as f32);
        let bounds = pressures(&plan, &[resolved]);
        for _ in 0..40 {
            let z_m = random.between(-2.0, 22.0);
            let [low, middle, high] =
                [&bounds.lower, &bounds.estimate, &bounds.upper].map(|state| at(state, z_m));
            prop_assert!(low.is_finite() && middle.is_finite() && high.is_finite());
            let slack = 0.1 + 4e-6 * (high.abs() + low.abs() + read.abs() / scale * 1e-4);
            prop_assert!(low <= high + slack, "{low} above {high} at {z_m}");
            prop_assert!(middle <= high + slack, "{middle} above {high} at {z_m}");
            // More than brimful of the entered density: the estimate stays at the brim.
            if plan.open_top_m().is_none_or(|top_m| bounds.level_m.lane(0) < top_m) {
                prop_assert!(low <= middle + slack, "{low} above {middle} at {z_m}");
            }
        }
    }

    /// One lane of many has the bits of one alone, through every branch of the envelope.
    #[test]
    fn lanes_have_the_same_bits(seed in any::<u64>()) {
        let mut random = Random(seed);
        let plan = random::tank(&mut random);
        let scale = if plan.level.sensor == LevelSensor::Surface { 1e-4 } else { 1.0 };
        let resolved: [_; 8] = core::array::from_fn(|_| {
            let read = random.between(-5_000.0, 300_000.0) * scale;
            let half = random.between(0.0, 500.0) * scale;
            reading(&plan, read as f32, (read - half) as f32, (read + half) as f32)
        });
        let together = pressures(&plan, &resolved);
        for (lane, one) in resolved.iter().enumerate() {
            let alone = pressures(&plan, &[*one]);
            for _ in 0..10 {
                let z_m = random.between(-2.0, 22.0) as f32;
                for (many, single) in [
                    (&together.estimate, &alone.estimate),
                    (&together.upper, &alone.upper),
                    (&together.lower, &alone.lower),
                ] {
                    let many = many.at(Lane::splat(z_m)).lane(lane) + 0.0;
                    let single = single.at(Lane([z_m])).lane(0) + 0.0;
                    prop_assert_eq!(many.to_bits(), single.to_bits());
                }
                // Heights that occur in many lanes only must be heights of the one as well: the
                // ratio to a design pressure is taken at each of them.
                for surface in together.upper.surfaces() {
                    let bits = (surface.height_m.lane(lane) + 0.0).to_bits();
                    let heights = alone.upper.surfaces().iter().map(|other| other.height_m);
                    let mut known = heights.map(|height| (height.lane(0) + 0.0).to_bits());
                    prop_assert!(known.any(|other| other == bits));
                }
            }
        }
    }
}

/// The upper envelope of a head sensor is itself a stable state.
#[test]
fn the_upper_bound_is_attained() {
    let mut plan = head(2.0, band(800.0, 1000.0, 1400.0));
    plan.gas = gas(-500.0, 0.0, 2_000.0);
    let upper = of(&plan, 25_000.0).upper;
    let above_m = (25_000.0 - 2_000.0) / (800.0 * G);
    let profile = Profile {
        gravity_m_s2: G,
        gas_pa: 2_000.0,
        layers: vec![(2.0 + above_m, 800.0), (2.0, 1400.0)],
    };
    for z in 0..80 {
        let z_m = f64::from(z) * 0.1;
        near(at(&upper, z_m), profile.pressure_pa(z_m), 0.05);
    }
    near(profile.pressure_pa(2.0), 25_000.0, 1e-6);
}

/// 60 kPa at 0.15 m, 840 or 1280 kg/m³, an element at 4.0 m: the lightest product governs there.
#[test]
fn an_unknown_product_above_a_head_sensor() {
    let mut plan = head(0.15, exact(1280.0));
    plan.liquid.products.push(exact(840.0)).unwrap();
    let bounds = of(&plan, 60_000.0);
    near(at(&bounds.upper, 4.0), 28_290.0, 10.0);
    near(at(&bounds.lower, 4.0), 11_670.0, 10.0);
}

fn wall_force(pressure: &Pressure<1>, length_m: f32) -> f64 {
    let wall = Shape::Rectangle(Rectangle::new(1.0, length_m, 1.0));
    f64::from(pressure.on(&Face::of(&wall, 0.0)).force_n.lane(0))
}

/// Own cases 07 and 08: bounds over every stable profile, not over the corners.
#[test]
fn profiles_beat_the_corners() {
    let bounds = of(&head(2.0, band(800.0, 1000.0, 1400.0)), 25_000.0);
    near(wall_force(&bounds.upper, 6.0), 117_291.285, 2.3);
    assert!(wall_force(&bounds.lower, 6.0) <= 100_000.0);
    let mut plan = head(1.0, exact(850.0));
    plan.liquid.below.push(layer(1.0, 0.6, exact(1200.0))).unwrap();
    assert!(wall_force(&of(&plan, 40_000.0).upper, 3.0) >= 109_212.685 - 2.2);
}

/// 77.669 kPa on the floor, an element at 3 m: 1000 entered shows 48.249 kPa, 1500 shows 33.539.
#[test]
fn a_wrong_density_is_inside_the_bounds() {
    let bounds = of(&head(0.0, band(1000.0, 1320.0, 1500.0)), 77_669.0);
    near(at(&bounds.estimate, 3.0), 38_834.0, 1.0);
    near(at(&bounds.upper, 3.0), 48_249.0, 1.0);
    near(at(&bounds.lower, 3.0), 33_539.0, 1.0);
    let exact_bounds = of(&head(0.0, exact(1320.0)), 77_669.0);
    near(wall_force(&exact_bounds.estimate, 8.0), 233_010.0, 10.0);
    // A surface sensor is unsafe the other way: its upper bound takes the heaviest.
    let mut plan = water_tank();
    plan.liquid.top = band(1000.0, 1000.0, 1320.0);
    near(wall_force(&of(&plan, 6.0).estimate, 6.0), 176_520.0, 10.0);
    near(wall_force(&of(&plan, 6.0).upper, 6.0), 233_010.0, 10.0);
}

/// Own case 28: 830 over 1050, interface entered at 0.80 m, level 0.50 m.
#[test]
fn layers_cannot_stand_above_the_surface() {
    let mut plan = water_tank();
    plan.liquid.top = exact(830.0);
    plan.liquid.below.push(layer(0.8, 0.0, exact(1050.0))).unwrap();
    let bounds = of(&plan, 0.5);
    for state in [&bounds.estimate, &bounds.upper, &bounds.lower] {
        near(at(state, 0.0), 5_148.491_25, 0.1);
        near(at(state, 0.6), 0.0, 0.0);
    }
    // The same state by a head sensor on the floor: the surface lies below the interface.
    plan.level = head_sensor(0.0, GAUGE, 0.0);
    near(f64::from(of(&plan, 5_148.491_25).level_m.lane(0)), 0.5, 1e-6);
    near(f64::from(of(&plan, 10_297.0).level_m.lane(0)), 0.8 + 2_059.414 / (830.0 * G), 1e-4);
}

/// C1: 4 m of 1010 kg/m³ under 5 kPa; a round hatch of 0.6 m at 0.8 m and one in the roof.
#[test]
fn gas_acts_on_wet_and_dry_parts() {
    let mut plan = water_tank();
    plan.closed = true;
    plan.liquid.top = exact(1010.0);
    plan.gas = gas(5_000.0, 5_000.0, 5_000.0);
    let surface = of(&plan, 4.0);
    plan.level = head_sensor(0.0, GAUGE, 0.0);
    let gauge = of(&plan, 4.0 * 1010.0 * G + 5_000.0);
    plan.level = head_sensor(0.0, Reference::GasSpace, 0.0);
    let differential = of(&plan, 4.0 * 1010.0 * G);
    let offset_pa = [101_325.0; 3];
    plan.level = head_sensor(0.0, Reference::Atmosphere { offset_pa }, 0.0);
    let absolute = of(&plan, 4.0 * 1010.0 * G + 106_325.0);
    let hatch = Shape::Circle(Circle::new(0.3, 1.0));
    let roof = Shape::Level { area_m2: core::f32::consts::PI * 0.09 };
    for bounds in [surface, gauge, differential, absolute] {
        for state in [&bounds.estimate, &bounds.upper, &bounds.lower] {
            near(at(state, 0.0), 44_619.0, 1.0);
            near(f64::from(state.on(&Face::of(&hatch, 0.5)).force_n.lane(0)), 10_375.0, 1.0);
            near(f64::from(state.on(&Face::of(&roof, 10.0)).force_n.lane(0)), 1_414.0, 1.0);
        }
    }
    // Without compensation the same gauge reading would show 4.505 m.
    plan.gas = gas(0.0, 0.0, 0.0);
    plan.level = head_sensor(0.0, GAUGE, 0.0);
    near(f64::from(of(&plan, 44_619.0).level_m.lane(0)), 4.505, 1e-3);
}

/// C2: 1.5 kPa of vacuum, level 0.6 m, a hatch of 0.6 m by 0.6 m at 0.3 m.
#[test]
fn vacuum_keeps_its_sign() {
    let mut plan = water_tank();
    plan.gas = gas(-1_500.0, -1_500.0, -1_500.0);
    let state = of(&plan, 0.6).estimate;
    let hatch = Shape::Rectangle(Rectangle::new(0.6, 0.6, 1.0));
    let r = state.on(&Face::of(&hatch, 0.3));
    near(f64::from(r.force_n.lane(0)), -275.2, 0.05);
    near(f64::from(r.moment_n_m.lane(0) + 0.3 * r.force_n.lane(0)), -135.5, 0.05);
    near(
        f64::from(of(&plan, 0.2).estimate.on(&Face::of(&hatch, 0.3)).force_n.lane(0)),
        -540.0,
        1e-3,
    );
    near(at(&state, 0.6 - 0.153), 0.0, 1.0);
}

/// At or below the diaphragm: full to it above, the empty tank below.
#[test]
fn a_dry_sensor_bounds_what_it_cannot_see() {
    let mut plan = head(0.25, band(900.0, 1000.0, 1100.0));
    plan.gas = gas(-600.0, 300.0, 2_000.0);
    // Dry at the highest gas pressure, wet above it.
    for (reading_pa, below_pa) in [(300.0, -600.0), (2_000.0, -600.0), (2_001.0, 2_001.0)] {
        let bounds = of(&plan, reading_pa);
        near(at(&bounds.lower, 0.25), below_pa, 0.01);
    }
    let bounds = of(&plan, 300.0);
    near(f64::from(bounds.level_m.lane(0)), 0.25, 1e-6);
    near(at(&bounds.upper, 0.0), 2_000.0 + 0.25 * 1100.0 * G, 0.01);
    near(at(&bounds.lower, 0.0), -600.0, 0.0);
}

/// An open tank is never fuller than full; its lower bound is not above its upper.
#[test]
fn the_shell_top_caps_an_open_tank_only() {
    let mut plan = head(0.0, band(900.0, 1000.0, 1300.0));
    plan.shell_top_m = 5.0;
    let bounds = of(&plan, 50_000.0);
    // 5.67 m of the lightest: the brim with the heaviest meets the envelope on the way down.
    near(at(&bounds.upper, 5.0), 0.0, 0.0);
    near(at(&bounds.upper, 4.9), 0.1 * 1300.0 * G, 0.1);
    near(at(&bounds.upper, 0.0), 50_000.0, 0.1);
    near(at(&bounds.upper, 1.0), 50_000.0 - 900.0 * G, 0.1);
    let brimful = of(&plan, 90_000.0);
    for z_m in [0.0, 1.0, 4.0] {
        near(at(&brimful.upper, z_m), (5.0 - z_m) * 1300.0 * G, 0.1);
        assert!(at(&brimful.lower, z_m) <= at(&brimful.upper, z_m));
    }
    plan.closed = true;
    near(at(&of(&plan, 90_000.0).upper, 1.0), 90_000.0 - 900.0 * G, 0.1);
    // A surface reading above the shell: all three stand at the brim.
    let mut plan = water_tank();
    plan.shell_top_m = 5.0;
    let bounds = of(&plan, 5.5);
    for state in [&bounds.lower, &bounds.estimate, &bounds.upper] {
        near(at(state, 0.0), 5.0 * 1000.0 * G, 0.1);
    }
}

/// A density estimate above that of a layer: the estimate still has the pressure that was read.
#[test]
fn the_estimate_has_the_pressure_read() {
    let mut plan = head(0.0, exact(1000.0));
    plan.liquid.below.push(layer(1.0, 0.0, exact(1100.0))).unwrap();
    let readings = Readings {
        estimate: Lane([30_000.0]),
        low: Lane([30_000.0]),
        high: Lane([30_000.0]),
        density: [Lane([1200.0]); 3],
    };
    near(at(&states(&plan, &readings).estimate, 0.0), 30_000.0, 0.1);
}
