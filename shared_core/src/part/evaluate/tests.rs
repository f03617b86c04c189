//! Loads of parts against strips, bolts against true states, capacities by hand and by dense scan.
#![expect(clippy::cast_possible_truncation, reason = "figures of the tests fit")]

use super::{PartLoads, evaluate};
use crate::evaluate::pressures;
use crate::lane::at_most;
use crate::liquid::truth::{Profile, Random, Strips};
use crate::liquid::{Outside, States};
use crate::part::{Capacities, Cover, DesignState, Geometry, Part, Stated};
use crate::plan::builder::{
    G, GAUGE, band, bolted_disc, course, disc, exact, gas, head_sensor, level_cover, random,
    reading, rectangle, water_tank, with_inward_alarm,
};
use crate::plan::{LevelSensor, Plan};
use crate::pressure::Pressure;
use crate::shape::{Face, Shape};
use core::f64::consts::PI;
use proptest::prelude::*;

fn near(value: f32, expected: f64, tolerance: f64) {
    assert!((f64::from(value) - expected).abs() <= tolerance, "{value} is not {expected}");
}

fn of(plan: &Plan, part: &Part, value: f64) -> PartLoads<1> {
    let value = value as f32;
    evaluate(plan, part, &pressures(plan, &[reading(plan, value, value, value)]))
}

fn random_states(random: &mut Random, plan: &Plan) -> States<1> {
    let read = match plan.level.sensor {
        LevelSensor::Surface => random.between(-0.5, 12.0),
        LevelSensor::Head { .. } => random.between(-2_000.0, 120_000.0),
    };
    let half = 0.01 * read.abs();
    pressures(plan, &[reading(plan, read as f32, (read - half) as f32, (read + half) as f32)])
}

/// The terms of a pressure in f64: gas, and height and step of each surface.
fn terms(pressure: &Pressure<1>) -> (f64, Vec<(f64, f64)>) {
    let surfaces = pressure.surfaces().iter();
    let surfaces = surfaces.map(|s| (s.height_m.lane(0).into(), s.step_n_m3.lane(0).into()));
    (pressure.gas_pa.lane(0).into(), surfaces.collect())
}

fn exact_pa(pressure: &Pressure<1>, z_m: f64) -> f64 {
    let (gas, surfaces) = terms(pressure);
    surfaces.iter().filter(|one| one.0 > z_m).fold(gas, |p, (h, step)| p + step * (h - z_m))
}

fn strips_of(part: &Part) -> Option<Strips> {
    let Geometry::Plane { shape, sine, .. } = &part.geometry else { return None };
    let sine = f64::from(*sine);
    let (half_m, size_m, is_disc) = match shape {
        Shape::Circle(circle) if circle.aspect() > 1.0 || circle.aspect() < 1.0 => return None,
        Shape::Circle(circle) => (circle.radius_m().into(), circle.radius_m().into(), true),
        Shape::Rectangle(rectangle) => {
            let [width_m, length_m] = rectangle.sides_m();
            (0.5 * f64::from(length_m), width_m.into(), false)
        }
        Shape::Pieces(_) | Shape::Level { .. } => return None,
    };
    let centroid_m = f64::from(part.bottom_m) + half_m * sine;
    Some(Strips { centroid_m, sine, half_m, size_m, is_disc })
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(100))]

    /// Force and moment of each state against strips: 2e-6 of the integral of the absolute terms.
    #[test]
    fn forces_and_moments_of_every_state(seed in any::<u64>()) {
        let mut random = Random(seed);
        let plan = random::plan(&mut random);
        let states = random_states(&mut random, &plan);
        for part in &plan.parts {
            let (Some(strips), Geometry::Plane { shape, .. }) = (strips_of(part), &part.geometry)
            else { continue };
            for state in [&states.estimate, &states.upper, &states.lower] {
                let found = state.on(&Face::of(shape, part.bottom_m));
                let (gas, surfaces) = terms(state);
                let heights = surfaces.iter().map(|one| one.0);
                let kinks: Vec<f64> = heights.chain([strips.centroid_m]).collect();
                let size = |z: f64| {
                    surfaces.iter().filter(|one| one.0 > z)
                        .fold(gas.abs(), |p, (h, step)| p + step.abs() * (h - z))
                };
                let force = strips.pieces(&kinks, |z, _| exact_pa(state, z));
                let moment = strips.pieces(&kinks, |z, s| exact_pa(state, z) * s);
                let force_size = strips.pieces(&kinks, |z, _| size(z));
                let moment_size = strips.pieces(&kinks, |z, s| size(z) * s.abs());
                let force_error = (f64::from(found.force_n.lane(0)) - force).abs();
                let moment_error = (f64::from(found.moment_n_m.lane(0)) - moment).abs();
                prop_assert!(force_error <= 2e-6 * force_size, "{} {}", force_error, force_size);
                prop_assert!(moment_error <= 2e-6 * moment_size, "{moment_error} {moment_size}");
            }
        }
    }

    /// No stable state that the head allows gives a bolt more than the bound or less than the
    /// least.
    #[test]
    fn bolt_bounds_hold_for_every_profile(seed in any::<u64>()) {
        let mut random = Random(seed);
        let mut plan = water_tank();
        plan.closed = random.below(2) == 0;
        let low = random.between(700.0, 1_000.0);
        plan.liquid.top = band(low as f32, low as f32, (low + random.between(0.0, 500.0)) as f32);
        let vacuum = random.between(-2_000.0, 0.0) as f32;
        plan.gas = gas(vacuum, 0.0, random.between(0.0, 4_000.0) as f32);
        let at_m = random.between(-0.5, 2.0);
        plan.level = head_sensor(at_m as f32, GAUGE, 0.0);
        let radius_m = random.between(0.2, 0.9);
        let bolt_radius_m = radius_m * random.between(1.05, 2.4);
        let (sine, bottom_m) = (random.between(0.2, 1.0) as f32, random.between(0.0, 2.0) as f32);
        let count = 4 + 2 * random.below(14) as u16;
        let part = bolted_disc(bottom_m, radius_m as f32, sine, count, bolt_radius_m as f32);
        let strips = strips_of(&part).unwrap();
        let g = f64::from(plan.gravity_m_s2);
        for _ in 0..6 {
            let gas_pa = random.between(plan.gas.lowest_pa.into(), plan.gas.highest_pa.into());
            let surface_m = random.between(-1.0, 9.9);
            let profile = Profile::stable(&mut random, plan.liquid.top, g, gas_pa, surface_m);
            let read = profile.pressure_pa((at_m as f32).into());
            let half = random.between(0.0, 500.0);
            let off = read + random.between(-half, half);
            let resolved = reading(&plan, off as f32, (off - half) as f32, (off + half) as f32);
            let loads = evaluate(&plan, &part, &pressures(&plan, &[resolved]));
            let kinks: Vec<f64> = profile.layers.iter().map(|one| one.0).collect();
            let force = strips.pieces(&kinks, |z, _| profile.pressure_pa(z));
            let moment = strips.pieces(&kinks, |z, s| profile.pressure_pa(z) * s);
            let n = f64::from(count);
            let size = strips.pieces(&kinks, |z, _| profile.pressure_pa(z).abs() + 100.0);
            let slack = 1e-5 * size / n;
            for bolt in 0..count {
                let s = -bolt_radius_m * (2.0 * PI * f64::from(bolt) / n).cos();
                let share = force / n + moment * s / (0.5 * n * bolt_radius_m * bolt_radius_m);
                let (most, least) = (loads.outward.bolt_n.lane(0), loads.inward.bolt_n.lane(0));
                prop_assert!(share <= f64::from(most) + slack, "{share} above {most}");
                prop_assert!(share >= f64::from(least) - slack, "{share} below {least}");
            }
        }
    }

    /// The ratio to the design pressure is the largest over all heights of the part.
    #[test]
    fn designed_for_holds_at_every_height(seed in any::<u64>()) {
        let mut random = Random(seed);
        let mut plan = random::plan(&mut random);
        let states = random_states(&mut random, &plan);
        for part in &mut plan.parts {
            part.outside = 0;
            (part.outward, part.inward) = (Capacities::default(), Capacities::default());
        }
        for part in &plan.parts {
            let found = f64::from(evaluate(&plan, part, &states).utilisation_bound.lane(0));
            let (bottom, top) = (f64::from(part.bottom_m), f64::from(part.top_m));
            let (_, surfaces) = terms(&states.upper);
            let mut heights: Vec<f64> =
                (0..=2_000).map(|i| bottom + (top - bottom) * f64::from(i) / 2_000.0).collect();
            heights.extend(surfaces.iter().map(|one| one.0.clamp(bottom, top)));
            let (mut largest, mut slack) = (0.0_f64, 1e-5);
            for design in &part.designed_for {
                let (level, weight) = (f64::from(design.level_m), f64::from(design.weight_n_m3));
                let gas_pa = f64::from(design.gas_pa);
                heights.push(level.clamp(bottom, top));
                heights.push((level - (10.0 - gas_pa).max(0.0) / weight).clamp(bottom, top));
                for z in &heights {
                    let designed = (gas_pa + weight * (level - z).max(0.0)).max(10.0);
                    let ratio = exact_pa(&states.upper, *z) / designed;
                    if ratio > largest {
                        // A height known to 1e-6 m, at the steepest slope.
                        (largest, slack) = (ratio, 1e-5 + 2e-6 * weight.max(1.3e4) / designed);
                    }
                }
            }
            let largest = largest.min(999.0);
            let error = (found - largest).abs();
            prop_assert!(error <= slack * (1.0 + largest), "{found} {largest} {part:?}");
        }
    }

    /// What is not stated is not judged; the inward ratio uses the inward capacity alone.
    #[test]
    fn each_direction_has_its_own_capacity(seed in any::<u64>()) {
        let mut random = Random(seed);
        let plan = random::plan(&mut random);
        let states = random_states(&mut random, &plan);
        for part in &plan.parts {
            let loads = evaluate(&plan, part, &states);
            let all = [loads.utilisation, loads.utilisation_bound, loads.utilisation_inward];
            prop_assert!(all.iter().all(|one| (0.0..=999.0).contains(&one.lane(0))));
            prop_assert!(part.judged_outward() || loads.utilisation_bound.lane(0) <= 0.0);
            let mut one_way = part.clone();
            one_way.inward = Capacities::default();
            let outward_only = evaluate(&plan, &one_way, &states);
            prop_assert!(outward_only.utilisation_inward.lane(0) <= 0.0);
            prop_assert_eq!(outward_only.utilisation_bound, loads.utilisation_bound);
            (one_way.inward, one_way.outward) = (part.inward, Capacities::default());
            one_way.designed_for.clear();
            let inward_only = evaluate(&plan, &one_way, &states);
            prop_assert!(inward_only.utilisation_bound.lane(0) <= 0.0);
            prop_assert_eq!(inward_only.utilisation_inward, loads.utilisation_inward);
            let plane = matches!(part.geometry, Geometry::Plane { .. });
            if let Some(capacity) = part.inward.force_n.filter(|_| plane).map(Stated::get) {
                let least = -loads.inward.force_n.lane(0) / capacity;
                prop_assert!(loads.utilisation_inward.lane(0) >= at_most(least, 999.0));
            }
        }
    }
}

/// Designed for water to 6 m, now 1320 kg/m³: 4.545 m at the lower edge, 4.618 m 0.3 m above it; at
/// the 5.222 m that equal forces give, the base is 14.9 % over.
#[test]
fn designed_for_water_now_brine() {
    let mut plan = water_tank();
    plan.liquid.top = exact(1320.0);
    let mut part = course(0.0, 2.4, 4.0, 0.0);
    let design = DesignState { level_m: 6.0, weight_n_m3: (1000.0 * G) as f32, gas_pa: 0.0 };
    part.designed_for.push(design).unwrap();
    near(of(&plan, &part, 6.0 / 1.32).utilisation.lane(0), 1.0, 1e-5);
    assert!(of(&plan, &part, 4.545).utilisation.lane(0) < 1.0);
    assert!(of(&plan, &part, 4.546).utilisation.lane(0) > 1.0);
    near(of(&plan, &part, 5.222).utilisation.lane(0), 1.149, 5e-4);
    let mut above = course(0.3, 2.1, 4.0, 0.0);
    above.designed_for = part.designed_for;
    near(of(&plan, &above, 0.3 + 5.7 / 1.32).utilisation.lane(0), 1.0, 1e-5);
    near((0.3 + 5.7 / 1.32) as f32, 4.618, 5e-4);
}

/// Designed for 900 kg/m³ to 7.5 m at 1 kPa, now 1180 at 3 kPa: 5.548 m; equal forces would allow
/// 6.348 m, where the base carries 113.8 %.
#[test]
fn designed_for_with_gas() {
    let mut plan = water_tank();
    plan.closed = true;
    plan.liquid.top = exact(1180.0);
    plan.gas = gas(3_000.0, 3_000.0, 3_000.0);
    let mut part = course(0.0, 7.0, 4.0, 0.0);
    let design = DesignState { level_m: 7.5, weight_n_m3: (900.0 * G) as f32, gas_pa: 1_000.0 };
    part.designed_for.push(design).unwrap();
    assert!(of(&plan, &part, 5.547).utilisation.lane(0) < 1.0);
    assert!(of(&plan, &part, 5.549).utilisation.lane(0) > 1.0);
    near(of(&plan, &part, 6.348).utilisation.lane(0), 1.138, 5e-4);
    // Higher gas pressure alone: at the top of a full course no level is admissible.
    let mut full = course(0.0, 7.5, 4.0, 0.0);
    full.designed_for = part.designed_for;
    near(of(&plan, &full, 0.0).utilisation.lane(0), 3.0, 1e-3);
}

fn flooded(lowest_m: f32, highest_m: f32, density: f32) -> Plan {
    let mut plan = with_inward_alarm(water_tank());
    plan.outside.push(Outside { highest_m, lowest_m, density: exact(density) }).unwrap();
    plan
}

/// The relief of a flooded bund counts at its proven lowest level only, its load at the highest,
/// and only for the parts it touches.
#[test]
fn liquid_outside_relieves_only_what_is_proven() {
    let dry = rectangle(0.0, 1.0, 1.0, 1.0);
    let mut wet = dry.clone();
    wet.outside = 1;
    let full = 0.5 * 1000.0 * G + 1000.0 * G;
    for (lowest_m, relief) in [(0.0, 0.0), (0.4, 0.5 * 0.16 * 1000.0 * G)] {
        let plan = flooded(lowest_m, 1.2, 1000.0);
        for part in [&dry, &wet] {
            let relief = if part.outside == 0 { 0.0 } else { relief };
            let loads = of(&plan, part, 2.0);
            near(loads.outward.force_n.lane(0), full - relief, 0.1);
            near(loads.estimate.force_n.lane(0), full - relief, 0.1);
        }
        near(of(&plan, &dry, 2.0).inward.force_n.lane(0), full, 0.1);
        near(of(&plan, &wet, 2.0).inward.force_n.lane(0), full - 0.7 * 1000.0 * G, 0.1);
    }
    // Floor of 8 m diameter under 1.2 m of ground water: 591 kN of uplift.
    let mut floor = level_cover(0.0, (PI * 16.0) as f32);
    floor.outside = 1;
    near(of(&flooded(0.0, 1.2, 1000.0), &floor, 0.0).inward.force_n.lane(0), -591_500.0, 500.0);
}

/// B2: 0.5 m of 900 kg/m³ in a bund flooded to 1.2 m: -7.355 kPa at the base, -5.958 kN/m.
#[test]
fn a_flooded_bund_presses_inwards() {
    let mut plan = flooded(0.0, 1.2, 1000.0);
    plan.liquid.top = exact(900.0);
    let mut wall = rectangle(0.0, 1.0, 1.2, 1.0);
    wall.outside = 1;
    wall.inward.pressure_pa = Stated::new(10_000.0);
    wall.outward.pressure_pa = Stated::new(100.0);
    let loads = of(&plan, &wall, 0.5);
    near(loads.inward.force_n.lane(0), -5_958.0, 1.0);
    near(loads.inward.pressure_pa.lane(0), -7_355.0, 1.0);
    near(loads.utilisation_inward.lane(0), 0.7355, 1e-4);
    // Outwards nothing is relieved, and nothing inward is judged by the outward capacity.
    near(loads.utilisation_bound.lane(0), 900.0 * 0.5 * G / 100.0, 1e-2);
    wall.outward.pressure_pa = None;
    wall.outward.force_n = Stated::new(1.0);
    let mut empty = flooded(1.2, 1.2, 1000.0);
    empty.liquid.top = exact(900.0);
    near(of(&empty, &wall, 0.5).utilisation_bound.lane(0), 0.0, 0.0);
}

/// A vacuum is worst where no liquid stands against it: at the top of the course, not at its design
/// point.
#[test]
fn inward_hoop_is_judged_over_the_whole_course() {
    let mut plan = with_inward_alarm(water_tank());
    plan.gas = gas(-1_500.0, 0.0, 0.0);
    let mut part = course(0.0, 2.4, 4.0, 0.3);
    part.inward.hoop_tension_n_m = Stated::new(10_000.0);
    near(of(&plan, &part, 1.0).utilisation_inward.lane(0), 0.6, 1e-5);
    near(
        of(&plan, &part, 1.0).inward.hoop_tension_n_m.lane(0),
        4.0 * (0.7 * 1000.0 * G - 1_500.0),
        0.1,
    );
    // A pressure stated for the course holds for all of it.
    part.outward.pressure_pa = Stated::new(20_000.0);
    near(of(&plan, &part, 1.0).utilisation.lane(0), 1000.0 * G / 20_000.0, 1e-5);
}

/// 0.66 m of gasket, 28 bolts on 0.77 m: the lowest bolt carries more than an even share.
#[test]
fn bolts_of_a_round_hatch_by_hand() {
    let plan = water_tank();
    let mut part = bolted_disc(0.52, 0.33, 1.0, 28, 0.385);
    part.outward.bolt_n = Stated::new(18_000.0);
    let loads = of(&plan, &part, 9.0);
    // Covered: F = rho g h_c A, Mc = -rho g pi r⁴ / 4 (inertia of a disc).
    let weight = 1000.0 * G;
    let force = weight * (9.0 - 0.85) * PI * 0.33 * 0.33;
    let moment = -weight * PI / 4.0 * 0.33_f64.powi(4);
    let lowest = force / 28.0 - moment * 0.385 / (14.0 * 0.385 * 0.385);
    near(loads.estimate.bolt_n.lane(0), lowest, 0.01);
    near(loads.outward.bolt_n.lane(0), lowest, 0.01);
    near(loads.utilisation_bound.lane(0), lowest / 18_000.0, 1e-6);
    // Exact inputs: the least share is that of the highest bolt.
    let highest = force / 28.0 + moment * 0.385 / (14.0 * 0.385 * 0.385);
    near(loads.inward.bolt_n.lane(0), highest, 0.01);
    let Geometry::Plane { cover: Some(cover), shape, .. } = &part.geometry else { unreachable!() };
    assert_eq!(Cover::new(&cover.numbers(), &Face::of(shape, 0.0)), *cover);
}

#[test]
fn utilisations_end_at_their_cap() {
    let plan = water_tank();
    let mut part = disc(0.5, 0.3, 1.0);
    part.outward.force_n = Stated::new(0.001);
    near(of(&plan, &part, 9.0).utilisation_bound.lane(0), 999.0, 0.0);
}
