//! Volume curves, and the limit levels for the device.

use super::curve;
use crate::compile::for_device;
use crate::tank::{TankFile, parse};

/// The brine day tank with another vessel, and without the courses that a cylinder has.
fn with_vessel(vessel: &str) -> TankFile {
    let path = concat!(env!("CARGO_MANIFEST_DIR"), "/../configs/brine_day_tank.toml");
    let text = std::fs::read_to_string(path).unwrap();
    let mut kept = String::new();
    let mut in_course = false;
    for line in text.lines() {
        if line.starts_with('[') {
            in_course = line.starts_with("[[course]]");
        }
        if line.starts_with("cylinder") {
            kept.push_str(vessel);
        } else if !in_course {
            kept.push_str(line);
        }
        kept.push('\n');
    }
    parse("tank.toml", kept.as_bytes()).unwrap_or_else(|found| panic!("{}", found.to_text(false)))
}

#[test]
fn a_prism_needs_two_rows() {
    let file = with_vessel("cylinder = { diameter = \"8 m\", height = \"9.6 m\" }");
    let found = curve(&file).unwrap();
    assert_eq!(found.rows.len(), 2);
    assert!((found.rows[1].1 - 482.548_6).abs() < 1e-4, "{found:?}");
    let file = with_vessel("box = { length = \"6 m\", width = \"3 m\", height = \"9.6 m\" }");
    assert!((curve(&file).unwrap().rows[1].1 - 172.8).abs() < 1e-9);
    assert!(curve(&with_vessel("")).is_none(), "loose parts have no volume");
}

/// 2 m by 5 m, to the five decimals of a reference library (see the check cases).
#[test]
fn a_lying_drum_is_exact_and_its_table_states_its_error() {
    let vessel = "lying = { diameter = \"10 m\", length = \"5 m\", heads = \"flat\" }";
    let file = with_vessel(vessel);
    let found = curve(&file).unwrap();
    assert_eq!(found.rows.len(), 32);
    let full = file.volume_m3(10.0).unwrap();
    assert!((full - 392.699_081_7).abs() < 1e-6);
    assert!(found.error_m3 < 5e-4 * full && found.error_m3 > 1e-5 * full, "{}", found.error_m3);
    let mut worst: f64 = 0.0;
    for step in 0..=5000_u32 {
        let level_m = f64::from(step) * 0.002;
        let row = found.rows.windows(2).find(|pair| level_m <= pair[1].0).unwrap();
        let share = (level_m - row[0].0) / (row[1].0 - row[0].0);
        let table = row[0].1 + share * (row[1].1 - row[0].1);
        worst = worst.max((table - file.volume_m3(level_m).unwrap()).abs());
    }
    assert!((worst / found.error_m3 - 1.0).abs() < 0.02, "{worst} {}", found.error_m3);
    assert!(file.volume_m3(-1.0).unwrap().abs() < 1e-12);
}

#[test]
fn a_strapping_table_goes_before_the_shape_and_need_have_none() {
    let rows = "strapping = [[\"0 m\", \"0 m3\"], [\"5 m\", \"200 m3\"], [\"9.6 m\", \"480 m3\"]]";
    let alone = with_vessel(rows);
    assert_eq!(curve(&alone).unwrap().rows.len(), 3);
    assert!((alone.vessel.height_m().unwrap() - 9.6).abs() < 1e-12);
    let beside = format!("cylinder = {{ diameter = \"8 m\", height = \"9.6 m\" }}\n{rows}");
    let file = with_vessel(&beside);
    assert!((file.volume_m3(5.0).unwrap() - 200.0).abs() < 1e-9);
    assert!((file.volume_m3(7.3).unwrap() - 340.0).abs() < 1e-9);
}

#[test]
fn the_device_gets_a_limit_for_each_liquid_it_may_hold() {
    let path = concat!(env!("CARGO_MANIFEST_DIR"), "/../configs/brine_day_tank.toml");
    let file = parse("tank.toml", &std::fs::read(path).unwrap()).unwrap();
    let compiled = for_device(&file).unwrap();
    let plan = &compiled.plan;
    assert_eq!(plan.filling.window_ms, 300_000, "a third of the response time");
    let [any, brine, water] = plan.limits_m()[..] else { panic!("three") };
    assert!(any <= brine && brine < water, "{any} {brine} {water}");
    assert!((8.0..8.65).contains(&brine), "{brine}");
    assert_eq!(plan.curve().len(), 2);
    assert_eq!(plan.check(), Ok(()));
}
