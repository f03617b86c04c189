//! `strake assess`: the document, the text, the exit status.

use crate::figures::near;
use crate::tank_text::TankText;
use crate::{document, run};
use serde_json::Value;

const BRINE: &str = "configs/brine_day_tank.toml";

const SET_POINT: &[&str] =
    &["pressure_pa", "current_a", "level_lightest_m", "level_nominal_m", "level_densest_m"];

const EXAMPLES: [&str; 9] = [
    "brine_day_tank",
    "laboratory_tank",
    "rinse_basin",
    "odd_shapes",
    "hatch_test_tank",
    "plate_box",
    "wine_drum",
    "curved_parts",
    "mesh_parts",
];

/// Every key that the document may have, by the place where it stands.
const KEYS: [(&str, &[&str]); 19] = [
    (
        "",
        &[
            "schema",
            "tank",
            "state",
            "parts",
            "governing",
            "not_judged",
            "warn_level_m",
            "alarm_level_m",
            "warn_set_point",
            "alarm_set_point",
            "margin",
            "filling",
            "energy",
            "cautions",
        ],
    ),
    ("state", &["level_m", "density_kg_m3", "gas_pressure_pa", "temperature_c", "gravity_m_s2"]),
    (
        "parts",
        &[
            "name",
            "kind",
            "loads",
            "loads_outward_bound",
            "loads_inward_bound",
            "capacity",
            "capacity_inward",
            "plates",
            "table",
            "opening",
            "utilisation",
            "utilisation_bound",
            "utilisation_inward",
            "limited_by",
            "limit_level_m",
            "limit_level_bound_m",
            "limit_intervals_m",
            "lowest_level_m",
            "thickness_for_state_m",
            "line_of_action",
        ],
    ),
    (
        "loads",
        &[
            "pressure_pa",
            "hoop_tension_n_m",
            "tension_n_m",
            "compression_n_m",
            "force_n",
            "force_x_n",
            "force_z_n",
            "centre_of_pressure_m",
            "centre_of_pressure_slope_m",
            "centre_of_pressure_sideways_m",
            "moment_centroid_n_m",
            "bolt_n",
            "stress_pa",
            "moment_n_m",
            "latch_n",
            "hinge_n",
        ],
    ),
    (
        "plates",
        &[
            "side",
            "edges",
            "elastic_modulus_pa",
            "poisson_ratio",
            "taken_as_steel",
            "series_error",
            "device_points",
            "device_excess",
            "device_pressure_pa",
            "bending_moment_n",
            "bending_at_x_m",
            "bending_at_slope_m",
            "bending_direction",
            "deflection_m",
            "deflection_bound_m",
            "edge_base_n_m",
            "edge_side_n_m",
            "edge_top_n_m",
            "corner_lower_n",
            "corner_upper_n",
            "why_not",
        ],
    ),
    ("line_of_action", &["angle_deg", "force_x_at_m", "force_z_at_m", "force_y_n", "moment_n_m"]),
    ("capacity", &["load", "value", "basis"]),
    ("table", &["rows", "error"]),
    (
        "filling",
        &[
            "state",
            "inflow_m3_s",
            "to_limit",
            "to_bound",
            "to_alarm",
            "to_overflow",
            "response_time_s",
            "enough",
        ],
    ),
    ("to_limit", &["level_m", "volume_m3", "time_s"]),
    ("opening", &["state", "why", "says"]),
    ("not_judged", &["name", "why"]),
    ("warn_set_point", SET_POINT),
    ("alarm_set_point", SET_POINT),
    ("margin", &["given_m", "needed_m", "enough", "per_part"]),
    (
        "per_part",
        &["name", "side", "alarm_level_m", "limit_level_m", "given_m", "needed_m", "enough"],
    ),
    ("energy", &["fixed", "adaptive", "life_ratio", "rest_share", "assumptions", "cautions"]),
    ("fixed", &["samples_per_day", "charge_per_day_c", "sensor_share", "life_days"]),
    ("adaptive", &["samples_per_day", "charge_per_day_c", "sensor_share", "life_days"]),
];

/// Checks the keys of an object and of what it holds.
fn check(place: &str, value: &Value, seen: &mut Vec<String>) {
    match value {
        Value::Array(list) => list.iter().for_each(|one| check(place, one, seen)),
        Value::Object(object) => {
            let known = KEYS.iter().find(|(at, _)| *at == place).expect("a known place").1;
            for (key, inner) in object {
                assert!(known.contains(&key.as_str()), "`{key}` in `{place}` is not documented");
                seen.push(format!("{place}.{key}"));
                let inner_place = match key.as_str() {
                    "loads_outward_bound" | "loads_inward_bound" => "loads",
                    "capacity_inward" => "capacity",
                    "to_bound" | "to_alarm" | "to_overflow" => "to_limit",
                    other => other,
                };
                if matches!(inner, Value::Object(_))
                    || KEYS.iter().any(|(at, _)| *at == inner_place)
                {
                    check(inner_place, inner, seen);
                }
            }
        }
        _ => {}
    }
}

#[test]
fn the_examples_together_show_every_documented_key_and_no_other() {
    let mut seen = Vec::new();
    for name in EXAMPLES {
        let tank = format!("configs/{name}.toml");
        let mut asked = vec!["assess", &tank, "--level", "0.6 m"];
        if name == "brine_day_tank" {
            asked.extend(["--inflow", "1 m3/h"]);
        }
        let (_, value) = document(&asked);
        assert_eq!(value["schema"], "strake.assess/1");
        check("", &value, &mut seen);
    }
    for (place, keys) in KEYS {
        for key in keys {
            assert!(seen.contains(&format!("{place}.{key}")), "`{key}` in `{place}` never shown");
        }
    }
}

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap_or_else(|| panic!("{value} is no number"))
}

#[test]
fn the_story_of_the_brine_day_tank() {
    let (status, value) = document(&["assess", BRINE]);
    assert_eq!(status, 1, "at its overflow the first course is above its alarm threshold");
    near(&value["state"]["level_m"], 9.3, 1e-12);
    assert_eq!(value["governing"], "course 1");
    let course = &value["parts"][0];
    near(&course["limit_level_m"], 8.649, 5e-4);
    assert_eq!(course["limited_by"], "strength");
    near(&value["warn_level_m"], 7.38, 5e-3);
    near(&value["alarm_level_m"], 8.21, 5e-3);
    // A little below the alarm level all is done; a little above, 1.
    assert_eq!(document(&["assess", BRINE, "--level", "8.21 m"]).0, 0);
    assert_eq!(document(&["assess", BRINE, "--level", "8.22 m"]).0, 1);
    // For water it is sound to its overflow.
    let (status, value) = document(&["assess", BRINE, "--density", "1000 kg/m3"]);
    assert_eq!(status, 0);
    assert_eq!(value["parts"][0]["limited_by"], "overflow");
    let text = run(&["assess", BRINE, "--density", "1 SG"]).stdout;
    assert!(text.contains("its capacity alone is reached at 10.98 m"), "{text}");
}

#[test]
fn a_limit_is_rounded_down_and_never_up() {
    // Designed for water to 6 m, filled with 1320 kg/m3: 4.54545 m.
    let tank = TankText::new(
        "[tank]\nname = \"t\"\nbox = { length = \"4 m\", width = \"4 m\", height = \"6 m\" }\n\
         [liquid]\nname = \"syrup\"\ndensity = \"1320 kg/m3\"\ntemperature = \"20 degC\"\nrange = \
         [\"19 degC\", \"20 degC\"]\nexpansion = \"none\"\nuncertainty = \"0 %\"\n[gas]\nvented = \
         true\n[[panel]]\nname = \"wall\"\nshape = { rectangle = { width = \"1 m\", length = \"6 m\" \
         } }\nbottom = \"0 m\"\nslope = \"90 deg\"\ncapacity = [ { designed_for = { level = \"6 m\", \
         density = \"1000 kg/m3\", gas = \"0 kPa\" }, remaining = 1, basis = \"drawing\" } ]\n",
    );
    let path = tank.path();
    let (_, value) = document(&["assess", &path]);
    near(&value["parts"][0]["limit_level_m"], 6.0 / 1.32, 2e-6);
    let text = run(&["assess", &path]).stdout;
    assert!(text.contains("calculated limit level 4.54 m (limited by design state)"), "{text}");
    assert!(!text.contains("4.55"), "{text}");
    let text = run(&["assess", &path, "--units", "us"]).stdout;
    // 14.9129 ft are 14 ft 10.955 in.
    assert!(text.contains("calculated limit level 14 ft 10 7/8 in"), "{text}");
}

#[test]
fn the_head_sensor_on_a_tank_with_gas() {
    // 4 m of 1010 kg/m3 under 5 kPa, round hatch of 0.6 m at 0.8 m: 10.375 kN.
    let tank = TankText::example("brine_day_tank", |text| {
        let gas = "lowest = \"5 kPa\"\npressure = \"5 kPa\"\nhighest = \"5 kPa\"";
        text.replace("vented = true ", &format!("{gas} "))
            .replace("diameter = \"0.61 m\"", "diameter = \"0.60 m\"")
            .replace("diameter = \"0.66 m\"", "diameter = \"0.60 m\"")
            .replace("\"0.85 m\"", "\"0.80 m\"")
    });
    let path = tank.path();
    let state = ["assess", &path, "--level", "4 m", "--density", "1010 kg/m3"];
    let (_, value) = document(&state);
    near(&value["parts"][4]["loads"]["force_n"], 10_375.0, 1.0);
    // The dry roof hatch carries the gas: 0.54 m to its gasket.
    near(&value["parts"][5]["loads"]["force_n"], 5000.0 * std::f64::consts::PI * 0.0729, 0.01);
    near(&value["state"]["gas_pressure_pa"], 5000.0, 1e-9);
    let (_, value) = document(&[&state[..], &["--gas-pressure", "-1.5 kPa"]].concat());
    near(&value["state"]["gas_pressure_pa"], -1500.0, 1e-9);
    let inward = number(&value["parts"][5]["loads_inward_bound"]["force_n"]);
    assert!((inward + 1500.0 * std::f64::consts::PI * 0.0729).abs() < 0.01, "{inward}");
}

#[test]
fn overrides_carry_units_and_temperature_moves_the_density() {
    let arguments = [
        "assess",
        BRINE,
        "--level",
        "20 ft 6 in",
        "--density",
        "80 lb/ft3",
        "--temperature",
        "86 degF",
    ];
    let (_, value) = document(&arguments);
    near(&value["state"]["level_m"], 20.5 * 0.3048, 1e-12);
    near(&value["state"]["temperature_c"], 30.0, 1e-9);
    let at_20 = 80.0 * 0.453_592_37 / 0.028_316_846_592;
    near(&value["state"]["density_kg_m3"], at_20 / 1.004, 1e-9);
    let (_, value) = document(&["assess", BRINE, "--product", "rinse water"]);
    near(&value["state"]["density_kg_m3"], 998.0, 1e-12);
}

#[test]
fn the_text_of_the_brine_day_tank_to_the_letter() {
    let text = run(&["assess", BRINE, "--level", "7.2 m"]).stdout;
    let expected = include_str!("snapshots/brine_day_tank.txt");
    for (line, (got, wanted)) in text.lines().zip(expected.lines()).enumerate() {
        assert_eq!(got, wanted, "line {}", line + 1);
    }
    assert_eq!(text, expected);
}

#[test]
fn pages_keep_to_a_hundred_columns_in_both_systems() {
    for name in EXAMPLES {
        for units in ["si", "us"] {
            let text = run(&["assess", &format!("configs/{name}.toml"), "--units", units]).stdout;
            for line in text.lines() {
                assert!(line.chars().count() <= 100, "{units} {name}: {line}");
                assert!(!line.ends_with(' '), "{units} {name}: `{line}`");
            }
            let lower = text.to_lowercase();
            assert!(!lower.contains("permitted") && !lower.contains("safe"), "{text}");
            assert!(text.ends_with("no overfill prevention system.\n"));
            if units == "us" {
                // Basis texts and names of rules may hold SI, numbers of the program may not.
                assert!(!text.contains(" kPa") && !text.contains(" kN"), "{text}");
            }
        }
    }
    let text = run(&["assess", "configs/rinse_basin.toml"]).stdout;
    let provisional = text.find("PROVISIONAL").expect("an assumed capacity");
    assert!(provisional < text.find("State").expect("a state"));
}
