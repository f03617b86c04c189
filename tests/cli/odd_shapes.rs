//! Outlines of every kind through the command line: numbers by two other methods, and the text.

use crate::figures::{near, part};
use crate::tank_text::TankText;
use crate::{document, run};

const TANK: &str = "configs/odd_shapes.toml";

#[test]
fn a_polygon_with_a_hole_has_a_sideways_centre() {
    // own-04: g = 9.80665, level 1.3 m, 1150 kg/m3, 1.5 kPa.
    let tank = TankText::example("odd_shapes", |text| {
        text.replace("\"1020 kg/m3\"", "\"1150 kg/m3\"").replace("\"0.3 kPa\"", "\"1.5 kPa\"")
    });
    let (_, found) = document(&["assess", &tank.path(), "--level", "1.3 m"]);
    let loads = &part(&found, "patch")["loads"];
    near(&loads["force_n"], 6_980.200_84, 0.14);
    near(&loads["centre_of_pressure_sideways_m"], 0.623_605_393, 1.2e-5);
    // Moment about the lower edge over the force is the distance of the centre from that edge.
    let height = 0.5 + 2_531.449_5 / 6_980.200_84 * 70.0_f64.to_radians().sin();
    near(&loads["centre_of_pressure_m"], height, 2e-5);
}

#[test]
fn every_outline_carries_its_pressure() {
    // Filled over all of them: the pressure at the centroid times the area.
    let tank = TankText::example("odd_shapes", |text| text.replace("\"2.8 m\"", "\"3.5 m\""));
    let (_, found) = document(&["assess", &tank.path(), "--level", "3.4 m"]);
    let pi = std::f64::consts::PI;
    let obround = 0.4 * 0.5 + pi * 0.04;
    let chute_up = 1.4 / 3.0 * (1.2 + 2.0 * 3.0) / (1.2 + 3.0);
    for (name, area, centroid) in [
        ("gable, lower", 1.5, 1.0),
        ("gable, upper", 1.5, 2.0),
        ("chute", 1.4 * 2.1, chute_up * 50.0_f64.to_radians().sin()),
        ("port light, lying", obround, 1.2),
        ("port light, standing", obround, 1.2),
        ("manway plate", 1.44, 0.9),
        ("false floor", pi * 0.15, 0.2),
        ("roof plate", 6.0, 3.0),
        ("oval manhole", pi * 0.22 * 0.27, 0.6),
    ] {
        let pressure = 300.0 + 1020.0 * 9.806_65 * (3.4 - centroid);
        near(&part(&found, name)["loads"]["force_n"], pressure * area, 4e-6 * pressure * area);
    }
    // Overhang: wide below; its centroid lies below the middle.
    let down = 1.0 / 3.0 * (1.0 + 2.0 * 3.0) / (1.0 + 3.0);
    let centroid = 3.0 - down * 130.0_f64.to_radians().sin();
    let pressure = 300.0 + 1020.0 * 9.806_65 * (3.4 - centroid);
    near(&part(&found, "overhang")["loads"]["force_n"], 2.0 * pressure, 1e-5 * pressure);
}

#[test]
fn the_text_names_outline_and_hole() {
    let ran = run(&["assess", TANK]);
    let text = ran.stdout.split_whitespace().collect::<Vec<_>>().join(" ");
    assert_eq!(ran.status, 0, "{text}{}", ran.stderr);
    for words in [
        "gable, lower, panel: 0.000 m to 1.500 m",
        "triangle 2.000 m x 1.500 m",
        "a hole carried elsewhere left out",
        "a hole whose load it carries",
        "sideways",
    ] {
        assert!(text.contains(words), "{words} is not in\n{text}");
    }
}
