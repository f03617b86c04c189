//! Commissioning: the difference shown, the plan loaded and read back, refusals.

use crate::bench::{Ran, SERIAL, Sealed, Swing, TANK, device, document, on, sealed, strake};
use serialport::{SerialPort, TTYPort};
use std::fs::{self, File};
use std::io::{Read, Write};
use strake::sim::pty::PtyMachine;

#[test]
fn a_fresh_device_takes_the_plan_and_the_time() {
    let device = device(Swing::still(5.0));
    let plan = sealed(TANK, SERIAL);
    let ran = on(&device, &["commission", plan.file.to_str().unwrap()]);
    assert_eq!((ran.exit, ran.err.as_str()), (0, ""));
    for said in [
        "pump house 7 on ",
        "  in force  none\n",
        "  new       brine day tank 3, sealed 2026-05-28 20:26:40 UTC, fingerprint ",
        "4 mA is 0.0 Pa, 20 mA is 150.0 kPa",
        "pump house 7: plan in force, read back and identical\n",
        "it was not set before",
        "unsigned: a device cannot tell who made this plan.",
        "field check: it replaces no licensed inspection",
    ] {
        assert!(ran.out.contains(said), "no `{said}` in\n{}", ran.out);
    }
    let status = document(&on(&device, &["status", "--format", "json"]));
    assert_eq!(status["plan"]["serial"], SERIAL);
    // The device's own time stands while nothing moves it.
    let ahead_s = status["clock"]["ahead_s"].as_i64().unwrap();
    assert!((-600..=0).contains(&ahead_s), "{ahead_s}");
}

#[test]
fn the_same_plan_again_is_refused_as_not_later() {
    let device = device(Swing::still(5.0));
    let plan = sealed(TANK, SERIAL);
    let file = plan.file.to_str().unwrap();
    assert_eq!(on(&device, &["commission", file]).exit, 0);
    let ran = on(&device, &["commission", file, "--yes"]);
    assert_eq!(ran.exit, 8);
    assert!(ran.out.contains("No change: the plans are the same"), "{}", ran.out);
    assert_eq!(
        ran.err,
        "error: the plan is not sealed later than the one in force: 2026-05-28 20:26:40 UTC \
         against 2026-05-28 20:26:40 UTC; it is the very plan in force\n  \
         hint: seal it again with a right clock\n"
    );
}

#[test]
fn a_later_plan_shows_what_it_changes_and_a_dry_run_changes_nothing() {
    let device = device(Swing::still(5.0));
    let first = sealed(TANK, SERIAL);
    assert_eq!(on(&device, &["commission", first.file.to_str().unwrap()]).exit, 0);
    let changed = TANK.replace("overflow     = \"9.3 m\"", "overflow     = \"9.2 m\"");
    let second = sealed(&changed, SERIAL + 60);
    let file = second.file.to_str().unwrap();

    let dry = on(&device, &["commission", file, "--dry-run"]);
    assert_eq!((dry.exit, dry.err.as_str()), (0, "dry run: nothing was changed\n"));
    assert!(dry.out.contains("4 changes, old -> new"), "{}", dry.out);
    assert!(dry.out.contains("9.300 m -> 9.200 m\n"), "{}", dry.out);
    assert!(!dry.out.contains("read back"), "{}", dry.out);

    let ran = on(&device, &["commission", file, "--format", "json"]);
    assert_eq!(ran.exit, 0, "{}", ran.err);
    let document = document(&ran);
    assert_eq!(document["schema"], "strake.commission/1");
    assert_eq!(document["old_plan"]["serial"], SERIAL);
    assert_eq!(document["new_plan"]["serial"], SERIAL + 60);
    assert_eq!(document["new_plan"]["signed"], false);
    let labels: Vec<&str> = document["changes"]
        .as_array()
        .unwrap()
        .iter()
        .map(|change| change["label"].as_str().unwrap())
        .collect();
    assert_eq!(labels, ["sealed", "fingerprint", "overflow", "limit, other liquid 1"]);
    assert_eq!(document["changes"][2]["old"], "9.300 m");
    assert_eq!(document["loaded"]["read_back_identical"], true);
    // The first commissioning set the clock; the device's own time has stood since.
    let ahead_s = document["loaded"]["clock_before"]["ahead_s"].as_i64().unwrap();
    assert!((-600..=0).contains(&ahead_s), "{ahead_s}");
}

#[test]
fn a_plan_for_another_device_is_refused() {
    let device = device(Swing::still(5.0));
    let other = sealed(&TANK.replace("id = \"pump house 7\"", "id = \"yard 2\""), SERIAL);
    let ran = on(&device, &["commission", other.file.to_str().unwrap()]);
    assert_eq!(ran.exit, 8);
    assert_eq!(
        ran.err,
        "error: the plan is sealed for another device: 'yard 2', and this is 'pump house 7'\n  \
         hint: seal one for this device\n"
    );
    let status = document(&on(&device, &["status", "--format", "json"]));
    assert!(status["plan"].is_null() && status["plan_unreadable"].is_null());
}

#[test]
fn a_damaged_plan_file_goes_no_further_than_the_desk() {
    let plan = sealed(TANK, SERIAL);
    let mut bytes = fs::read(&plan.file).unwrap();
    let middle = bytes.len() / 2;
    bytes[middle] ^= 4;
    fs::write(&plan.file, &bytes).unwrap();
    let device = device(Swing::still(5.0));
    let ran = on(&device, &["commission", plan.file.to_str().unwrap(), "--format", "json"]);
    assert_eq!((ran.exit, ran.out.as_str()), (3, ""));
    let error: serde_json::Value = serde_json::from_str(&ran.err).unwrap();
    assert_eq!(error["schema"], "strake.error/1");
    assert_eq!(error["code"], "plan-file");
    let message = error["message"].as_str().unwrap();
    assert!(message.ends_with("the sealed plan is damaged: its check does not agree"), "{message}");
    let bytes_in = device.with(|machine| machine.app().unwrap().link_counters().bytes_in).unwrap();
    assert_eq!(bytes_in, 0, "nobody spoke to the device");

    let absent = plan.folder.path().join("absent.plan");
    let ran = on(&device, &["commission", absent.to_str().unwrap()]);
    assert_eq!(ran.exit, 3);
    assert!(ran.err.contains("hint: give the file that 'strake seal' wrote"), "{}", ran.err);
}

/// Commissions as a person at a terminal who types `answer`; gives what the terminal showed too.
fn answering(answer: &str, device: &PtyMachine, plan: &Sealed) -> (Ran, String) {
    let (mut keyboard, terminal) = TTYPort::pair().unwrap();
    keyboard.write_all(answer.as_bytes()).unwrap();
    let screen = || {
        let name = terminal.name().unwrap();
        File::options().read(true).write(true).open(name).unwrap()
    };
    let arguments = ["commission", plan.file.to_str().unwrap(), "--port", device.port()];
    let mut command = strake();
    let ran = command.args(arguments).stdin(screen()).stderr(screen()).output().unwrap();
    let mut shown = [0; 4096];
    let count = keyboard.read(&mut shown).unwrap();
    (Ran::from(ran), String::from_utf8(shown[..count].to_vec()).unwrap())
}

#[test]
fn on_a_terminal_the_technician_is_asked() {
    let device = device(Swing::still(5.0));
    let plan = sealed(TANK, SERIAL);
    let (ran, shown) = answering("n\n", &device, &plan);
    assert_eq!(ran.exit, 8);
    assert!(shown.starts_with("load this plan into pump house 7? [y/N] "), "{shown}");
    assert!(shown.contains("not confirmed: nothing was changed"), "{shown}");
    let status = document(&on(&device, &["status", "--format", "json"]));
    assert!(status["plan"].is_null());

    let (ran, _) = answering("y\n", &device, &plan);
    assert_eq!(ran.exit, 0);
    assert!(ran.out.contains("plan in force, read back and identical"), "{}", ran.out);
}
