//! Status: the device's health, never the tank's; the worst on top.

use crate::bench::{Swing, TANK, commissioned, device, document, on, run_for};
use serde_json::Value;
use strake::sim::machine::Happening;
use strake::sim::pty::PtyMachine;
use strake::sim::sensor::Failure;

/// The text with what differs from run to run taken out.
fn steady(text: &str, device: &PtyMachine) -> String {
    let text = text.replace(device.port(), "PORT");
    let mut steady = String::new();
    for line in text.lines() {
        let kept = ["  clock", "  link", "            sealed 2026-05-28 20:26:40 UTC"];
        let head = kept.into_iter().find(|head| line.starts_with(head));
        steady.push_str(head.unwrap_or(line));
        steady.push('\n');
    }
    steady
}

#[test]
fn a_healthy_device_says_so_and_nothing_of_the_tank() {
    let device = commissioned(Swing::still(5.0));
    run_for(&device, 60_000);
    let ran = on(&device, &["status"]);
    assert_eq!((ran.exit, ran.err.as_str()), (0, ""));
    assert_eq!(steady(&ran.out, &device), include_str!("status/healthy.txt"));
    let us = on(&device, &["status", "--units", "us"]);
    assert!(us.out.contains("  16 ft "), "{}", us.out);
}

#[test]
fn an_alarm_stands_on_top_and_in_the_exit_status() {
    let device = commissioned(Swing::still(8.6));
    run_for(&device, 120_000);
    let ran = on(&device, &["status"]);
    assert_eq!((ran.exit, ran.err.as_str()), (1, ""));
    assert_eq!(steady(&ran.out, &device), include_str!("status/act_now.txt"));

    let json = on(&device, &["status", "--format", "json"]);
    assert_eq!(json.exit, 1);
    let document = document(&json);
    assert_eq!(document["schema"], "strake.status/1");
    assert_eq!(document["health"], "act_now");
    assert_eq!(document["above_alarm"], true);
    assert_eq!(document["device"]["id"], "pump house 7");
    assert_eq!(document["plan"]["tank"], "brine day tank 3");
    assert_eq!(document["level"]["reading"], "valid");
    let level_m = document["level"]["estimate_m"].as_f64().unwrap();
    assert!((level_m - 8.6).abs() < 0.01, "{level_m}");
    assert!(document["level"]["low_m"].as_f64().unwrap() < level_m);
    assert!(document["level"]["high_m"].as_f64().unwrap() > level_m);
    assert_eq!(document["alarms"][0]["part"], "course 1");
    assert_eq!(document["alarms"][0]["threshold"], "alarm");
    assert_eq!(document["alarms"][0]["state"], "unacknowledged");
    let worst = &document["parts"][0];
    assert_eq!(worst["name"], "course 1");
    // D/2 x density x g x (level - design point) over 3.6 mm x 137 MPa x 0.85.
    let hand = 4.0 * 1280.0 * 9.80665 * (8.6 - 0.3) / (3.6e-3 * 137e6 * 0.85);
    assert!((worst["utilisation"].as_f64().unwrap() - hand).abs() < 2e-3, "{worst}");
    assert!(worst["utilisation_bound"].as_f64() > worst["utilisation"].as_f64());
    assert!(worst["utilisation_inward"].is_null());
    assert!(worst["loads"]["hoop_tension_n_m"].as_f64().unwrap() > 4e5);
    assert!(document["battery_v"].is_null());
    assert!(document["clock"]["ahead_s"].is_i64());
    assert_eq!(document["journal"]["oldest_sector"], document["journal"]["newest_sector"]);
    let caution = document["cautions"].as_array().unwrap().last().unwrap();
    assert!(caution.as_str().unwrap().starts_with("field check"));
}

#[test]
fn a_device_that_cannot_see_says_why() {
    let device = commissioned(Swing::still(5.0));
    run_for(&device, 60_000);
    let broken = Happening::Sensor(Some(Failure::WireBreak));
    device.with(move |machine| machine.happen(broken)).unwrap();
    run_for(&device, 180_000);
    let ran = on(&device, &["status"]);
    assert!(ran.out.contains("CANNOT SEE: do not rely on the figures below\n"), "{}", ran.out);
    assert!(ran.out.contains("Faults since the start\n"), "{}", ran.out);
    assert!(ran.out.contains("  wire break "), "{}", ran.out);
    assert!(ran.out.contains("stands, not acknowledged"), "{}", ran.out);
    assert!(ran.out.contains("  FAILED: not measured for longer"), "{}", ran.out);
    let document = document(&on(&device, &["status", "--format", "json"]));
    assert_eq!(document["health"], "cannot_see");
    assert!(document["level"]["estimate_m"].is_null());
}

#[test]
fn a_device_without_a_plan_judges_nothing() {
    let device = device(Swing::still(5.0));
    let ran = on(&device, &["status"]);
    assert_eq!(ran.exit, 0, "{}", ran.err);
    assert!(ran.out.contains("Parts: none: without a plan nothing is judged\n"), "{}", ran.out);
    assert!(ran.out.contains("  clock     NOT SET"), "{}", ran.out);
}

/// A file of the shipped tank, with something in it replaced.
fn tank_with(from: &str, to: &str) -> tempfile::NamedTempFile {
    let text = TANK.replacen(from, to, 1);
    assert!(from.is_empty() || text != TANK, "{from} is not in the tank file");
    let file = tempfile::NamedTempFile::new().unwrap();
    std::fs::write(file.path(), text).unwrap();
    file
}

fn energy_of(device: &PtyMachine, tank: &tempfile::NamedTempFile) -> (Value, Value) {
    let path = tank.path().to_str().unwrap();
    let status = document(&on(device, &["status", "--format", "json", "--tank", path]));
    (status["energy"].clone(), status)
}

#[test]
fn with_the_tank_file_it_says_how_long_the_cell_lasts() {
    let device = commissioned(Swing::still(5.0));
    run_for(&device, 60_000);
    let shipped = tank_with("", "");
    let (energy, _) = energy_of(&device, &shipped);
    let file = strake::tank::parse("tank.toml", TANK.as_bytes()).unwrap();
    let estimate = strake::energy::estimate(&file).unwrap();
    for (name, of) in [("fixed", estimate.fixed), ("adaptive", estimate.adaptive)] {
        assert_eq!(energy[name]["life_days"], of.life_days);
    }
    assert_eq!(energy["cautions"].as_array().unwrap().len(), estimate.cautions.len());
    // A minute says nothing of the pace of a day.
    assert!(energy["since_start"].is_null());

    run_for(&device, 2 * 86_400_000);
    let (energy, status) = energy_of(&device, &shipped);
    let shown = &energy["since_start"];
    let samples = status["journal"]["samples"].as_f64().unwrap();
    let running_s = status["device"]["running_s"].as_f64().unwrap();
    let per_day = shown["samples_per_day"].as_f64().unwrap();
    assert!((per_day - samples * 86_400.0 / running_s).abs() < 0.01, "{per_day}");
    // At rest for two days and not for four fifths of each: fewer samples, a longer life.
    assert!(per_day < estimate.adaptive.samples_per_day, "{per_day}");
    // 19 Ah, and what a day takes of them.
    let charge_c = shown["charge_per_day_c"].as_f64().unwrap();
    let life_days = shown["life_days"].as_f64().unwrap();
    assert!((life_days - 19.0 * 3600.0 / charge_c).abs() < 1e-6 * life_days, "{life_days}");
    assert!(life_days > estimate.adaptive.life_days, "{life_days}");
    let text = on(&device, &["status", "--tank", shipped.path().to_str().unwrap()]).out;
    let head = "Battery, an estimate                 fixed      adaptive   since start\n";
    assert!(text.contains(head), "{text}");
}

#[test]
fn another_tank_file_is_told() {
    let device = commissioned(Swing::still(5.0));
    let slower = tank_with("idle_interval = \"60 s\"", "idle_interval = \"120 s\"");
    let (energy, _) = energy_of(&device, &slower);
    let caution = "the tank file samples every 10 s and 120 s at rest, the device every 10 s and \
                   60 s: the columns fixed and adaptive are the file's";
    assert_eq!(energy["cautions"][0], caution);
    let (energy, _) = energy_of(&device, &tank_with("brine day tank 3", "brine day tank 4"));
    let caution = energy["cautions"][0].as_str().unwrap();
    assert!(caution.starts_with("the tank file is of brine day tank 4"), "{caution}");

    let silent = tank_with("[power]\ncell ", "# none\n# cell ");
    let silent = std::fs::read_to_string(silent.path()).unwrap();
    let silent = silent.lines().filter(|line| !line.starts_with("sensor = {"));
    let file = tempfile::NamedTempFile::new().unwrap();
    std::fs::write(file.path(), silent.collect::<Vec<_>>().join("\n")).unwrap();
    let ran = on(&device, &["status", "--tank", file.path().to_str().unwrap()]);
    assert_eq!((ran.exit, ran.out.as_str()), (3, ""));
    assert!(ran.err.contains("says nothing of the cell\n  hint: give the file"), "{}", ran.err);
}
