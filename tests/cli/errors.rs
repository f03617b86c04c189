//! What goes wrong: exit status, standard error, and JSON errors.

use crate::run;
use crate::tank_text::TankText;
use serde_json::Value;

const BRINE: &str = "configs/brine_day_tank.toml";

#[test]
fn a_wrong_command_line_is_2() {
    for arguments in [
        &["assess"][..],
        &["asess", BRINE],
        &["assess", BRINE, "--level", "9.0"],
        &["assess", BRINE, "--level", "nan m"],
        &["assess", BRINE, "--level", "inf m"],
        &["assess", BRINE, "--level", "1e999 m"],
        &["assess", BRINE, "--level", "-0.5 m"],
        &["assess", BRINE, "--level", "9.7 m"],
        &["assess", BRINE, "--level", "5 kPa"],
        &["assess", BRINE, "--density", "-5 kg/m3"],
        &["assess", BRINE, "--temperature", "900 degC"],
        &["assess", BRINE, "--gas-pressure", "-2 bar"],
        &["assess", BRINE, "--product", "diesel"],
        &["assess", BRINE, "--units", "imperial"],
        &["assess", BRINE, "-q", "-v"],
        &["seal", BRINE],
        &[],
    ] {
        let ran = run(arguments);
        assert_eq!(ran.status, 2, "{arguments:?}: {}", ran.stderr);
        assert_eq!(ran.stdout, "", "{arguments:?}");
        assert!(!ran.stderr.is_empty(), "{arguments:?}");
    }
}

#[test]
fn a_level_above_an_open_shell_says_why_and_what_to_do() {
    let ran = run(&["assess", BRINE, "--level", "9.7 m"]);
    assert_eq!(
        ran.stderr,
        "error: --level is 9.700 m, above the shell top at 9.600 m: an open tank runs over\n  hint: \
         state a lower level; for a closed tank with a pipe above its roof write closed = true in \
         [fill]\n"
    );
}

#[test]
fn an_invalid_file_is_3_and_shows_every_finding() {
    let tank = TankText::example("brine_day_tank", |text| {
        text.replace("\"8.0 m\"", "8.0").replace("[gas]", "[gass]")
    });
    let path = tank.path();
    let ran = run(&["assess", &path]);
    assert_eq!((ran.status, ran.stdout.as_str()), (3, ""));
    assert!(ran.stderr.contains("tank.toml:12:") && ran.stderr.contains('^'), "{}", ran.stderr);
    assert!(ran.stderr.contains("gass"), "{}", ran.stderr);
    // The same as JSON, on the same stream.
    let ran = run(&["assess", &path, "--format", "json"]);
    assert_eq!((ran.status, ran.stdout.as_str()), (3, ""));
    let error: Value = serde_json::from_str(&ran.stderr).expect("one document");
    assert_eq!(error["schema"], "strake.error/1");
    assert_eq!(error["code"], "invalid-tank-file");
    assert!(error["findings"].as_array().expect("a list").len() >= 2);
    assert_eq!(error["findings"][0]["line"], 12);
}

#[test]
fn a_missing_file_is_3() {
    let ran = run(&["assess", "no_such_tank.toml"]);
    assert_eq!(ran.status, 3);
    assert!(ran.stderr.starts_with("error: cannot read no_such_tank.toml: "), "{}", ran.stderr);
}

#[test]
fn errors_of_the_command_line_are_json_too() {
    for (arguments, code) in [
        (&["assess", BRINE, "--level", "9.0", "--format", "json"][..], "usage"),
        (&["--format=json", "assess", BRINE, "--level", "9.7 m"], "state"),
        (&["assess", "no_such_tank.toml", "--format", "json"], "cannot-read"),
    ] {
        let ran = run(arguments);
        let error: Value = serde_json::from_str(&ran.stderr).expect("one document");
        assert_eq!(error["code"], code, "{}", ran.stderr);
        assert!(error["message"].as_str().is_some_and(|text| !text.contains('\n')));
    }
}

#[test]
fn a_file_without_alarm_or_sensor_can_be_assessed_but_not_sealed() {
    let tank = TankText::example("brine_day_tank", |text| {
        let without = |text: &str, from: &str, to: &str| {
            let (start, end) = (text.find(from).unwrap(), text.find(to).unwrap());
            format!("{}{}", &text[..start], &text[end..])
        };
        without(&without(&text, "[alarm]", "[device]"), "[level]", "# The courses of the shell")
    });
    let path = tank.path();
    let ran = run(&["assess", &path, "--level", "9 m", "--format", "json"]);
    // Against the capacity itself: at 9 m the bound of course 1 is above it.
    assert_eq!(ran.status, 1, "{}", ran.stderr);
    let value: Value = serde_json::from_str(&ran.stdout).unwrap();
    assert_eq!(value["alarm_level_m"], Value::Null);
    let cautions = value["cautions"].to_string();
    assert!(cautions.contains("no [level]") && cautions.contains("no [alarm]"), "{cautions}");
    let plan = tank.inside("tank.plan");
    let ran = run(&["seal", &path, "-o", &plan.display().to_string()]);
    assert_eq!(ran.status, 3);
    for table in ["[level]", "[alarm]", "[logging]"] {
        assert!(ran.stderr.contains(table), "{}", ran.stderr);
    }
    assert!(!plan.exists());
}
