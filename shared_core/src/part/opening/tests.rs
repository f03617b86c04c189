//! The verdict by wetting: what stands where, never what it weighs.

use super::{OPENING_GAS_PA, Shut};
use crate::liquid::Outside;
use crate::plan::Plan;
use crate::plan::builder::{
    GAUGE, band, bolted_disc, disc, exact, gas, head_sensor, reading, water_tank,
};
use crate::signal::{ReadingClass, Resolved};

const CLASSES: [ReadingClass; 4] =
    [ReadingClass::NotYetRead, ReadingClass::Held, ReadingClass::Projected, ReadingClass::Failed];

/// A hatch whose lowest point stands at 1 m.
fn judged(plan: &Plan, reading: &Resolved) -> u8 {
    Shut::of(plan, &bolted_disc(1.0, 0.3, 1.0, 8, 0.35), reading).unwrap().0
}

#[test]
fn liquid_above_the_lowest_point_keeps_it_shut() {
    let plan = water_tank();
    for (high, reasons) in [(0.9, 0), (1.0, 0), (1.000_01, Shut::LIQUID_INSIDE)] {
        assert_eq!(judged(&plan, &reading(&plan, 0.5, 0.0, high)), reasons, "{high}");
    }
    let unknown = Resolved { high: f32::NAN, ..reading(&plan, 0.5, 0.0, 0.5) };
    assert_eq!(judged(&plan, &unknown), Shut::LIQUID_INSIDE);
}

#[test]
fn a_panel_is_no_opening() {
    let plan = water_tank();
    assert_eq!(Shut::of(&plan, &disc(1.0, 0.3, 1.0), &reading(&plan, 5.0, 5.0, 5.0)), None);
}

#[test]
fn only_a_valid_reading_says_anything() {
    let plan = water_tank();
    for class in CLASSES {
        let dry = Resolved { class, ..reading(&plan, 0.0, 0.0, 0.0) };
        assert_eq!(judged(&plan, &dry), Shut::NOT_VALID, "{class:?}");
    }
}

#[test]
fn gas_and_liquid_outside_keep_it_shut() {
    let mut plan = water_tank();
    let dry = reading(&plan, 0.0, 0.0, 0.0);
    for (low, high, shut) in [
        (0.0, OPENING_GAS_PA, 0),
        (0.0, 1.01 * OPENING_GAS_PA, Shut::GAS),
        (-1.01 * OPENING_GAS_PA, 0.0, Shut::GAS),
    ] {
        plan.gas = gas(low, 0.0, high);
        assert_eq!(judged(&plan, &dry), shut, "{low} {high}");
    }
    plan.gas = gas(0.0, 0.0, 0.0);
    let outside = Outside { highest_m: 1.2, lowest_m: 0.0, density: exact(1000.0) };
    plan.outside.push(outside).unwrap();
    let mut hatch = bolted_disc(1.0, 0.3, 1.0, 8, 0.35);
    assert_eq!(Shut::of(&plan, &hatch, &dry), Some(Shut(0)), "it does not stand there");
    hatch.outside = 1;
    assert_eq!(Shut::of(&plan, &hatch, &dry), Some(Shut(Shut::LIQUID_OUTSIDE)));
}

/// A gauge of the pressure at the bottom stands lower for a heavier liquid and for more gas: the
/// highest surface is that of the lightest liquid under the lowest gas, not that of the upper
/// pressure.
#[test]
fn a_head_sensor_sees_the_highest_surface() {
    let mut plan = water_tank();
    plan.liquid.top = band(800.0, 1000.0, 1200.0);
    plan.level = head_sensor(0.0, GAUGE, 0.0);
    plan.gas = gas(-40.0, 0.0, 40.0);
    // 800 kg/m³ under -40 Pa stands at 1 m.
    let pressure = 800.0 * 9.80665 - 40.0;
    for (factor, reasons) in [(0.999, 0), (1.001, Shut::LIQUID_INSIDE)] {
        let high = pressure * factor;
        assert_eq!(judged(&plan, &reading(&plan, 5_000.0, 4_000.0, high)), reasons, "{factor}");
    }
    // Below the diaphragm nothing is seen.
    plan.level = head_sensor(1.5, GAUGE, 0.0);
    assert_eq!(judged(&plan, &reading(&plan, 0.0, 0.0, 0.0)), Shut::LIQUID_INSIDE);
}
