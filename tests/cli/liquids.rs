//! Layers, temperature, datum: states whose pressures can be worked out by hand (common practice).

use crate::figures::near;
use crate::tank_text::TankText;
use crate::{document, run};
use serde_json::Value;

fn liquid(header: &str, density: &str, more: &str) -> String {
    format!(
        "{header}\nname = \"liquid\"\ndensity = \"{density}\"\ntemperature = \"20 degC\"\n\
         range = [\"5 degC\", \"60 degC\"]\nuncertainty = \"0 %\"\n{more}\n"
    )
}

/// A cylinder of 8 m by 9 m with a foot to read the base pressure from, and a hatch of 0.5 by
/// 0.6 m from 0.5 m up.
fn tank(liquids: &str, level: &str) -> TankText {
    let plane = |name: &str, width: &str, length: &str, bottom: &str| {
        format!(
            "[[panel]]\nname = \"{name}\"\nslope = \"90 deg\"\nbottom = \"{bottom}\"\n\
             shape = {{ rectangle = {{ width = \"{width}\", length = \"{length}\" }} }}\n\
             capacity = [ {{ pressure = \"1 MPa\", basis = \"drawing\" }} ]\n"
        )
    };
    let parts = plane("foot", "1 m", "0.1 m", "0 m") + &plane("hatch", "0.5 m", "0.6 m", "0.5 m");
    TankText::new(&format!(
        "[tank]\nname = \"tank\"\ncylinder = {{ diameter = \"8 m\", height = \"9 m\" }}\n\
         {liquids}[gas]\nvented = true\n{level}{parts}"
    ))
}

fn layered(top: &str, lower: &str, surface: &str) -> TankText {
    let none = "expansion = \"none\"";
    let surface = format!("{none}\nsurface = \"{surface}\"\nsurface_uncertainty = \"0 m\"");
    let liquids = liquid("[liquid]", top, none) + &liquid("[[liquid.below]]", lower, &surface);
    tank(&liquids, "")
}

#[test]
fn water_under_a_lighter_liquid() {
    // A single density gives 48.347 kPa at the base, 2.4 % low.
    let tank = layered("850 kg/m3", "1000 kg/m3", "0.8 m");
    let (_, value) = document(&["assess", &tank.path(), "--level", "5.8 m"]);
    near(&value["parts"][0]["loads"]["pressure_pa"], 49_524.0, 1.0);
    near(&value["parts"][1]["loads"]["force_n"], 12_537.0, 1.0);
}

#[test]
fn what_has_settled_and_what_foams() {
    let tank = layered("1020 kg/m3", "1400 kg/m3", "1 m");
    let (_, value) = document(&["assess", &tank.path(), "--level", "4 m"]);
    near(&value["parts"][0]["loads"]["pressure_pa"], 43_738.0, 1.0);
    // A metre of foam: by its top and one density the base would have 59.428 kPa.
    let tank = layered("100 kg/m3", "1010 kg/m3", "5 m");
    let (_, value) = document(&["assess", &tank.path(), "--level", "6 m"]);
    near(&value["parts"][0]["loads"]["pressure_pa"], 50_504.0, 1.0);
}

/// A page has the reading rise when the density drops; with the mass closed in an upright tank
/// the base keeps its pressure (published page slips).
#[test]
fn thirty_kelvin_warmer_the_base_stays_and_the_wall_takes_more() {
    let tank = tank(&liquid("[liquid]", "950 kg/m3", "expansion = \"8e-4 /K\""), "");
    let path = tank.path();
    let (_, cold) = document(&["assess", &path, "--level", "5 m"]);
    let warm = ["assess", &path, "--level", "5.12 m", "--temperature", "50 degC"];
    let (_, warm) = document(&warm);
    near(&warm["state"]["density_kg_m3"], 927.73, 5e-3);
    near(&cold["parts"][0]["loads"]["pressure_pa"], 46_582.0, 1.0);
    near(&warm["parts"][0]["loads"]["pressure_pa"], 46_582.0, 1.0);
    let force = |value: &Value| value["parts"][1]["loads"]["force_n"].as_f64().expect("a force");
    assert!(force(&warm) > force(&cold));
}

fn sensed(sensor: &str, at: &str, unit: &str) -> TankText {
    let reference = if sensor == "head" { "reference = \"atmosphere\"\n" } else { "" };
    let level = format!(
        "[level]\nsensor = \"{sensor}\"\nat = \"{at}\"\n{reference}uncertainty = \"0 {unit}\"\n"
    );
    tank(&liquid("[liquid]", "1320 kg/m3", "expansion = \"none\""), &level)
}

#[test]
fn a_dip_plate_and_a_diaphragm_beside_the_floor() {
    // 4.2 m above a dip plate that lies 0.1 m above the floor; forgetting it is 2.3 % low.
    let tank = sensed("innage", "0.1 m", "m");
    let path = tank.path();
    let (_, value) = document(&["assess", &path, "--level", "4.3 m"]);
    near(&value["parts"][0]["loads"]["pressure_pa"], 55_663.0, 1.0);
    let text = run(&["assess", &path, "--level", "4.3 m"]).stdout;
    assert!(text.contains("reads 4.200 m"), "{text}");
    // 62.0 kPa at a diaphragm 0.20 m under the floor, and at one 0.25 m above it.
    for (at, level, base_pa) in
        [("-0.20 m", "4.5896 m", 59_411.0), ("0.25 m", "5.0396 m", 65_236.0)]
    {
        let tank = sensed("head", at, "kPa");
        let path = tank.path();
        let (_, value) = document(&["assess", &path, "--level", level]);
        near(&value["parts"][0]["loads"]["pressure_pa"], base_pa, 2.0);
        let text = run(&["assess", &path, "--level", level]).stdout;
        assert!(text.contains("reads 62.00 kPa"), "{text}");
    }
}

#[test]
fn a_dry_diaphragm_does_not_say_empty() {
    // It reads zero: the surface stands at or below 0.25 m.
    let tank = sensed("head", "0.25 m", "kPa");
    let (_, value) = document(&["assess", &tank.path(), "--level", "0.1 m"]);
    let bound = &value["parts"][0]["loads_outward_bound"]["pressure_pa"];
    near(bound, 1320.0 * 9.80665 * 0.25, 0.1);
    near(&value["parts"][0]["loads_inward_bound"]["pressure_pa"], 0.0, 1e-6);
}

const PETROLEUM: &str = "tests/cli/petroleum.toml";

/// ASTM D1250 in the form of 1980, by hand: crude of 850 kg/m3 at 15 degC has the coefficient
/// 613.9723 / 850^2 = 8.49789e-4 /K; 40 degC make -0.0216056 in the exponent and 831.83 kg/m3.
#[test]
fn petroleum_liquids_follow_their_tables() {
    let (_, value) = document(&["assess", PETROLEUM, "--level", "5 m", "--temperature", "40 degC"]);
    near(&value["state"]["density_kg_m3"], 831.832, 0.002);
    near(&value["parts"][0]["loads"]["pressure_pa"], 831.832 * 9.80665 * 5.0, 0.2);
    // 880 kg/m3 at 15 degC: 0.6278 / 880 = 7.13409e-4; 20 K make -0.0144311 and 867.392 at 35.
    let oil = ["assess", PETROLEUM, "--level", "5 m", "--product", "test lubricating oil"];
    let text = run(&oil).stdout;
    assert!(text.contains("lubricating oil, API MPMS 11.1 (1980)"), "{text}");
    assert!(text.contains("880.0 kg/m3 at 15 degC"), "{text}");
}

#[test]
fn the_table_of_the_device_states_its_error() {
    let text = run(&["assess", PETROLEUM, "--level", "5 m"]).stdout;
    let line = text.lines().find(|line| line.starts_with("    table")).unwrap();
    assert!(line.contains("8 points, straight lines") && line.contains("within "), "{line}");
}

#[test]
fn what_the_tables_do_not_cover_is_refused() {
    let ran = run(&["assess", PETROLEUM, "--level", "5 m", "--density", "1200 kg/m3"]);
    assert_eq!(ran.status, 2, "{}", ran.stdout);
    assert!(ran.stderr.contains("above the tables for crude, 610.5 kg/m3 to"), "{}", ran.stderr);
    let ran = run(&["assess", PETROLEUM, "--level", "5 m", "--temperature", "160 degC"]);
    assert_eq!(ran.status, 2, "{}", ran.stdout);
    assert!(ran.stderr.contains("-18.0 degC to 150.0 degC"), "{}", ran.stderr);
    let text = std::fs::read_to_string(concat!(
        env!("CARGO_MANIFEST_DIR"),
        "/../tests/cli/petroleum.toml"
    ));
    let tank = TankText::new(&text.unwrap().replace("\"45 degC\"", "\"155 degC\""));
    let ran = run(&["assess", &tank.path()]);
    assert_eq!(ran.status, 3, "{}", ran.stdout);
    assert!(ran.stderr.contains("error[out-of-range]"), "{}", ran.stderr);
    assert!(ran.stderr.contains("^^^^^^^^^^^^^^^^^^^^^^^"), "{}", ran.stderr);
}
