//! Status: the device's health, never the tank's; the worst on top.

use crate::bench::{Swing, commissioned, device, document, on, run_for};
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
