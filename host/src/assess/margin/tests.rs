//! Margins given and needed.

use super::{Times, margin, together};
use crate::compile::for_device;
use crate::tank::{TankFile, parse};

fn brine(change: impl Fn(&str) -> String) -> TankFile {
    let path = concat!(env!("CARGO_MANIFEST_DIR"), "/../configs/brine_day_tank.toml");
    let text = change(&std::fs::read_to_string(path).unwrap());
    parse("tank.toml", text.as_bytes()).unwrap_or_else(|found| panic!("{}", found.to_text(false)))
}

#[test]
fn the_example_has_enough_and_says_how_much() {
    let file = brine(str::to_owned);
    let plan = for_device(&file).unwrap().plan;
    let found = margin(&file, &plan).unwrap();
    // 60 s at rest, 3 s reading, 5 s delay, 60 s failed, 15 min response at 0.2 mm/s.
    assert!((found.needed_m - 0.2056).abs() < 1e-9, "{found:?}");
    let given_m = found.given_m.unwrap();
    assert!(found.enough && given_m > 0.35 && given_m < 0.45, "{found:?}");
    let first = &found.per_part[0];
    assert_eq!((first.name.as_str(), first.side), ("course 1", "outward"));
    assert!((first.limit_level_m - first.alarm_level_m - first.given_m).abs() < 1e-9);
    assert!(found.per_part.iter().all(|part| part.name != "roof hatch"), "it is never reached");
}

/// The same threshold with a pump ten times as fast: the way is not there.
#[test]
fn a_fast_rise_makes_it_short() {
    let file = brine(|text| text.replace("\"0.2 mm/s\"", "\"2 mm/s\""));
    let plan = for_device(&file).unwrap().plan;
    let found = margin(&file, &plan).unwrap();
    assert!(!found.enough && (found.needed_m - 2.056).abs() < 1e-9, "{found:?}");
}

#[test]
fn an_inward_margin_is_taken_on_the_way_down() {
    let path = concat!(env!("CARGO_MANIFEST_DIR"), "/../configs/rinse_basin.toml");
    let file = parse("basin.toml", &std::fs::read(path).unwrap()).unwrap();
    let plan = for_device(&file).unwrap().plan;
    let found = margin(&file, &plan).unwrap();
    for part in &found.per_part {
        let rises = part.limit_level_m > part.alarm_level_m;
        assert_eq!(rises, part.side == "outward", "{part:?}");
    }
}

#[test]
fn without_times_there_is_no_margin() {
    let file = brine(|text| text.replace("failed_after = \"60 s\"\n", ""));
    assert!(Times::of(&file, &file.alarm.clone().unwrap().alarm).is_none());
    let request = crate::assess::Request::new(&file, crate::assess::Overrides::default()).unwrap();
    assert!(crate::assess::assess(&file, &request).unwrap().document.margin.is_none());
}

/// Limit 6.000 m; sensor 25, datum 10, density 60 mm; 0.5 m/h for 20 min of samples and 15 min.
#[test]
fn budgets_add_straight_and_in_quadrature() {
    let (straight, quadrature) = together(&[0.025, 0.010, 0.060]);
    assert!((straight - 0.095).abs() < 1e-12 && (quadrature - 0.065_764_7).abs() < 1e-6);
    let rise_m = 0.5 / 3600.0 * (20.0 + 15.0) * 60.0;
    assert!((6.0 - quadrature - rise_m - 5.6426).abs() < 1e-4);
}
