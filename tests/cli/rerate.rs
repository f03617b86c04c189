//! `strake rerate`: the inverse questions, by cases whose answers can be worked out by hand.
//!
//! Where a case comes from a page that prints it wrong, or from the practice of the trade, the test
//! says so; formulas of documents are named with their clause.

use crate::figures::near;
use crate::tank_text::TankText;
use crate::{document, run};
use serde_json::Value;

const BRINE: &str = "configs/brine_day_tank.toml";
const PSI: f64 = 6_894.757_293_168_4;
const FT: f64 = 0.3048;

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap_or_else(|| panic!("{value} is no number"))
}

/// What stands in the tank, of water without any uncertainty.
const WATER: &str = "[liquid]\nname = \"water\"\ndensity = \"1000 kg/m3\"\n\
    temperature = \"20 degC\"\nrange = [\"5 degC\", \"35 degC\"]\nexpansion = \"none\"\n\
    uncertainty = \"0 %\"\n[gas]\nvented = true\n";

/// A cylinder with its parts.
fn cylinder(diameter: &str, height: &str, parts: &str) -> TankText {
    TankText::new(&format!(
        "[tank]\nname = \"tank\"\ncylinder = {{ diameter = \"{diameter}\", height = \"{height}\" }}\n\
         {WATER}{parts}"
    ))
}

/// A wall from one height to another, designed for a state.
fn wall(name: &str, bottom_m: f64, length_m: f64, designed_for: &str) -> String {
    format!(
        "[[panel]]\nname = \"{name}\"\nbottom = \"{bottom_m} m\"\nslope = \"90 deg\"\n\
         shape = {{ rectangle = {{ width = \"1 m\", length = \"{length_m} m\" }} }}\n\
         capacity = [ {{ designed_for = {designed_for}, basis = \"drawing\" }} ]\n"
    )
}

/// A course without allowance.
fn course(name: &str, bottom: &str, height: &str, plate: &str, more: &str) -> String {
    format!(
        "[[course]]\nname = \"{name}\"\nbottom = \"{bottom}\"\nheight = \"{height}\"\n{more}\n\
         capacity = [ {{ plate = {{ {plate} }}, basis = \"surveyed 2026-01-01\" }} ]\n"
    )
}

fn plate(thickness: &str, stress: &str, joint: f64) -> String {
    format!(
        "thickness = \"{thickness}\", corrosion_allowance = \"0 mm\", \
         allowable_stress = \"{stress}\", joint_efficiency = {joint:.2}"
    )
}

/// The document of a re-rating.
fn rerated(tank: &TankText, more: &[&str]) -> Value {
    let path = tank.path();
    let (status, value) = document(&[&["rerate", &path], more].concat());
    assert_eq!(status, 0);
    assert_eq!(value["schema"], "strake.rerate/1");
    value
}

/// The limit level by a load of one side of a part.
fn by<'a>(side: &'a Value, load: &str) -> &'a Value {
    let lines = side["by"].as_array().expect("lines");
    lines.iter().find(|line| line["load"] == load).unwrap_or_else(|| panic!("no {load}: {side}"))
}

#[test]
fn designed_for_shows_four_lines_and_the_pressure_decides() {
    let state = "{ level = \"6 m\", density = \"1000 kg/m3\", gas = \"0 kPa\" }";
    let parts = wall("wall", 0.0, 6.0, state) + &wall("upper half", 3.0, 3.0, state);
    let tank = TankText::new(&format!(
        "[tank]\nname = \"basin\"\nbox = {{ length = \"6 m\", width = \"3 m\", height = \"6 m\" }}\n\
         {WATER}{parts}"
    ));
    let value = rerated(&tank, &["--density", "1320 kg/m3"]);
    let part = &value["parts"][0];
    near(&part["old"]["limit_level_m"], 6.0, 1e-6);
    near(&part["new"]["limit_level_m"], 4.545_454_55, 1e-6);
    assert_eq!(part["new"]["limited_by"], "design_state");
    for (load, level_m, decides) in [
        ("pressure", 4.545_454_55, true),
        ("force", 5.222_329_68, false),
        ("moment", 5.469_655_08, false),
    ] {
        let line = by(&part["new"], load);
        near(&line["limit_level_m"], level_m, 1e-5);
        assert_eq!((&line["decides"], &line["against"]), (&decides.into(), &"design_state".into()));
    }
    near(&value["parts"][1]["new"]["limit_level_m"], 5.272_727_27, 1e-5);
    assert_eq!(value["new"]["limit"]["governing"], "wall");
    // As a course of the same height: the strip of its wall, and the pressure at its lower edge.
    let none = format!(
        "[[course]]\nname = \"shell\"\nbottom = \"0 m\"\nheight = \"6 m\"\n\
         capacity = [ {{ designed_for = {state}, basis = \"drawing\" }} ]\n"
    );
    let value = rerated(&cylinder("8 m", "6 m", &none), &["--density", "1320 kg/m3"]);
    let side = &value["parts"][0]["new"];
    near(&by(side, "pressure")["limit_level_m"], 4.545_454_55, 1e-5);
    near(&by(side, "force")["limit_level_m"], 5.222_329_68, 1e-5);
    near(&by(side, "moment")["limit_level_m"], 5.469_655_08, 1e-5);
    let text = run(&["rerate", &tank.path(), "--density", "1320 kg/m3"]).stdout;
    assert!(text.contains("re-rated    4.54 m, wall, by design state"), "{text}");
    assert!(!text.contains("4.55"), "0.1 % over\n{text}");
}

#[test]
fn gas_takes_its_share_of_a_design() {
    let state = "{ level = \"7.5 m\", density = \"900 kg/m3\", gas = \"1 kPa\" }";
    let parts = wall("wall", 0.0, 7.55, state) + &wall("lower", 0.0, 7.0, state);
    let tank = cylinder("8 m", "9 m", &parts);
    let arguments = ["--density", "1180 kg/m3", "--gas-pressure", "3 kPa(g)", "--level", "6.348 m"];
    let value = rerated(&tank, &arguments);
    let side = &value["parts"][0]["new"];
    // At the very top of the wall the design had 1 kPa: no level is within it under 3 kPa.
    assert!(side["limit_level_m"].is_null() && side["limited_by"] == "gas", "{side}");
    near(&value["parts"][1]["new"]["limit_level_m"], 5.547_505_73, 2e-5);
    near(&by(side, "force")["limit_level_m"], 6.347_657_85, 2e-5);
    near(&by(side, "moment")["limit_level_m"], 6.635_902_33, 2e-5);
    // Two kilopascals more on a tank for water to 6 m: 204 mm at the base.
    let state = "{ level = \"6 m\", density = \"1000 kg/m3\", gas = \"0 kPa\" }";
    let tank = cylinder("8 m", "9 m", &wall("foot", 0.0, 0.1, state));
    let value = rerated(&tank, &["--gas-pressure", "20 mbar", "--level", "5 m"]);
    let limit = |side: &str| number(&value["parts"][0][side]["limit_level_m"]);
    assert!((limit("old") - limit("new") - 0.204).abs() < 5e-4);
}

#[test]
fn the_middle_course_governs_and_water_is_limited_by_the_shell_top() {
    let shell = |diameter: &str, middle: &str| {
        let parts = ["8 mm", middle, "5 mm"].into_iter().zip([0.0, 2.4, 4.8]).enumerate();
        let parts = parts.map(|(i, (thickness, bottom_m))| {
            let bottom = format!("{bottom_m} m");
            course(&format!("course {i}"), &bottom, "2.4 m", &plate(thickness, "136 MPa", 1.0), "")
        });
        cylinder(diameter, "7.2 m", &parts.collect::<String>())
    };
    let tank = shell("20 m", "4 mm");
    let value = rerated(&tank, &["--density", "1320 kg/m3"]);
    for (i, level_m) in [(0, 8.404_933_63), (1, 6.602_466_82), (2, 10.053_083_5)] {
        let side = &value["parts"][i]["new"];
        let alone = side["capacity_alone_m"].as_f64();
        let level = alone.unwrap_or_else(|| number(&side["limit_level_m"]));
        assert!((level - level_m).abs() < 2e-5, "{level}");
    }
    assert_eq!(value["new"]["limit"]["governing"], "course 1");
    near(&value["new"]["limit"]["limit_level_m"], 6.602_466_82, 2e-5);
    near(&value["instrument_only_m"][1], 7.2, 1e-6);
    // For water the same course would bear 7.947 m: the shell ends before.
    near(&value["old"]["limit"]["limit_level_m"], 7.2, 1e-6);
    near(&value["parts"][1]["old"]["capacity_alone_m"], 7.947, 5e-4);
    assert_eq!(value["old"]["limit"]["limited_by"], "shell_top");
    let tank = shell("12 m", "4.2 mm");
    let text = run(&["rerate", &tank.path(), "--density", "1320 kg/m3"]).stdout;
    let said = "re-rated    7.20 m, limited by the shell top, not by strength";
    assert!(text.contains(said), "{text}");
    assert!(!text.contains("nothing but an instrument"), "{text}");
}

/// API 650 5.6.3.2 and API 653 4.3.3.1, one-foot method; one tank for which a forum got four
/// thicknesses, 0.216, 0.232, 0.303 and 0.313 in, by mixing heads and stresses of two courses
/// (published page slips).
#[test]
fn one_foot_in_feet_and_inches() {
    let rule = "design_point = \"1 ft\"\nrule = \"API 653 4.3.3.1\"";
    let of = |stress: &str| {
        let lower = course("lower", "0 ft", "8 ft", &plate("0.25 in", stress, 1.0), rule);
        let upper = course("upper", "8 ft", "24 ft", &plate("0.25 in", stress, 1.0), rule);
        let tank = cylinder("60 ft", "32 ft", &(lower + &upper));
        rerated(&tank, &["--density", "1.5 SG", "--level", "32 ft"])
    };
    let value = of("23200 psi");
    let inches = |part: usize, value: &Value| {
        number(&value["parts"][part]["thickness"]["new"]["required_m"]) / 0.0254
    };
    // The rule's 2.6 is 0.05 % below what gravity gives.
    assert!((inches(0, &value) / 0.3127 - 1.0).abs() < 1e-3);
    assert!((inches(1, &value) / 0.2320 - 1.0).abs() < 1e-3);
    assert!((inches(1, &of("24882 psi")) / 0.2163 - 1.0).abs() < 1e-3);
    near(&value["parts"][0]["new"]["limit_level_m"], 25.79 * FT, 0.02 * FT);

    // 11.5 ft, 0.100 in, steel unknown: of 24 000 and 23 595 psi the smaller; the shell is 22.6 ft.
    let one = course("shell", "0 ft", "22.6 ft", &plate("0.100 in", "23595 psi", 0.7), rule);
    let tank = cylinder("11.5 ft", "22.6 ft", &one);
    let value = rerated(&tank, &["--density", "0.97 SG"]);
    let side = &value["parts"][0]["new"];
    near(&side["limit_level_m"], 22.6 * FT, 1e-6);
    near(&side["capacity_alone_m"], 57.95 * FT, 0.05 * FT);
    assert_eq!(side["limited_by"], "shell_top");
    let text = run(&["rerate", &tank.path(), "--density", "0.97 SG", "--units", "us"]).stdout;
    // 22.6 ft are 22 ft 7.2 in.
    assert!(text.contains("22' 7 1/8\", limited by the shell top"), "{text}");
}

#[test]
fn a_rated_relative_density_is_kept_on_the_lower_level() {
    let state = "{ level = \"3 m\", density = \"1.5 SG\", gas = \"0 kPa\" }";
    let tank = cylinder("2 m", "3 m", &wall("wall", 0.0, 3.0, state));
    let text = run(&["rerate", &tank.path(), "--density", "1.9 SG"]).stdout;
    assert!(text.contains("re-rated    2.36 m"), "2.368 m rounded down\n{text}");
    // And the other way round: to 2.368 m it may be 1.9, rounded down.
    let value = rerated(&tank, &["--density", "1.6 SG", "--level", "2.36842 m"]);
    near(&value["parts"][0]["highest_density_kg_m3"], 1900.0, 0.01);
    let text = run(&["rerate", &tank.path(), "--density", "1.6 SG", "--level", "2.3685 m"]).stdout;
    assert!(text.contains("1899 kg/m3"), "{text}");
}

#[test]
fn a_water_test_covers_the_foot_and_less_above() {
    let one = course("shell", "0 m", "7.2 m", &plate("8 mm", "136 MPa", 1.0), "");
    let state = "{ level = \"9 m\", density = \"1500 kg/m3\", gas = \"0 kPa\" }";
    let tank = cylinder("8 m", "7.2 m", &(one + &wall("strip at 3 m", 3.0, 0.001, state)));
    let test = ["--tested-level", "7.2 m", "--tested-density", "1000 kg/m3"];
    let value = rerated(&tank, &[&["--density", "1320 kg/m3"], &test[..]].concat());
    let foot = &value["parts"][0]["tested"];
    near(&foot["share_of_full"], 0.758, 5e-4);
    near(&foot["proven_level_m"], 5.4545, 1e-4);
    // 4.2 m of water at 3 m are 3.18 m of the other liquid there.
    near(&value["parts"][1]["tested"]["proven_level_m"], 3.0 + 4.2 / 1.32, 1e-3);
    let ran = run(&["rerate", BRINE, "--density", "1.3 SG", "--tested-level", "9 m"]);
    assert_eq!(ran.status, 2, "a test without its density");
}

/// API 653 4.3, API 510 7.2.1.
#[test]
fn the_life_of_a_plate_and_its_date() {
    let of = |allowance: &str, rule: &str| {
        let one = course("shell", "0 m", "9 m", &plate("4.0 mm", "136 MPa", 1.0), rule)
            .replace("corrosion_allowance = \"0 mm\"", allowance);
        cylinder("12 m", "9 m", &(one.replace("\n\n", "\ncorrosion_rate = \"0.1 mm/year\"\n")))
    };
    let arguments = ["--density", "1320 kg/m3", "--level", "6 m"];
    let value = rerated(&of("corrosion_allowance = \"0 mm\"", ""), &arguments);
    let part = &value["parts"][0];
    near(&part["new"]["limit_level_m"], 7.004, 5e-4);
    let new = &part["thickness"]["new"];
    near(&new["required_m"], 3.427e-3, 5e-7);
    near(&new["remaining_life"]["to_retirement_years"], 5.73, 5e-3);
    assert_eq!(new["remaining_life"]["from"], "2026-01-01");
    assert_eq!(new["remaining_life"]["to_retirement_date"], "2031-09-25");
    // The allowance is deducted once towards the planned thickness, not at all to retirement.
    let value = rerated(&of("corrosion_allowance = \"0.4 mm\"", ""), &arguments);
    let life = &value["parts"][0]["thickness"]["new"]["remaining_life"];
    near(&life["to_retirement_years"], 5.73, 5e-3);
    near(&life["to_planned_years"], 1.73, 5e-3);
    // A thickness at a low level is no retirement thickness below the floor of the rule.
    let rule = "rule = \"API 653 4.3.3.1\"\n";
    let tank = of("corrosion_allowance = \"0.4 mm\"", rule);
    let value = rerated(&tank, &["--density", "1320 kg/m3", "--level", "1 m"]);
    let thickness = &value["parts"][0]["thickness"];
    near(&thickness["new"]["calculated_m"], 0.571e-3, 1e-6);
    near(&thickness["new"]["required_m"], 2.54e-3, 1e-12);
    near(&thickness["new"]["required_with_allowance_m"], 2.94e-3, 1e-12);
    let text = run(&["rerate", &tank.path(), "--density", "1.32 SG", "--level", "1 m"]).stdout;
    assert!(text.contains("Not below 2.54 mm, API 653 4.3.3.1."), "{text}");
    assert!(text.contains("replaces no inspection"), "{text}");
}

#[test]
fn behind_a_head_sensor_a_lighter_liquid_is_the_heavier_load() {
    // The sensor on the floor reads what 6 m of 1320 give; at 3 m a panel bears 45 kPa.
    let panel = "[level]\nsensor = \"head\"\nat = \"0 m\"\nreference = \"atmosphere\"\n\
         uncertainty = \"0 kPa\"\n[[panel]]\nname = \"element\"\nbottom = \"3 m\"\n\
         slope = \"90 deg\"\nshape = { rectangle = { width = \"1 m\", length = \"1 m\" } }\n\
         capacity = [ { pressure = \"45 kPa\", basis = \"drawing\" } ]\n";
    let tank = cylinder("8 m", "12 m", panel);
    let value = rerated(&tank, &["--density", "1320 kg/m3", "--level", "6 m"]);
    near(&value["new"]["sensor_reads_pa"], 77_668.668, 0.1);
    // p(3 m) = P - rho g 3 m reaches 45 kPa at 1110.4 kg/m3.
    let expected = (77_668.668 - 45e3) / (9.80665 * 3.0);
    let part = &value["parts"][0];
    near(&part["lowest_density_kg_m3"], expected, 0.01);
    assert_eq!(part["lowest_density_limited_by"], "capacity");
    // By a true level the same panel bears a denser liquid: 45 kPa under 3 m.
    near(&part["highest_density_kg_m3"], 45e3 / (9.80665 * 3.0), 0.01);
    let text = run(&["rerate", &tank.path(), "--density", "1.32 SG", "--level", "6 m"]).stdout;
    assert!(text.contains("1529 kg/m3") && text.contains("1111 kg/m3"), "rounded apart\n{text}");
    // A stronger one is limited by the shell top only: 990 kg/m3 would run over at 8 m.
    let strong = TankText::new(
        &std::fs::read_to_string(tank.path()).expect("the file").replace("45 kPa", "60 kPa"),
    );
    let value = rerated(&strong, &["--density", "1320 kg/m3", "--level", "6 m"]);
    assert_eq!(value["parts"][0]["lowest_density_limited_by"], "shell_top");
    near(&value["parts"][0]["lowest_density_kg_m3"], 660.0, 0.01);
}

#[test]
fn layers_are_held_and_the_top_grows() {
    let text = run(&["rerate", "configs/rinse_basin.toml", "--density", "1050 kg/m3"]).stdout;
    assert!(text.contains("rinse\n    water on top grows"), "{text}");
    let (_, value) = document(&["rerate", "configs/rinse_basin.toml", "--density", "1050 kg/m3"]);
    assert_eq!(value["grows"], "rinse water");
    let ran = run(&["rerate", "configs/rinse_basin.toml", "--density", "1200 kg/m3"]);
    assert_eq!(ran.status, 2, "it would sink below the sludge: {}", ran.stdout);
}

#[test]
fn a_question_without_another_liquid_is_refused() {
    let ran = run(&["rerate", BRINE]);
    assert_eq!(ran.status, 2);
    assert!(ran.stderr.contains("nothing differs from the file"), "{}", ran.stderr);
    let ran = run(&["rerate", BRINE, "--gas-pressure", "15.7 psia"]);
    assert_eq!(ran.status, 2);
    assert!(ran.stderr.contains("subtract the pressure of the air"), "{}", ran.stderr);
    // Every load is nothing without a level: one psi is 6.9 kPa.
    let (_, value) = document(&["rerate", BRINE, "--gas-pressure", "1 psig"]);
    near(&value["new"]["gas_pressure_pa"], PSI, 1e-6);
}

#[test]
fn the_text_of_the_brine_day_tank_to_the_letter() {
    let arguments = ["--density", "1350 kg/m3", "--tested-level", "9 m"];
    let test = ["--tested-density", "998 kg/m3"];
    let text = run(&[&["rerate", BRINE], &arguments[..], &test[..]].concat()).stdout;
    let path = concat!(env!("CARGO_MANIFEST_DIR"), "/../tests/cli/snapshots/brine_rerated.txt");
    if std::env::var_os("STRAKE_SNAPSHOTS").is_some() {
        std::fs::write(path, &text).expect("written");
    }
    let expected = std::fs::read_to_string(path).expect("a snapshot");
    for (line, (got, wanted)) in text.lines().zip(expected.lines()).enumerate() {
        assert_eq!(got, wanted, "line {}", line + 1);
    }
    assert_eq!(text, expected);
}

#[test]
fn pages_keep_to_eighty_columns_in_both_systems() {
    for name in ["brine_day_tank", "laboratory_tank", "rinse_basin"] {
        for units in ["si", "us"] {
            let path = format!("configs/{name}.toml");
            let arguments = ["--gas-pressure", "1 inH2O", "--units", units];
            let test = ["--tested-level", "3 ft", "--tested-density", "62.4 lb/ft3"];
            let text = run(&[&["rerate", &path], &arguments[..], &test[..]].concat()).stdout;
            for line in text.lines() {
                assert!(line.chars().count() <= 80, "{units} {name}: {line}");
                assert!(!line.ends_with(' '), "{units} {name}: `{line}`");
            }
            let lower = text.to_lowercase();
            assert!(!lower.contains("permitted") && !lower.contains("safe"), "{text}");
            assert!(text.contains("overfill prevention"), "{text}");
            if units == "us" {
                assert!(!text.contains(" kPa") && !text.contains(" mm "), "{text}");
            }
        }
    }
}
