//! The estimate worked out by hand for the shipped tank, and what moves it.

use super::{consumption, estimate};
use crate::tank::{TankFile, parse};

const BRINE: &str = include_str!("../../../configs/brine_day_tank.toml");

fn file(changes: &[(&str, &str)]) -> TankFile {
    let text = changes.iter().fold(BRINE.to_owned(), |text, (from, to)| {
        assert!(text.contains(from), "{from}");
        text.replacen(from, to, 1)
    });
    parse("tank.toml", text.as_bytes()).unwrap()
}

fn near(found: f64, expected: f64) {
    assert!((found / expected - 1.0).abs() < 1e-3, "{found} is not {expected}");
}

/// 12 V, 12 mA for 0.35 s are 50.4 mJ; over 3.6 V and 0.85 they are 16.47 mC. The device adds
/// 178 uC over 0.85, 209 uC. Asleep 1.339 C over 0.85; the cell itself 19 Ah / 36,500.
#[test]
fn the_shipped_tank_by_hand() {
    let energy = estimate(&file(&[])).unwrap();
    let per_sample_c = 16.4706e-3 + 0.20941e-3;
    let standing_c = 1.57553 + 1.87397;
    near(energy.fixed.samples_per_day, 8640.0);
    near(energy.fixed.charge_per_day_c, 8640.0 * per_sample_c + standing_c);
    near(energy.fixed.life_days, 68_400.0 / (8640.0 * per_sample_c + standing_c));
    near(energy.fixed.sensor_share, 8640.0 * 16.4706e-3 / energy.fixed.charge_per_day_c);
    // A fifth of the day and twice five minutes at 10 s, the rest at 60 s.
    let samples = (17_280.0 + 600.0) / 10.0 + (69_120.0 - 600.0) / 60.0;
    near(energy.adaptive.samples_per_day, samples);
    near(energy.adaptive.charge_per_day_c, samples * per_sample_c + standing_c);
    near(energy.life_ratio, energy.adaptive.life_days / energy.fixed.life_days);
    assert!(energy.life_ratio >= 2.8, "{}", energy.life_ratio);
    assert!(energy.cautions.is_empty());
    assert!(energy.assumptions.iter().any(|one| one.contains("nothing was measured")));
}

#[test]
fn no_look_is_longer_than_the_response_time() {
    let idle = ("idle_interval = \"60 s\"", "idle_interval = \"3000 s\"");
    let long = estimate(&file(&[idle])).unwrap();
    // 15 minutes; each rest shows itself for as long as the idle interval.
    let samples = (17_280.0 + 6_000.0) / 10.0 + (69_120.0 - 6_000.0) / 900.0;
    near(long.adaptive.samples_per_day, samples);
    let fixed = ("idle_interval = \"60 s\"", "idle_interval = \"10 s\"");
    near(estimate(&file(&[fixed])).unwrap().life_ratio, 1.0);
}

#[test]
fn a_relay_is_charged_and_told() {
    let write = "[power]\nrelay_current = \"20 mA\"";
    let energy = estimate(&file(&[("[power]", write)])).unwrap();
    let without = estimate(&file(&[])).unwrap();
    let taken = energy.adaptive.charge_per_day_c - without.adaptive.charge_per_day_c;
    near(taken, 0.020 * 86_400.0 / 0.85);
    assert!(energy.cautions[0].contains("supply of its own"), "{:?}", energy.cautions);
}

/// A loop of 24 V and 20 mA takes 156.9 mA of 3.6 V at 85 %: two seconds every ten minutes are
/// 0.523 mA on the average, ten are 2.614.
#[test]
fn a_loop_of_24_volts_empties_a_cell_of_3_6() {
    for (warm_up, mean_a) in [("1.95 s", 0.522_88e-3), ("9.95 s", 2.614_4e-3)] {
        let changed = format!("current = \"20 mA\", warm_up = \"{warm_up}\"");
        let changes =
            [("current = \"12 mA\", warm_up = \"0.3 s\"", changed.as_str()), ("12 V", "24 V")];
        let used = consumption(file(&changes).power.as_ref().unwrap(), 144.0);
        near(used.sensor_share * used.charge_per_day_c / 86_400.0, mean_a);
    }
}

#[test]
fn a_sensor_that_hardly_counts_leaves_the_cells_age() {
    let thrifty =
        ("current = \"12 mA\", warm_up = \"0.3 s\"", "current = \"2 mA\", warm_up = \"0 s\"");
    let energy = estimate(&file(&[thrifty])).unwrap();
    assert!(energy.cautions[0].contains("age"), "{:?}", energy.cautions);
    let none = consumption(file(&[]).power.as_ref().unwrap(), 0.0);
    near(none.charge_per_day_c, 1.57553 + 1.87397);
    assert!(none.sensor_share.abs() < 1e-12);
}

#[test]
fn without_power_there_is_no_estimate() {
    let (before, _) = BRINE.split_once("[power]").unwrap();
    assert!(estimate(&parse("tank.toml", before.as_bytes()).unwrap()).is_none());
}
