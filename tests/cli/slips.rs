//! Slips seen on published pages, and edge cases of practice, with what is right.

use crate::figures::{near, part};
use crate::tank_text::TankText;
use crate::{document, run};

/// A box with one wall panel, water without any uncertainty, and what is added.
fn wall(density: &str, more: &str, capacity: &str) -> TankText {
    TankText::new(&format!(
        "[tank]\nname = \"box\"\nbox = {{ length = \"40 m\", width = \"5 m\", height = \"10 m\" }}\n\
         [liquid]\nname = \"liquid\"\ndensity = \"{density}\"\ntemperature = \"20 degC\"\n\
         range = [\"5 degC\", \"35 degC\"]\nexpansion = \"none\"\nuncertainty = \"0 %\"\n\
         [gas]\nvented = true\n{more}[[panel]]\nname = \"wall\"\nslope = \"90 deg\"\n\
         bottom = \"0 m\"\nshape = {{ rectangle = {{ width = \"30 m\", length = \"10 m\" }} }}\n\
         capacity = [ {{ {capacity}, basis = \"drawing\" }} ]\n"
    ))
}

fn head(at: &str) -> String {
    format!(
        "[level]\nsensor = \"head\"\nat = \"{at}\"\nreference = \"atmosphere\"\n\
         uncertainty = \"0 kPa\"\n"
    )
}

const FORCE: &str = "force = \"100 MN\"";

/// A page has a pressure sensor scaled for water read 11.11 m at 0.9 and 8.33 m at 1.2 for a true
/// 10 m: reversed. And 6.0 m of 1320 kg/m3 show 7.92 m.
#[test]
fn a_scale_for_water_shows_more_of_a_denser_liquid() {
    for (density, level, shown) in [
        ("0.9 SG", "10 m", "9.000 m"),
        ("1.2 SG", "10 m", "12.000 m"),
        ("1320 kg/m3", "6 m", "7.920 m"),
    ] {
        let tank = wall(density, &head("0 m"), FORCE);
        let text = run(&["assess", &tank.path(), "--level", level]).stdout;
        let line = text.lines().find(|line| line.starts_with("    shows")).unwrap();
        assert!(line.contains(shown) && line.contains("where its scale is for water"), "{line}");
    }
}

/// An open tank, the diaphragm 200 mm below the floor, 0.85, up to 2 m: a page has 235.3 and
/// 2588.2 mm of water. Right are 170.0 and 1870.0.
#[test]
fn a_diaphragm_below_the_floor_multiplies_by_the_density() {
    let tank = wall("0.85 SG", &head("-0.2 m"), FORCE);
    for (level, millimetres) in [("0.001 m", 170.85), ("2 m", 1870.0)] {
        let asked = ["rerate", &tank.path(), "--density", "0.85 SG", "--level", level];
        let (_, found) = document(&asked);
        near(&found["new"]["sensor_reads_pa"], millimetres * 9.806_65, 0.02);
    }
}

/// A gate calculator gives about 65 kN for 1.5 by 2.8 m at 75 degrees under 3.2 m: 76.10 kN.
#[test]
fn a_sloping_gate_has_its_centroid_below_the_surface() {
    let gate = "[[panel]]\nname = \"gate\"\nslope = \"75 deg\"\nbottom = \"0 m\"\n\
                shape = { rectangle = { width = \"1.5 m\", length = \"2.8 m\" } }\n\
                capacity = [ { force = \"90 kN\", basis = \"drawing\" } ]\n";
    let tank = wall("1000 kg/m3", gate, FORCE);
    let (_, found) = document(&["assess", &tank.path(), "--level", "3.2 m"]);
    let depth = 3.2 - 1.4 * 75.0_f64.to_radians().sin();
    let force_n = 9_806.65 * depth * 1.5 * 2.8;
    near(&part(&found, "gate")["loads"]["force_n"], force_n, 0.3);
    near(&part(&found, "gate")["loads"]["force_n"], 76_100.0, 10.0);
}

/// 30 by 10 m of water: 14,709,975,000 mN, more than 32 bits hold.
#[test]
fn a_large_wall_keeps_its_size() {
    let (_, found) =
        document(&["assess", &wall("1000 kg/m3", "", FORCE).path(), "--level", "10 m"]);
    near(&part(&found, "wall")["loads"]["force_n"], 14_709_975.0, 30.0);
}

const ALARM: &str = "[alarm]\nresponse_time = \"15 min\"\n\
    warn = { utilisation = 0.5, deadband = 0.02, on_delay = \"0 s\", off_delay = \"60 s\" }\n\
    alarm = { utilisation = 0.9, deadband = 0.02, on_delay = \"0 s\", off_delay = \"60 s\" }\n";

/// 90 % of what limits at 6 m stands at 90.0 % of the level by the pressure at the foot, at
/// 94.87 % by the force.
#[test]
fn ninety_percent_of_a_load_is_not_ninety_percent_of_a_level() {
    let pressure = format!("pressure = \"{} Pa\"", 6.0 * 9_806.65);
    let force = format!("force = \"{} N\"", 30.0 * 9_806.65 * 18.0);
    for (capacity, level_m) in [(pressure, 5.4), (force, 6.0 * 0.9_f64.sqrt())] {
        let (_, found) =
            document(&["assess", &wall("1000 kg/m3", ALARM, &capacity).path(), "--level", "1 m"]);
        near(&found["alarm_level_m"], level_m, 1e-4);
        near(&found["parts"][0]["limit_level_m"], 6.0, 1e-4);
    }
}

/// A ripple of +-15 mm at 6 m moves the force by 1.0 %: a deadband of less lets the alarm come and
/// go, and is said.
#[test]
fn a_deadband_within_the_ripple_is_said() {
    let force = format!("force = \"{} N\"", 30.0 * 9_806.65 * 18.0 / 0.9);
    let sensor = "[level]\nsensor = \"innage\"\nat = \"0 m\"\nuncertainty = \"15 mm\"\n";
    for (deadband, said) in [("0.008", true), ("0.011", false)] {
        let alarm = ALARM
            .replace(
                "utilisation = 0.9, deadband = 0.02",
                "utilisation = 0.9, \
                                  deadband = DEADBAND",
            )
            .replace("DEADBAND", deadband);
        let tank = wall("1000 kg/m3", &format!("{sensor}{alarm}"), &force);
        let (_, found) = document(&["assess", &tank.path(), "--level", "1 m"]);
        let cautions = found["cautions"].to_string();
        assert_eq!(cautions.contains("alarm: its deadband"), said, "{cautions}");
    }
}

/// A bund brimmed to 1.2 m: the static figure, named as such.
#[test]
fn liquid_outside_is_named_as_at_rest() {
    let outside = "[[outside]]\nhighest = \"1.2 m\"\ndensity = \"1000 kg/m3\"\n";
    let tank = wall("900 kg/m3", outside, FORCE);
    let (_, found) = document(&["assess", &tank.path(), "--level", "0.5 m"]);
    // Per metre -5.958 kN at the least: 30 m of it.
    let least = 30.0 * 9_806.65 * (0.9 * 0.125 - 0.72);
    near(&part(&found, "wall")["loads_inward_bound"]["force_n"], least, 1.0);
    near(&part(&found, "wall")["loads_inward_bound"]["force_n"], -30.0 * 5_958.0, 30.0);
    assert!(found["cautions"].to_string().contains("no wave of a tank that bursts"));
}
