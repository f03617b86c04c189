//! Every rule with a plan that breaks it; and no plan that passes gives anything but finite
//! numbers.

#![expect(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "figures of the tests fit"
)]

mod tables;

use super::PlanError as E;
use crate::evaluate::loads;
use crate::liquid::truth::Random;
use crate::liquid::{DensityTable, Outside};
use crate::part::{
    BoltPattern, Cover, CoverNumbers, DesignState, Geometry, Held, PartLoads, Stated,
    WeightingNumbers,
};
use crate::plan::builder::{
    GAUGE, band, bolted_disc, bolted_rectangle, course, disc, ellipse, exact, gas, head_sensor,
    layer, level_cover, plane, push_curved, push_pieces, push_plate, reads, rectangle, water_tank,
    with_inward_alarm,
};
use crate::plan::{LevelSensor, Plan, Reference, SignalKind, TemperaturePlan};
use crate::shape::{Circle, Face, Pieces, Rectangle, Shape};
use crate::signal::{Channel, Sight, resolve};
use proptest::prelude::*;

fn broken(expected: E, slip: impl FnOnce(&mut Plan)) {
    let mut plan = water_tank();
    assert_eq!(plan.check(), Ok(()));
    slip(&mut plan);
    assert_eq!(plan.check(), Err(expected), "{plan:?}");
}

#[test]
fn site_and_gas() {
    for gravity in [9.69, 9.91, f32::NAN] {
        broken(E::Site, |p| p.gravity_m_s2 = gravity);
    }
    broken(E::Site, |p| p.shell_top_m = 200.1);
    broken(E::Site, |p| p.shell_top_m = f32::INFINITY);
    broken(E::Site, |p| p.floor_m = 10.0);
    broken(E::Site, |p| p.overflow_m = -0.1);
    broken(E::Site, |p| p.overflow_m = 10.1);
    broken(E::Site, |p| p.highest_rise_m_s = -0.001);
    broken(E::Site, |p| p.highest_rise_m_s = 1.1);
    broken(E::Site, |p| p.highest_fall_m_s = f32::NAN);
    broken(E::Gas, |p| p.gas = gas(0.0, -1.0, 1.0));
    broken(E::Gas, |p| p.gas = gas(0.0, 2.0, 1.0));
    broken(E::Gas, |p| p.gas = gas(-1.1e7, 0.0, 1.0));
    broken(E::Gas, |p| p.gas = gas(0.0, 0.0, f32::NAN));
    // A closed tank may stand full above its roof.
    let mut plan = water_tank();
    (plan.closed, plan.overflow_m) = (true, 18.0);
    assert_eq!(plan.check(), Ok(()));
}

#[test]
fn liquids() {
    broken(E::Liquid, |p| p.liquid.top = band(1000.0, 999.0, 1001.0));
    broken(E::Liquid, |p| p.liquid.top = band(999.0, 1002.0, 1001.0));
    broken(E::Liquid, |p| p.liquid.top = band(0.9, 1.0, 1.0));
    broken(E::Liquid, |p| p.liquid.top.high_kg_m3 = 25_001.0);
    broken(E::Liquid, |p| p.liquid.products.push(exact(f32::NAN)).unwrap());
    broken(E::Liquid, |p| p.liquid.below.push(layer(1.0, 0.1, exact(900.0))).unwrap());
    broken(E::Liquid, |p| p.liquid.below.push(layer(1.0, -0.1, exact(1100.0))).unwrap());
    broken(E::Liquid, |p| {
        p.liquid.below.push(layer(1.0, 0.1, exact(1100.0))).unwrap();
        p.liquid.below.push(layer(1.0, 0.1, exact(1200.0))).unwrap();
    });
    let sensor =
        TemperaturePlan { celsius_at_zero: 0.0, celsius_per_count_16: 0.1, uncertainty_k: 1.0 };
    broken(E::Liquid, |p| p.liquid.temperature = Some(sensor));
    broken(E::Liquid, |p| p.liquid.table = DensityTable::new(&[(0.0, 0.5)]).unwrap());
    broken(E::Liquid, |p| p.liquid.table_uncertainty = 0.51);
    assert_eq!(DensityTable::new(&[(1.0, 1000.0), (1.0, 900.0)]), None);
    assert_eq!(DensityTable::new(&[(f32::NAN, 1000.0), (1.0, 900.0)]), None);
    let outside = |highest_m, lowest_m| Outside { highest_m, lowest_m, density: exact(1000.0) };
    broken(E::Outside, |p| p.outside.push(outside(1.0, 1.1)).unwrap());
    broken(E::Outside, |p| p.outside.push(outside(f32::NAN, 0.0)).unwrap());
    broken(E::Outside, |p| p.parts[0].outside = 1);
    broken(E::Outside, |p| {
        p.outside.push(outside(1.0, 0.0)).unwrap();
        p.parts[0].outside = 2;
    });
}

#[test]
fn sensor_alarm_and_logging() {
    broken(E::Level, |p| p.level.value_per_count_16 = 0.0);
    broken(E::Level, |p| p.level.value_per_count_16 = f32::NAN);
    broken(E::Level, |p| p.level.value_at_zero = f32::INFINITY);
    broken(E::Level, |p| p.level.uncertainty = -0.1);
    broken(E::Level, |p| p.level.uncertainty_per_distance = 1.1);
    broken(E::Level, |p| p.level.reference_m = 201.0);
    broken(E::Level, |p| p.level.failed_after_ms = 0);
    broken(E::Level, |p| p.level.failed_after_ms = 24 * 86_400_000 + 1);
    // A diaphragm above the shell sees nothing.
    broken(E::Level, |p| p.level = head_sensor(10.0, GAUGE, 0.0));
    let offset_pa = [99.0, 100.0, 101.0];
    broken(E::Level, |p| p.level = head_sensor(0.0, Reference::Atmosphere { offset_pa }, 0.0));
    broken(E::Alarm, |p| p.alarm.warn.utilisation = 0.95);
    broken(E::Alarm, |p| p.alarm.alarm.utilisation = 1.01);
    broken(E::Alarm, |p| p.alarm.warn.utilisation = 0.001);
    // It would never return.
    broken(E::Alarm, |p| p.alarm.warn.deadband = p.alarm.warn.utilisation);
    broken(E::Alarm, |p| p.alarm.warn.deadband = -0.01);
    broken(E::Alarm, |p| p.alarm.alarm.on_delay_ms = 24 * 86_400_000 + 1);
    broken(E::Alarm, |p| p.alarm.alarm.off_delay_ms = u32::MAX);
    broken(E::Alarm, |p| p.alarm.sounds_again_after_ms = 0);
    broken(E::Alarm, |p| p.alarm.response_time_ms = u32::MAX);
    broken(E::Alarm, |p| p.parts[0].inward.pressure_pa = Stated::new(1.0));
    broken(E::Logging, |p| p.logging.interval_ms = 99);
    broken(E::Logging, |p| p.logging.idle_interval_ms = 9_999);
    broken(E::Logging, |p| p.logging.flush_after_ms = 86_400_001);
    broken(E::NoPart, |p| p.parts.clear());
}

#[test]
fn parts() {
    broken(E::Geometry, |p| p.parts[0].top_m = f32::NAN);
    broken(E::Geometry, |p| p.parts[0].top_m = 2.39);
    broken(E::Geometry, |p| p.parts[0].bottom_m = 2.5);
    broken(E::Geometry, |p| p.parts[0] = course(0.0, 2.4, 0.001, 0.3));
    broken(E::Geometry, |p| p.parts[0] = course(0.0, 2.4, 4.0, 2.5));
    broken(E::Geometry, |p| p.parts[0] = disc(1.0, 0.3, 0.0));
    broken(E::Geometry, |p| p.parts[0] = disc(1.0, 0.3, 1.0e-30));
    broken(E::Geometry, |p| p.parts[0] = disc(1.0, -0.3, 1.0));
    broken(E::Geometry, |p| p.parts[0] = disc(1.0, f32::NAN, 1.0));
    broken(E::Geometry, |p| p.parts[0] = rectangle(1.0, -1.0, -1.0, 1.0));
    broken(E::Geometry, |p| p.parts[0] = rectangle(1.0, 1.0e9, 0.001, 1.0));
    broken(E::Geometry, |p| p.parts[0] = rectangle(1.0, 1.0, 1.0, 1.1));
    broken(E::Geometry, |p| p.parts[0] = level_cover(1.0, 0.0));
    broken(E::Geometry, |p| p.parts[0] = plane(Shape::Level { area_m2: 1.0 }, 1.0, 0.5, None));
    // A hatch that is said to end elsewhere than its shape does.
    broken(E::Geometry, |p| {
        p.parts[0] = disc(1.0, 0.3, 1.0);
        p.parts[0].top_m = 1.4;
    });
    for capacity in [-0.0, -1.0, f32::NAN, f32::INFINITY] {
        broken(E::Capacity, |p| p.parts[0].outward.pressure_pa = Stated::new(capacity));
    }
    broken(E::Capacity, |p| p.parts[0].outward.force_n = Stated::new(1.0));
    broken(E::Capacity, |p| p.parts[0].outward.bolt_n = Stated::new(1.0));
    broken(E::Capacity, |p| {
        p.parts[0] = disc(1.0, 0.3, 1.0);
        p.parts[0].outward.hoop_tension_n_m = Stated::new(1.0);
    });
    let design = |weight_n_m3| DesignState { level_m: 6.0, weight_n_m3, gas_pa: 0.0 };
    broken(E::Capacity, |p| p.parts[0].designed_for.push(design(0.5)).unwrap());
    broken(E::Capacity, |p| p.parts[0].designed_for.push(design(f32::NAN)).unwrap());
}

#[test]
fn bolts_are_cut_where_their_share_changes_sign() {
    let shape = Shape::Circle(Circle::new(0.33, 1.0));
    let sound = bolted_disc(0.5, 0.33, 1.0, 28, 0.385);
    let Geometry::Plane { cover: Some(cover), .. } = &sound.geometry else { unreachable!() };
    let good = BoltPattern::of(&cover.numbers(), &shape).unwrap();
    let with = |pattern: &BoltPattern| {
        let cover = Cover::new(&pattern.cover(&shape), &Face::of(&shape, 0.0));
        plane(shape, 0.5, 1.0, Some(cover))
    };
    let mut plan = water_tank();
    plan.parts[0] = with(&good);
    assert_eq!(plan.check(), Ok(()));
    let [Some([y_m, area_m2, static_m3]), high] = good.cuts else { unreachable!() };
    for pattern in [
        BoltPattern { count: 2, ..good },
        BoltPattern { count: 0x2000, ..good },
        BoltPattern { per_moment: [0.1, 0.2], ..good },
        BoltPattern { per_moment: [f32::NAN, 0.2], ..good },
        BoltPattern { per_moment: [-0.2, 1.0e30], ..good },
        // No cut, or elsewhere: the bound would not be one.
        BoltPattern { cuts: [None, high], ..good },
        BoltPattern { cuts: [Some([y_m + 0.01, area_m2, static_m3]), high], ..good },
        BoltPattern { cuts: [Some([y_m, 1.0e30, static_m3]), high], ..good },
        BoltPattern { cuts: [Some([y_m, area_m2, 1.0e38]), high], ..good },
        BoltPattern { cuts: [Some([y_m, area_m2, f32::NAN]), high], ..good },
    ] {
        broken(E::Geometry, |p| p.parts[0] = with(&pattern));
    }
    // Bolts within the cover's kern need no cut; a level cover has none.
    let wide = bolted_disc(0.5, 0.33, 1.0, 28, 0.7);
    plan.parts[0] = wide;
    assert_eq!(plan.check(), Ok(()));
    let level = Shape::Level { area_m2: 0.4 };
    let even = BoltPattern { count: 8, per_moment: [-0.5, 0.5], cuts: [None; 2] };
    let cover = Cover::new(&even.cover(&level), &Face::of(&level, 0.0));
    plan.parts[0] = plane(level, 3.0, 0.0, Some(cover));
    assert_eq!(plan.check(), Ok(()));
}

/// A door on two pins: each number out of its range, and each capacity that it cannot have.
#[test]
fn covers_of_every_kind_are_checked() {
    let shape = Shape::Rectangle(Rectangle::new(0.8, 1.2, 1.0));
    let cut = |t_m: f32| {
        let area_m2 = 0.8 * t_m;
        Some([t_m, area_m2, 0.5 * area_m2 * t_m])
    };
    let good = CoverNumbers {
        held: Held::Side,
        arm_m: 0.46,
        sill_above_m: 0.02,
        weight_n: 300.0,
        weight_is_measured: true,
        weightings: [
            WeightingNumbers { foot: 0.5, slope: -1.0, cut: cut(0.5) },
            WeightingNumbers { foot: 0.1, slope: 1.0, cut: None },
        ],
    };
    let part = |numbers: &CoverNumbers| {
        plane(shape, 0.3, 1.0, Some(Cover::new(numbers, &Face::of(&shape, 0.0))))
    };
    let mut plan = water_tank();
    plan.parts[0] = part(&good);
    plan.parts[0].outward.bolt_n = Stated::new(1.0);
    plan.parts[0].outward.moment_n_m = Stated::new(1.0);
    assert_eq!(plan.check(), Ok(()));
    let [low, high] = good.weightings;
    for wrong in [
        CoverNumbers { arm_m: 0.0, ..good },
        CoverNumbers { arm_m: f32::NAN, ..good },
        CoverNumbers { held: Held::Line, ..good },
        CoverNumbers { held: Held::Otherwise, ..good },
        CoverNumbers { held: Held::Bolts(2), arm_m: 0.0, ..good },
        CoverNumbers { sill_above_m: -0.1, ..good },
        CoverNumbers { sill_above_m: 1.3, ..good },
        CoverNumbers { sill_above_m: f32::NAN, ..good },
        CoverNumbers { weight_n: f32::INFINITY, ..good },
        CoverNumbers { weight_n: f32::NAN, ..good },
        CoverNumbers { weightings: [WeightingNumbers { cut: None, ..low }, high], ..good },
        CoverNumbers { weightings: [WeightingNumbers { cut: cut(0.51), ..low }, high], ..good },
        CoverNumbers { weightings: [low, WeightingNumbers { cut: cut(0.5), ..high }], ..good },
        CoverNumbers { weightings: [low, WeightingNumbers { foot: f32::NAN, ..high }], ..good },
        CoverNumbers { weightings: [low, WeightingNumbers { slope: 1.0e30, ..high }], ..good },
    ] {
        broken(E::Geometry, |p| p.parts[0] = part(&wrong));
    }
    let otherwise = CoverNumbers { sill_above_m: 0.02, ..CoverNumbers::default() };
    broken(E::Capacity, |p| {
        p.parts[0] = part(&otherwise);
        p.parts[0].outward.bolt_n = Stated::new(1.0);
    });
    broken(E::Capacity, |p| {
        p.parts[0] = bolted_disc(0.5, 0.33, 1.0, 28, 0.385);
        p.parts[0].outward.moment_n_m = Stated::new(1.0);
    });
    broken(E::Capacity, |p| {
        p.parts[0] = part(&good);
        p.parts[0].inward.moment_n_m = Stated::new(-1.0);
    });
}

/// One of a few figures, the ends of the permitted range among them.
fn one_of(random: &mut Random, figures: &[f32]) -> f32 {
    let index = usize::try_from(random.bits() % 1_000).unwrap() % figures.len();
    figures[index]
}

/// A plan of figures at the ends of their ranges.
fn extreme_plan(random: &mut Random) -> Plan {
    let mut plan = with_inward_alarm(water_tank());
    let tall = one_of(random, &[0.01, 10.0, 200.0]);
    (plan.shell_top_m, plan.overflow_m) = (tall, tall);
    plan.floor_m = one_of(random, &[-200.0, 0.0]);
    plan.closed = random.below(2) == 0;
    plan.highest_rise_m_s = one_of(random, &[0.0, 1.0]);
    plan.highest_fall_m_s = one_of(random, &[0.0, 1.0]);
    let low = one_of(random, &[1.0, 1000.0]);
    plan.liquid.top = band(low, low, one_of(random, &[1000.0, 1_000.000_06, 25_000.0]));
    if random.below(2) == 0 {
        let density = band(1.0, plan.liquid.top.high_kg_m3, 25_000.0);
        plan.liquid.below.push(layer(one_of(random, &[-200.0, 0.0]), 200.0, density)).unwrap();
    }
    plan.gas = gas(one_of(random, &[-1.0e7, 0.0]), 0.0, one_of(random, &[0.0, 1.0e7]));
    let density = band(1.0, 1.0, 25_000.0);
    plan.outside.push(Outside { highest_m: 200.0, lowest_m: -200.0, density }).unwrap();
    let at_m = one_of(random, &[-200.0, 0.0]);
    plan.level = match random.below(3) {
        0 => plan.level,
        1 => head_sensor(at_m, Reference::GasSpace, 0.0),
        _ => head_sensor(at_m, Reference::Atmosphere { offset_pa: [0.0, -1.0e7, 1.0e7] }, 0.0),
    };
    plan.level.signal = SignalKind::Register { unit: 0, function: 0, register: 0, coding: 0 };
    plan.level.zero_count_16 = [i32::MIN, 0, i32::MAX][usize::try_from(random.below(3)).unwrap()];
    plan.level.value_at_zero = one_of(random, &[-1.0e7, 0.0, 1.0e7]);
    plan.level.value_per_count_16 = one_of(random, &[-1.0e6, 1.0e-30, 0.06, 1.0e6]);
    plan.level.uncertainty = one_of(random, &[0.0, 1.0e7]);
    plan.level.uncertainty_per_distance = one_of(random, &[0.0, 1.0]);
    plan.level.reference_m = one_of(random, &[-200.0, 200.0]);
    plan.parts.clear();
    let bottom_m = one_of(random, &[-200.0, 0.0, 20.0]);
    let sine = one_of(random, &[1.0e-4, 0.5, 1.0]);
    let size = one_of(random, &[0.001, 1.0, 90.0]);
    for part in [
        course(bottom_m, 0.001, 200.0, 0.0),
        disc(bottom_m, size, sine),
        rectangle(bottom_m, 200.0, size, sine),
        level_cover(bottom_m, one_of(random, &[1.0e-6, 1.0e5])),
        bolted_disc(bottom_m, size, sine, one_of(random, &[4.0, 8_000.0]) as u16, 1.01 * size),
        bolted_rectangle(bottom_m, [size, size], sine, 3, one_of(random, &[0.0, 1.0, 1.0e4])),
    ] {
        plan.parts.push(part).unwrap();
    }
    plan.numbers.clear();
    push_pieces(&mut plan, bottom_m, sine);
    push_curved(&mut plan, bottom_m, true);
    push_curved(&mut plan, bottom_m, false);
    push_plate(&mut plan, bottom_m, one_of(random, &[0.1, 90.0]), one_of(random, &[1.0e-3, 1.0]));
    for part in &mut plan.parts {
        part.outside = u8::from(random.below(2) == 0);
        part.outward.pressure_pa = Stated::new(1.0e-3);
        part.inward.pressure_pa = Stated::new(1.0e-3);
        match &part.geometry {
            Geometry::Course { .. } => part.outward.hoop_tension_n_m = Stated::new(1.0e-3),
            Geometry::Plane { cover, .. } => {
                part.outward.force_n = Stated::new(1.0e-3);
                part.inward.force_n = Stated::new(1.0e12);
                let bolted = |cover: &&Cover| matches!(cover.held(), Held::Bolts(_));
                let bolts = cover.as_ref().filter(bolted);
                part.outward.bolt_n = bolts.and_then(|_| Stated::new(1.0e-3));
            }
            Geometry::Curved(_) => part.outward.force_n = Stated::new(1.0e-3),
        }
        let weight_n_m3 = one_of(random, &[1.0, 2.5e5]);
        let gas_pa = one_of(random, &[-1.0e7, 0.0, 1.0e7]);
        let level_m = one_of(random, &[-200.0, 200.0]);
        part.designed_for.push(DesignState { level_m, weight_n_m3, gas_pa }).unwrap();
    }
    plan
}

fn numbers(part: &PartLoads<1>) -> Vec<f32> {
    let mut numbers = Vec::new();
    for loads in [&part.estimate, &part.outward, &part.inward] {
        numbers.extend(
            [
                loads.pressure_pa,
                loads.hoop_tension_n_m,
                loads.force_n,
                loads.force_x_n,
                loads.force_z_n,
                loads.moment_centroid_n_m,
                loads.bolt_n,
                loads.moment_n_m,
            ]
            .map(|number| number.lane(0)),
        );
    }
    numbers.extend(
        [part.utilisation, part.utilisation_bound, part.utilisation_inward]
            .map(|number| number.lane(0)),
    );
    numbers
}

/// Slips in the pieces of a shape: each number out of place, and what is stated of the whole.
#[test]
fn pieces_that_do_not_make_their_shape() {
    let mut sound = water_tank();
    push_pieces(&mut sound, 1.0, 1.0);
    assert_eq!(sound.check(), Ok(()));
    let broken = |slip: &dyn Fn(&mut Plan)| {
        let mut plan = sound.clone();
        slip(&mut plan);
        assert_eq!(plan.check(), Err(E::Geometry), "{:?}", plan.numbers);
    };
    for place in 0..sound.numbers.len() {
        for value in [f32::NAN, f32::INFINITY, 300.0, -300.0] {
            broken(&|p| p.numbers[place] = value);
        }
    }
    // The rectangle between the halves of the obround is left out.
    broken(&|p| p.numbers[6] = 0.0);
    broken(&|p| p.numbers.truncate(11));
    let stated = |slip: &dyn Fn(&mut Pieces)| {
        broken(&|p| {
            let Geometry::Plane { shape: Shape::Pieces(pieces), .. } = &mut p.parts[1].geometry
            else {
                unreachable!("the part is of pieces");
            };
            slip(pieces);
        });
    };
    stated(&|p| p.area_m2 *= 1.01);
    stated(&|p| p.area_m2 = f32::NAN);
    stated(&|p| p.centroid_m += 0.01);
    stated(&|p| p.length_m = 1.2);
    stated(&|p| p.strips = 3);
    stated(&|p| p.discs = 2);
    stated(&|p| p.first = 4);
    stated(&|p| p.first = 999);
    let mut plan = water_tank();
    plan.parts[0] = ellipse(1.0, 0.3, 2.0, 1.0);
    assert_eq!(plan.check(), Ok(()));
    for aspect in [0.0, -1.0, 1.1e3, f32::NAN] {
        plan.parts[0] = ellipse(1.0, 0.3, aspect, 1.0);
        assert_eq!(plan.check(), Err(E::Geometry), "{aspect}");
    }
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(500))]

    #[test]
    fn what_passes_gives_finite_numbers(seed in any::<u64>(), counts in any::<[i32; 6]>()) {
        let mut random = Random(seed);
        let plan = extreme_plan(&mut random);
        prop_assert_eq!(plan.check(), Ok(()), "{:?}", plan);
        let mut sight = Sight::default();
        for (tick_ms, count) in [i32::MIN, 0, i32::MAX].into_iter().chain(counts).enumerate() {
            let tick_ms = (tick_ms as u64).wrapping_mul(1 << 40);
            let level = if count % 5 == 1 { Channel::default() } else { Channel::good(count) };
            let resolved = resolve(&plan, &mut sight, tick_ms, level, Channel::good(count));
            let mut sound = true;
            let _ = loads(&plan, &[resolved], |_, part| {
                sound &= numbers(part).iter().all(|number| number.is_finite());
            });
            prop_assert!(sound, "{:?} {:?}", resolved, plan);
        }
    }
}

#[test]
fn the_builder_s_plans_pass() {
    let plan = water_tank();
    assert_eq!(plan.check(), Ok(()));
    assert_eq!(plan.level.sensor, LevelSensor::Surface);
    assert_eq!(reads(&plan, 0, 1.5).level, Channel::good(24_000));
    let shape = Shape::Rectangle(Rectangle::new(1.0, 2.0, 1.0));
    assert!((shape.rise_m() - 2.0).abs() < 1e-6);
}
