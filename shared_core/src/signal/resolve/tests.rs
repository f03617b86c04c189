//! From counts to bounds: classes and their memory, projection, density.

use super::{ReadingClass as Class, Resolved, Sight, resolve};
use crate::alarm::FaultCause;
use crate::liquid::{DensityTable, states};
use crate::plan::builder::{
    G, GAUGE, band, count_of, exact, gas, head_sensor, layer, on_loop, surface_sensor, water_tank,
};
use crate::plan::{Plan, TemperaturePlan};
use crate::signal::{Channel, Quality, SensorError};

const NONE: Channel = Channel { count_16: 0, quality: Quality::NotRead };
const SILENT: Channel = Channel::failed(SensorError::Silent);

fn near(value: f32, expected: f64) {
    assert!(
        (f64::from(value) - expected).abs() <= 1e-5 * (1.0 + expected.abs()),
        "{value} {expected}"
    );
}

fn loop_tank() -> Plan {
    let mut plan = water_tank();
    plan.shell_top_m = 12.0;
    plan.level = on_loop(surface_sensor(), 0.0, 10.0);
    plan
}

fn read_loop(plan: &Plan, sight: &mut Sight, tick_ms: u64, microamperes: i32) -> Resolved {
    resolve(plan, sight, tick_ms, Channel::good(microamperes * 16), NONE)
}

/// 0 to 10 m on 4 to 20 mA at 3.9, 20.3, 3.5, 21.5 and 0 mA.
#[test]
fn currents_outside_the_span() {
    let (plan, mut sight) = (loop_tank(), Sight::default());
    let low = read_loop(&plan, &mut sight, 0, 3_900);
    near(low.estimate, -0.0625);
    assert_eq!((low.class, low.fault), (Class::Held, None));
    let high = read_loop(&plan, &mut sight, 0, 20_300);
    near(high.estimate, 10.1875);
    assert_eq!((high.class, high.fault), (Class::Held, None));
    for (microamperes, cause) in [
        (3_500, FaultCause::CurrentLow),
        (21_500, FaultCause::CurrentHigh),
        (0, FaultCause::WireBreak),
    ] {
        let failed = read_loop(&plan, &mut sight, 0, microamperes);
        assert_eq!((failed.class, failed.fault), (Class::Projected, Some(cause)));
    }
}

#[test]
fn between_the_bands_the_last_status_is_held() {
    let (plan, mut sight) = (loop_tank(), Sight::default());
    // No status yet: it does not count as a measurement.
    assert_eq!(read_loop(&plan, &mut sight, 0, 3_700).class, Class::NotYetRead);
    assert_eq!(read_loop(&plan, &mut sight, 0, 12_000).class, Class::Valid);
    assert_eq!(read_loop(&plan, &mut sight, 0, 3_700).class, Class::Held);
    assert_eq!(read_loop(&plan, &mut sight, 0, 20_700).class, Class::Held);
    for (failing, between, cause) in
        [(3_600, 3_700, FaultCause::CurrentLow), (21_000, 20_900, FaultCause::CurrentHigh)]
    {
        assert_eq!(read_loop(&plan, &mut sight, 0, failing).fault, Some(cause));
        // The failure is held too: its fault must not return here.
        let held = read_loop(&plan, &mut sight, 0, between);
        assert_eq!((held.class, held.fault), (Class::Projected, Some(cause)));
        assert_eq!(read_loop(&plan, &mut sight, 0, 12_000).fault, None);
    }
}

#[test]
fn every_sensor_error_has_its_fault() {
    let plan = water_tank();
    for (error, cause) in [
        (SensorError::Silent, FaultCause::Silent),
        (SensorError::Garbled, FaultCause::Garbled),
        (SensorError::Unexpected, FaultCause::Unexpected),
        (SensorError::Exception, FaultCause::Exception),
        (SensorError::Converter, FaultCause::Converter),
    ] {
        let resolved = resolve(&plan, &mut Sight::default(), 0, Channel::failed(error), NONE);
        assert_eq!((resolved.class, resolved.fault), (Class::NotYetRead, Some(cause)));
    }
}

#[test]
fn not_yet_read_is_both_full_and_empty() {
    let mut plan = water_tank();
    let unread = resolve(&plan, &mut Sight::default(), 0, NONE, NONE);
    assert_eq!(unread.class, Class::NotYetRead);
    near(unread.low, 0.0);
    near(unread.high, 9.5);
    plan.level = head_sensor(0.5, GAUGE, 0.0);
    plan.liquid.top = band(900.0, 1000.0, 1300.0);
    plan.gas = gas(-500.0, 0.0, 2_000.0);
    let unread = resolve(&plan, &mut Sight::default(), 0, NONE, NONE);
    near(unread.low, -500.0);
    near(unread.high, 2_000.0 + 1300.0 * G * 9.0);
}

#[test]
fn an_ullage_sensor_is_less_certain_far_away() {
    let mut plan = water_tank();
    plan.level.uncertainty = 0.01;
    plan.level.uncertainty_per_distance = 0.003;
    plan.level.reference_m = 11.0;
    let at = |value: f64| {
        resolve(&plan, &mut Sight::default(), 0, Channel::good(count_of(&plan, value)), NONE)
    };
    let (near_top, near_floor) = (at(10.0), at(1.0));
    near(near_top.high - near_top.estimate, 0.013);
    near(near_floor.high - near_floor.estimate, 0.04);
    near(near_floor.estimate - near_floor.low, 0.04);
}

#[test]
fn a_stale_level_is_projected_both_ways_to_the_caps() {
    let mut plan = water_tank();
    plan.level.uncertainty = 0.05;
    let mut sight = Sight::default();
    resolve(&plan, &mut sight, 1_000, Channel::good(count_of(&plan, 6.0)), NONE);
    for (seconds, low, high, class) in [
        (10_u32, 5.93, 6.06, Class::Projected),
        (60, 5.83, 6.11, Class::Projected),
        (61, 5.828, 6.111, Class::Failed),
        (100_000, 0.0, 9.5, Class::Failed),
        (4_000_000, 0.0, 9.5, Class::Failed),
    ] {
        let tick_ms = 1_000 + 1_000 * u64::from(seconds);
        let stale = resolve(&plan, &mut sight, tick_ms, SILENT, NONE);
        near(stale.estimate, 6.0);
        near(stale.low, low);
        near(stale.high, high);
        assert_eq!(stale.class, class);
    }
    // What was measured is not cut by the cap.
    resolve(&plan, &mut sight, 5_000_000_000, Channel::good(count_of(&plan, 9.8)), NONE);
    let stale = resolve(&plan, &mut sight, 6_000_000_000, SILENT, NONE);
    near(stale.high, 9.85);
    near(stale.low, 0.0);
    // A clock that went back is no age.
    assert_eq!(resolve(&plan, &mut sight, 0, SILENT, NONE).class, Class::Projected);
}

#[test]
fn a_stale_head_rises_with_the_heaviest_liquid() {
    let mut plan = water_tank();
    plan.level = head_sensor(1.0, GAUGE, 100.0);
    plan.liquid.top = band(900.0, 1000.0, 1100.0);
    plan.liquid.below = [layer(2.0, 0.1, exact(1400.0))].into_iter().collect();
    let mut sight = Sight::default();
    resolve(&plan, &mut sight, 0, Channel::good(count_of(&plan, 40_000.0)), NONE);
    let stale = resolve(&plan, &mut sight, 20_000, SILENT, NONE);
    near(stale.high, 40_100.0 + 0.02 * 1400.0 * G);
    near(stale.low, 39_900.0 - 0.04 * 1400.0 * G);
}

/// The gas may have been low when the head was read and be high now, without any rise.
#[test]
fn a_stale_head_allows_for_the_swing_of_the_gas() {
    let mut plan = water_tank();
    plan.closed = true;
    plan.level = head_sensor(0.0, GAUGE, 0.0);
    plan.gas = gas(-1_000.0, 0.0, 5_000.0);
    let mut sight = Sight::default();
    // True: 4 m of water; gas at its lowest, then, unseen, at its highest; and the other way round.
    let water = 4.0 * 1000.0 * G;
    resolve(&plan, &mut sight, 0, Channel::good(count_of(&plan, water - 1_000.0)), NONE);
    let later = resolve(&plan, &mut sight, 1_000, SILENT, NONE);
    let upper = states(&plan, &readings(&later)).upper;
    assert!(f64::from(upper.at(crate::lane::Lane([0.0])).lane(0)) >= water + 5_000.0);
    resolve(&plan, &mut sight, 2_000, Channel::good(count_of(&plan, water + 5_000.0)), NONE);
    let later = resolve(&plan, &mut sight, 3_000, SILENT, NONE);
    let lower = states(&plan, &readings(&later)).lower;
    assert!(f64::from(lower.at(crate::lane::Lane([0.0])).lane(0)) <= water - 1_000.0);
}

fn readings(resolved: &Resolved) -> crate::liquid::Readings<1> {
    use crate::lane::Lane;
    crate::liquid::Readings {
        estimate: Lane([resolved.estimate]),
        low: Lane([resolved.low]),
        high: Lane([resolved.high]),
        density: [
            Lane([resolved.density.estimate_kg_m3]),
            Lane([resolved.density.low_kg_m3]),
            Lane([resolved.density.high_kg_m3]),
        ],
    }
}

#[test]
fn what_cannot_be_is_a_fault() {
    let fault = |plan: &Plan, value: f64| {
        resolve(plan, &mut Sight::default(), 0, Channel::good(count_of(plan, value)), NONE).fault
    };
    let mut plan = water_tank();
    plan.level.uncertainty = 0.02;
    assert_eq!(fault(&plan, 10.01), None);
    assert_eq!(fault(&plan, 10.03), Some(FaultCause::AboveShell));
    plan.closed = true;
    assert_eq!(fault(&plan, 9.97), None);
    assert_eq!(fault(&plan, 9.99), Some(FaultCause::AtRoof));
    plan.level = head_sensor(1.0, GAUGE, 100.0);
    assert_eq!(fault(&plan, 500_000.0), None);
    plan.closed = false;
    assert_eq!(fault(&plan, 9.0 * 1000.0 * G + 90.0), None);
    assert_eq!(fault(&plan, 9.0 * 1000.0 * G + 110.0), Some(FaultCause::AboveShell));
}

fn warm_tank() -> Plan {
    let mut plan = water_tank();
    plan.liquid.top = band(960.0, 1000.0, 1040.0);
    plan.liquid.table = DensityTable::new(&[(0.0, 1020.0), (20.0, 1000.0), (60.0, 980.0)]).unwrap();
    plan.liquid.table_uncertainty = 0.01;
    plan.liquid.temperature = Some(TemperaturePlan {
        celsius_at_zero: 0.0,
        celsius_per_count_16: 0.1 / 16.0,
        uncertainty_k: 2.0,
    });
    plan
}

#[test]
fn a_temperature_narrows_the_band_only_while_it_is_known() {
    let plan = warm_tank();
    let mut sight = Sight::default();
    let celsius = |tenths: i32| Channel::good(tenths * 16);
    let level = Channel::good(count_of(&plan, 5.0));
    let warm = resolve(&plan, &mut sight, 0, level, celsius(400)).density;
    near(warm.estimate_kg_m3, 990.0);
    near(warm.low_kg_m3, 989.0 * 0.99);
    near(warm.high_kg_m3, 991.0 * 1.01);
    // The bend of the table lies within the uncertainty.
    let bend = resolve(&plan, &mut sight, 0, level, celsius(190)).density;
    near(bend.low_kg_m3, 999.5 * 0.99);
    near(bend.high_kg_m3, 1003.0 * 1.01);
    // Failed, or beyond the table: the whole band.
    let failed = Channel::failed(SensorError::Silent);
    assert_eq!(resolve(&plan, &mut sight, 0, level, failed).density, plan.liquid.top);
    assert_eq!(resolve(&plan, &mut sight, 0, level, celsius(9_000)).density, plan.liquid.top);
    assert_eq!(resolve(&plan, &mut sight, 0, level, celsius(-10)).density, plan.liquid.top);
}

#[test]
fn all_products_until_one_is_confirmed() {
    let mut plan = warm_tank();
    plan.liquid.products = [exact(840.0), exact(1280.0)].into_iter().collect();
    let level = Channel::good(count_of(&plan, 5.0));
    let temperature = Channel::good(400 * 16);
    for (product, low, estimate, high) in [
        (None, 840.0, 1000.0, 1280.0),
        (Some(0), 979.11, 990.0, 1000.91),
        (Some(1), 840.0, 840.0, 840.0),
        (Some(2), 1280.0, 1280.0, 1280.0),
        (Some(3), 840.0, 1000.0, 1280.0),
        (Some(255), 840.0, 1000.0, 1280.0),
    ] {
        let mut sight = Sight { product, ..Sight::default() };
        let density = resolve(&plan, &mut sight, 0, level, temperature).density;
        near(density.low_kg_m3, low);
        near(density.estimate_kg_m3, estimate);
        near(density.high_kg_m3, high);
    }
}

/// A confirmed product narrows a head sensor's envelope too.
#[test]
fn a_confirmed_product_reaches_the_envelope() {
    let mut plan = water_tank();
    plan.level = head_sensor(0.0, GAUGE, 0.0);
    plan.liquid.products = [exact(840.0)].into_iter().collect();
    let mut sight = Sight { product: Some(1), ..Sight::default() };
    let resolved = resolve(&plan, &mut sight, 0, Channel::good(count_of(&plan, 50_000.0)), NONE);
    let states = states(&plan, &readings(&resolved));
    for state in [states.estimate, states.upper, states.lower] {
        near(state.at(crate::lane::Lane([3.0])).lane(0), 50_000.0 - 3.0 * 840.0 * G);
    }
}
