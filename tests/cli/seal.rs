//! `strake seal`: the plan file.

use crate::tank_text::TankText;
use crate::{document, run};
use strake::plan_file;

const BRINE: &str = "configs/brine_day_tank.toml";

#[test]
fn a_sealed_plan_is_reproducible_and_reads_back() {
    let folder = TankText::new("");
    let output = folder.inside("brine.plan");
    let path = output.display().to_string();
    let arguments = ["seal", BRINE, "-o", &path, "--serial", "1780000000"];
    let (status, value) = document(&arguments);
    assert_eq!(status, 0);
    assert_eq!(value["schema"], "strake.seal/1");
    assert_eq!(value["signed"], false);
    assert_eq!(value["serial"], 1_780_000_000_u64);
    let bytes = std::fs::read(&output).unwrap();
    let plan = plan_file::read(&bytes).unwrap();
    assert_eq!(value["fingerprint"], format!("{:016x}", plan.fingerprint));
    assert_eq!(value["bytes"], plan.bytes.len());
    assert_eq!(plan.tank_name, "brine day tank 3");
    // Once more: refused, and nothing has changed.
    let ran = run(&arguments);
    assert_eq!(ran.status, 8);
    assert!(ran.stderr.contains("--force"), "{}", ran.stderr);
    assert_eq!(std::fs::read(&output).unwrap(), bytes);
    // With --force: the same bytes; another serial gives others.
    assert_eq!(run(&[&arguments[..], &["--force"]].concat()).status, 0);
    assert_eq!(std::fs::read(&output).unwrap(), bytes);
    let later = ["seal", BRINE, "-o", &path, "--serial", "1780000001", "--force"];
    assert_eq!(run(&later).status, 0);
    assert_ne!(std::fs::read(&output).unwrap(), bytes);
    // No temporary file is left.
    let names = std::fs::read_dir(output.parent().unwrap()).unwrap();
    assert_eq!(names.count(), 2, "tank.toml and brine.plan");
}

#[test]
fn the_text_says_unsigned_and_gives_the_thresholds() {
    let folder = TankText::new("");
    let path = folder.inside("brine.plan").display().to_string();
    let ran = run(&["seal", BRINE, "-o", &path]);
    assert_eq!((ran.status, ran.stderr.as_str()), (0, ""));
    for piece in ["unsigned", "fingerprint", "0.95 of a capacity, first reached at 8.214 m"] {
        assert!(ran.stdout.contains(piece), "{}", ran.stdout);
    }
    // Without --serial the time now: after 2025 and before 2100.
    let plan = plan_file::read(&std::fs::read(&path).unwrap()).unwrap();
    assert!((1_735_689_600..4_102_444_800).contains(&plan.header.serial));
}

#[test]
fn every_example_seals() {
    for name in ["brine_day_tank", "laboratory_tank", "rinse_basin", "wine_drum"] {
        let folder = TankText::new("");
        let path = folder.inside("a.plan").display().to_string();
        let ran = run(&["seal", &format!("configs/{name}.toml"), "-o", &path]);
        assert_eq!(ran.status, 0, "{name}: {}", ran.stderr);
        assert_eq!(ran.stdout.contains("PROVISIONAL"), name == "rinse_basin");
    }
}

#[test]
fn a_folder_that_is_not_there() {
    let folder = TankText::new("");
    let path = folder.inside("none").join("a.plan").display().to_string();
    let ran = run(&["seal", BRINE, "-o", &path]);
    assert_eq!(ran.status, 6);
    assert!(ran.stderr.starts_with("error: cannot write "), "{}", ran.stderr);
}

/// The pump of the example made ten times as fast: the alarm comes too late.
#[test]
fn a_short_margin_is_refused_unless_it_is_said_why() {
    let faster = |text: String| text.replace("\"0.2 mm/s\"", "\"2 mm/s\"");
    let folder = TankText::example("brine_day_tank", faster);
    let output = folder.inside("fast.plan");
    let path = output.display().to_string();
    let tank = folder.path();
    let ran = run(&["seal", &tank, "-o", &path]);
    assert_eq!(ran.status, 8, "{}", ran.stderr);
    let words = "course 1 outward has 0.417 m, needs 2.056 m";
    assert!(ran.stderr.contains(words), "{}", ran.stderr);
    assert!(!output.exists(), "nothing is written");
    let assessed = run(&["assess", &tank]);
    assert!(
        assessed.stdout.contains("0.417 m given, 2.056 m needed, SHORT"),
        "{}",
        assessed.stdout
    );

    let reason = "a person stands at the valve";
    let ran = run(&["seal", &tank, "-o", &path, "--accept-short-margin", reason]);
    assert_eq!((ran.status, ran.stderr.as_str()), (0, ""));
    assert!(ran.stdout.contains(&format!("short margin accepted: {reason}")), "{}", ran.stdout);
    let plan = plan_file::read(&std::fs::read(&output).unwrap()).unwrap();
    assert_eq!(plan.accepted_margin.as_deref(), Some(reason), "it travels with the plan");

    // A reason that nothing asks for stays out of the plan; an empty one is no reason.
    let sound = folder.inside("sound.plan").display().to_string();
    let ran = run(&["seal", BRINE, "-o", &sound, "--accept-short-margin", reason]);
    assert_eq!(ran.status, 0);
    assert_eq!(plan_file::read(&std::fs::read(&sound).unwrap()).unwrap().accepted_margin, None);
    assert_eq!(run(&["seal", BRINE, "-o", &sound, "--accept-short-margin", " "]).status, 2);
}
