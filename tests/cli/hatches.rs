//! Covers held in every way, through the command line: numbers by another method, and the verdict
//! on opening.

use crate::document;
use crate::figures::{near, part};
use crate::tank_text::TankText;
use serde_json::Value;

const TANK: &str = "configs/hatch_test_tank.toml";

/// The example filled with water under a vacuum.
fn water(gas: &str) -> TankText {
    TankText::example("hatch_test_tank", |text| {
        text.replace("\"995 kg/m3\"", "\"1000 kg/m3\"")
            .replace("lowest   = \"-0.6 kPa\"", &format!("lowest   = \"{gas}\""))
            .replace("pressure = \"0 kPa\"", &format!("pressure = \"{gas}\""))
    })
}

/// own-19: a door on two pins; the upper one is pushed inward and keeps its sign.
#[test]
fn a_pin_keeps_its_sign() {
    let tank = TankText::example("hatch_test_tank", |text| {
        let gasket = "width = \"0.84 m\", length = \"1.24 m\"";
        text.replace(gasket, "width = \"0.80 m\", length = \"1.20 m\"")
            .replace("\"995 kg/m3\"", "\"1350 kg/m3\"")
    });
    let (_, found) = document(&["assess", &tank.path(), "--level", "1.1 m"]);
    let loads = &part(&found, "door on two pins")["loads"];
    near(&loads["latch_n"], 1_732.246_66, 0.035);
    near(&loads["hinge_n"][1], -258.895_56, 0.0052);
    near(&loads["hinge_n"][0], 1_915.827_14, 0.038);
    let sum = loads["force_n"].as_f64().unwrap();
    near(&loads["force_n"], 1_732.246_66 - 258.895_56 + 1_915.827_14, 2e-5 * sum);
}

/// own-05: on its seat under the liquid; a vacuum pulls at latch and hinge.
#[test]
fn an_inward_door_hangs_on_its_latch_under_vacuum_alone() {
    let tank = water("-4 kPa");
    let (_, found) = document(&["assess", &tank.path(), "--level", "0.85 m"]);
    let loads = &part(&found, "inward door")["loads"];
    near(&loads["force_n"], -725.275_197, 0.015);
    near(&loads["latch_n"], -345.332_22, 0.0069);
    near(&loads["hinge_n"][0], -379.942_976, 0.0076);
    let (_, found) = document(&["assess", TANK, "--level", "3.0 m"]);
    let loads = &part(&found, "inward door")["loads"];
    near(&loads["latch_n"], 0.0, 0.0);
    near(&loads["hinge_n"][0], 0.0, 0.0);
    assert!(loads["force_n"].as_f64().unwrap() > 4_000.0);
}

/// Water without any uncertainty in an open tank, and a flap that carries a moment.
fn flap(moment: &str) -> TankText {
    TankText::example("hatch_test_tank", |text| {
        text.replace("\"995 kg/m3\"", "\"1000 kg/m3\"")
            .replace(
                "lowest   = \"-0.6 kPa\"\npressure = \"0 kPa\"\nhighest  = \"0.4 kPa\"",
                "vented = true",
            )
            .replace("\"400 N m\"", &format!("\"{moment}\""))
            .replace("expansion   = \"2.3e-4 /K\"", "expansion   = \"none\"")
            .replace("uncertainty = \"0.4 %\"", "uncertainty = \"0 %\"")
    })
}

/// own-02: the moment of a pivoted flap passes 250 N m at 2.085 m on the way up, and again at
/// 3.90 m: the first counts.
#[test]
fn the_first_passing_limits_a_pivot() {
    let tank = flap("250 N m");
    let (_, found) = document(&["assess", &tank.path(), "--level", "2.4 m"]);
    let flap = part(&found, "pivoted flap");
    near(&flap["loads"]["moment_n_m"], -319.130_188, 0.0064);
    near(&flap["limit_level_m"], 2.084_706_89, 4.2e-5);
    assert_eq!(flap["limited_by"], "securing");
    let stretches = flap["limit_intervals_m"].as_array().unwrap();
    near(&stretches[0][1], 2.084_706_89, 4.2e-5);
    assert_eq!(stretches.len(), 2, "{stretches:?}");
    assert_eq!(found["governing"], "pivoted flap");
}

/// The largest and least moment on the way up bound the excursion that no grid point need show.
#[test]
fn a_dip_between_two_levels_is_not_overlooked() {
    // The moment is least, -325.6 N m, at 2.3317 m: a hair less of capacity ends the way there.
    for (capacity, ends) in [("325.7 N m", false), ("325.6 N m", true)] {
        let tank = flap(capacity);
        let (_, found) = document(&["assess", &tank.path(), "--level", "0.4 m"]);
        let flap = part(&found, "pivoted flap");
        let limit = flap["limit_level_m"].as_f64().unwrap();
        assert_eq!(limit < 2.34, ends, "{capacity}: {limit}");
    }
}

/// A 0.6 m square hatch, sill at 0.3 m, level 0.6 m, gas -735.5 Pa: no force, and 0.3 m of liquid
/// stands at the door.
#[test]
fn no_force_is_no_leave_to_open() {
    let text = include_str!("../../configs/hatch_test_tank.toml");
    let start = text.find("[[hatch]]").expect("hatches");
    let end = text.find("[alarm]").expect("alarms");
    let hatch = "[[hatch]]\nname = \"door\"\nopens = \"outward\"\nslope = \"90 deg\"\nbottom = \
                 \"0.3 m\"\nshape = { rectangle = { width = \"0.6 m\", length = \"0.6 m\" } }\n\
                 sealed_to = { rectangle = { width = \"0.6 m\", length = \"0.6 m\" } }\ncapacity = \
                 [ { force = \"9 kN\", basis = \"drawing\" } ]\n\
                 capacity_inward = [ { force = \"9 kN\", basis = \"drawing\" } ]\n\n";
    let tank = |gas: &str| {
        let text = format!("{}{hatch}{}", &text[..start], &text[end..]);
        let from = "lowest   = \"-0.6 kPa\"\npressure = \"0 kPa\"\nhighest  = \"0.4 kPa\"";
        TankText::new(&text.replace(from, gas).replace("\"995 kg/m3\"", "\"1000 kg/m3\""))
    };
    let under_vacuum = "lowest = \"-735.5 Pa\"\npressure = \"-735.5 Pa\"\nhighest = \"0 Pa\"";
    let (_, found) = document(&["assess", &tank(under_vacuum).path(), "--level", "0.6 m"]);
    let door = part(&found, "door");
    near(&door["loads"]["force_n"], 0.0, 0.05);
    assert_eq!(door["opening"]["state"], "do_not_open");
    assert_eq!(door["opening"]["why"].as_array().unwrap().len(), 2, "liquid and gas");
    // Below the sill by more than the sensor's uncertainty nothing is computed.
    let vented = tank("vented = true");
    for (level, state) in [("0.28 m", "no_liquid_computed"), ("0.295 m", "do_not_open")] {
        let (_, found) = document(&["assess", &vented.path(), "--level", level]);
        let opening = &part(&found, "door")["opening"];
        assert_eq!(opening["state"], state, "{level}");
        let says = opening["says"].as_str().unwrap();
        assert!(!says.contains("safe"), "{says}");
        assert_eq!(says.contains("prove by another means"), state == "no_liquid_computed");
    }
}

/// A lid on the roof: its weight holds it down, but only a weighed one relieves.
#[test]
fn an_unweighed_lid_relieves_nothing() {
    let lid = |change: fn(String) -> String| {
        let tank = TankText::example("hatch_test_tank", change);
        let (_, found) = document(&["assess", &tank.path(), "--level", "0.4 m"]);
        part(&found, "roof lid").clone()
    };
    let stated = lid(|text| text);
    let weighed =
        lid(|text| text.replace("\"12 kg\"", "{ mass = \"12 kg\", basis = \"surveyed 2026-04\" }"));
    // 0.4 kPa on 0.54 m: 91.6 N; arm 0.29 m, latch lever 0.56 m; weight 117.7 N.
    let gas = 400.0 * std::f64::consts::PI * 0.27 * 0.27;
    near(&stated["loads_outward_bound"]["latch_n"], gas * 0.29 / 0.56, 1e-3);
    near(&weighed["loads_outward_bound"]["latch_n"], 0.0, 0.0);
    // Inward the weight always counts: -0.6 kPa and 12 kg.
    let least = -1.5 * gas - 12.0 * 9.806_65;
    for lid in [stated, weighed] {
        near(&lid["loads_inward_bound"]["moment_n_m"], least * 0.29, 1e-3);
    }
}

/// ASME VIII-1 UG-34: 106.7 kPa by hand for the bolted cover of the example.
#[test]
fn a_flat_cover_by_its_rule_and_where_the_rule_ends() {
    let (_, found) = document(&["assess", TANK, "--level", "2.0 m"]);
    let cover = part(&found, "bolts on a circle");
    let (t, d, c, s) = (0.012_f64, 0.66_f64, 0.3, 137e6);
    let arm = (0.77 - 0.66) / 2.0;
    // t = d sqrt(C P / S + 1.9 W h / (S d³)) with W = P pi d² / 4.
    let per_pa = c * d * d + 1.9 * std::f64::consts::FRAC_PI_4 * d * arm;
    near(&cover["capacity"][1]["value"], s * t * t / per_pa, 1.0);
    near(&cover["capacity_inward"][0]["value"], s * t * t / (c * d * d), 1.0);
    let thin = TankText::example("hatch_test_tank", |text| {
        text.replace("thickness = \"12 mm\"", "thickness = \"6 mm\"")
    });
    let (_, found) = document(&["assess", &thin.path(), "--level", "2.0 m"]);
    assert_eq!(part(&found, "bolts on a circle")["capacity"].as_array().unwrap().len(), 1);
    let why = found["not_judged"].to_string();
    assert!(why.contains("too thin for the flat-cover rule"), "{why}");
}

/// Latch, hinge and pivot each have their own limit level; the lowest of what decides is that of
/// the part.
#[test]
fn every_fastening_has_its_own_limit() {
    let (_, found) = document(&["rerate", TANK, "--density", "2500 kg/m3"]);
    for (name, loads) in [
        ("bolts on a rectangle", &["force", "securing"][..]),
        ("hinge at the top", &["force", "hinge", "latch"]),
        ("door on two pins", &["force", "hinge", "latch"]),
        ("pivoted flap", &["force", "pivot", "pivot_moment"]),
    ] {
        let side = &part(&found, name)["new"];
        let lines = side["by"].as_array().unwrap();
        let words: Vec<&str> = lines.iter().map(|line| line["load"].as_str().unwrap()).collect();
        assert_eq!(words, loads, "{name}");
        let level = |line: &Value| line["limit_level_m"].as_f64().unwrap();
        let lowest = lines.iter().map(level).fold(f64::INFINITY, f64::min);
        // A pin that is pushed inward may end the way before.
        if side["limited_by"] == "inward" {
            assert!(side["limit_level_m"].as_f64().unwrap() < lowest);
        } else {
            near(&side["limit_level_m"], lowest, 1e-6);
        }
    }
    // The moment passes its capacity inward, as the pivot turns.
    let (_, found) = document(&["rerate", &flap("250 N m").path(), "--density", "1000 kg/m3"]);
    let lines = part(&found, "pivoted flap")["new"]["by"].as_array().unwrap();
    let line = lines.iter().find(|line| line["load"] == "pivot_moment").unwrap();
    near(&line["limit_level_m"], 2.084_706_89, 4.2e-5);
    assert_eq!(line["reached"], true);
}
