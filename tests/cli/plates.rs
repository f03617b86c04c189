//! Panels judged by the bending of their plates, through the command line.

use crate::figures::part;
use crate::tank_text::TankText;
use crate::{document, run};
use serde_json::Value;
use strake::assess::{Overrides, Request, assess};
use strake::tank;
use strake_core::lane::Lane;
use strake_core::part::evaluate;
use strake_oracle::bending::{Held, Sheet};

const TANK: &str = "configs/plate_box.toml";
/// Density of the example, and gravity.
const WEIGHT_N_M3: f64 = 1020.0 * 9.806_65;

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap_or_else(|| panic!("{value} is no number"))
}

/// Largest moment of finite elements at the nodes of a plate wet up to `wet_m`.
fn by_elements(sheet: Sheet, wet_m: f64) -> f64 {
    let bent = sheet.bent(|s| WEIGHT_N_M3 * (wet_m - s).max(0.0), &[wet_m]);
    let (across, up) = sheet.mesh;
    let mut largest = 0.0_f64;
    for j in 0..=up {
        for i in 0..=across {
            largest = largest.max(bent.moments(i, j).principal());
        }
    }
    largest
}

/// Filled over the plate and partly wetted.
#[test]
fn stresses_agree_with_finite_elements() {
    let end_wall =
        Sheet { width: 1.0, length: 1.2, poisson: 0.3, held: [Held::Clamped; 3], mesh: (20, 48) };
    let side_wall = Sheet {
        width: 1.0,
        length: 2.4,
        poisson: 0.3,
        held: [Held::Clamped, Held::Clamped, Held::Free],
        mesh: (16, 76),
    };
    for level in [0.5, 0.9, 2.2] {
        let text = format!("{level} m");
        let (_, found) = document(&["assess", TANK, "--level", &text]);
        for (name, sheet, sound_m) in
            [("end wall, lower", end_wall, 0.008), ("side wall", side_wall, 0.011)]
        {
            let stress = number(&part(&found, name)["loads"]["stress_pa"]);
            let due = 6.0 * by_elements(sheet, level) / (sound_m * sound_m);
            let off = (stress - due).abs() / due;
            println!("{name} at {level} m: {stress:.4e} Pa, elements {due:.4e}, off {off:.1e}");
            assert!(off < 2.5e-2, "{name} at {level} m: {stress} {due}");
        }
    }
}

/// A strip of 3 m wet to its middle: 3509 N m/m at 0.888 m. Uniform and triangular load over the
/// whole plate, superposed, would say nothing at mid-span.
#[test]
fn a_wall_wet_to_its_middle_bends() {
    let tank = TankText::example("plate_box", |text| {
        text.replace("width = \"1.0 m\", length = \"2.4 m\"", "width = \"18 m\", length = \"3 m\"")
            .replace("4.0 m", "20 m")
            .replace("height = \"2.4 m\"", "height = \"3 m\"")
            .replace("corrosion_allowance = \"1 mm\", ", "")
            .replace("\"12 mm\"", "\"60 mm\"")
            .replace("\"top free\"", "\"supported\"")
            .replace("1020 kg/m3", "1000 kg/m3")
    });
    let (_, found) = document(&["assess", &tank.path(), "--level", "1.5 m"]);
    let wall = part(&found, "side wall");
    let plate = &wall["plates"][0];
    assert!((number(&plate["bending_moment_n"]) - 3509.0).abs() < 10.0, "{plate}");
    assert!((number(&plate["bending_at_slope_m"]) - 0.888).abs() < 0.05, "{plate}");
    let stress = 6.0 * number(&plate["bending_moment_n"]) / (0.06 * 0.06);
    assert!((number(&wall["loads"]["stress_pa"]) / stress - 1.0).abs() < 1e-6);
}

#[test]
fn outside_the_theory_there_is_no_number() {
    let thickness = |to: &str| {
        let to = format!("{{ thickness = \"{to}\"");
        TankText::example("plate_box", |text| text.replace("{ thickness = \"10 mm\"", &to))
    };
    let sheet = thickness("2 mm");
    let (_, found) = document(&["assess", &sheet.path()]);
    let thin = part(&found, "upper field");
    assert!(thin["loads"]["stress_pa"].is_null() && thin["utilisation"].is_null(), "{thin}");
    assert!(thin["limit_level_m"].is_null() && thin["thickness_for_state_m"].is_null(), "{thin}");
    let not_judged = found["not_judged"].as_array().unwrap();
    let why =
        not_judged.iter().find(|one| one["name"] == "upper field").unwrap()["why"].to_string();
    assert!(why.contains("thin-plate theory not valid") && why.contains("sag"), "{why}");
    // A plate of 130 mm on 1 m is thick.
    let (_, found) = document(&["assess", &thickness("130 mm").path()]);
    let thick = part(&found, "upper field");
    assert!(thick["loads"]["stress_pa"].is_null(), "{thick}");
    let why = thick["plates"][0]["why_not"].to_string();
    assert!(why.contains("7.7 thicknesses"), "{why}");
    // Small now, too large at its limit: no number either.
    let (_, found) = document(&["assess", &sheet.path(), "--level", "1.25 m"]);
    let why = part(&found, "upper field")["plates"][0]["why_not"].to_string();
    assert!(why.contains("filled to its limit"), "{why}");
}

/// At the limit level the stress is the allowable one; the thickness for the state brings it there.
#[test]
fn limits_and_thickness_are_where_the_stress_is_allowable() {
    let stronger = |text: &str| text.replace("\"2.4 m\" }     #", "\"6 m\" }     #");
    let tall = stronger(include_str!("../../configs/plate_box.toml"));
    let tall = tall.replace("\"2.2 m\"", "\"5.5 m\"").replace("\"8 mm\"", "\"9 mm\"");
    let tank = TankText::example("plate_box", |_| tall.clone());
    let (_, found) = document(&["assess", &tank.path(), "--level", "3.3 m"]);
    let wall = part(&found, "end wall, lower");
    assert_eq!(wall["limited_by"], "strength", "{wall}");
    let limit = number(&wall["limit_level_m"]);
    let (_, at) = document(&["assess", &tank.path(), "--level", &format!("{limit} m")]);
    let stress = number(&part(&at, "end wall, lower")["loads"]["stress_pa"]);
    assert!((stress / 140e6 - 1.0).abs() < 1e-5, "{stress}");
    let bound = number(&wall["limit_level_bound_m"]);
    assert!(bound < limit, "{bound} {limit}");

    let thickness = number(&wall["thickness_for_state_m"]);
    assert!(thickness < 0.009);
    let thinner = tall.replace("\"9 mm\"", &format!("\"{} mm\"", thickness * 1e3));
    let tank = TankText::example("plate_box", |_| thinner.clone());
    let file = tank::parse("t.toml", thinner.as_bytes()).unwrap();
    let request = Request::new(&file, Overrides { level_m: Some(3.3), ..Overrides::default() });
    let found = assess(&file, &request.unwrap()).unwrap().document;
    let wall = found.parts.iter().find(|part| part.name == "end wall, lower").unwrap();
    let utilisation = wall.judgement.utilisation.unwrap_or(f32::NAN);
    assert!((utilisation - 1.0).abs() < 1e-5, "{utilisation} {}", tank.path());
}

/// At every level the device says at least what the true moments say, and no more than it states.
#[test]
fn the_device_errs_to_the_safe_side_by_what_it_states() {
    // Thick enough that no deflection ends the theory before the strength.
    let text = include_str!("../../configs/plate_box.toml")
        .replace("\"8 mm\"", "\"12 mm\"")
        .replace("\"10 mm\"", "\"20 mm\"");
    let file = tank::parse(TANK, text.as_bytes()).unwrap();
    let (mut compared, mut closely) = (0, 0);
    for level in 1..=22 {
        let level_m = 0.1 * f64::from(level);
        let overrides = Overrides { level_m: Some(level_m), ..Overrides::default() };
        let found = assess(&file, &Request::new(&file, overrides).unwrap()).unwrap();
        #[expect(clippy::cast_possible_truncation, reason = "a level for the core")]
        let states = found.desk.as_seen(Lane([level_m as f32]));
        let plan = found.desk.plan();
        for (row, part) in found.document.parts.iter().zip(&plan.parts) {
            let device = evaluate(plan, part, &states);
            let pairs = [
                (row.judgement.utilisation, device.utilisation),
                (row.judgement.utilisation_bound, device.utilisation_bound),
            ];
            let excess = row.plates[0].device_excess.unwrap_or(0.0);
            let half_m = 0.5 * f64::from(part.bottom_m + part.top_m);
            for (desk, device) in pairs {
                let (Some(desk), device) = (desk.map(f64::from), f64::from(device.lane(0))) else {
                    continue;
                };
                compared += 1;
                assert!(
                    desk <= device * 1.000_001 + 1e-9,
                    "{} at {level_m}: {desk} {device}",
                    row.name
                );
                if level_m >= half_m {
                    closely += 1;
                    let most = desk * (1.0 + excess) * 1.000_2;
                    assert!(device <= most, "{} at {level_m}: {desk} {device}", row.name);
                }
            }
        }
    }
    assert!(compared > 200 && closely > 120, "{compared} {closely}");
}

/// What judges a plate is said wherever it is shown; the example needs no reason for its margin.
#[test]
fn what_judges_a_plate_is_named() {
    let seal_to = std::env::temp_dir().join(format!("plates-{}.strake", std::process::id()));
    let path = seal_to.display().to_string();
    for args in [
        &["assess", TANK][..],
        &["seal", TANK, "-o", &path, "--force"],
        &["rerate", TANK, "--density", "1100 kg/m3"],
    ] {
        let ran = run(args);
        assert_eq!(ran.status, 0, "{}", ran.stderr);
        let text = ran.stdout.split_whitespace().collect::<Vec<_>>().join(" ");
        assert!(text.contains("the plate outward by its true moments at"), "{text}");
        assert!(text.contains("governing points, at most"), "{text}");
        assert!(text.contains("the level plate outward by its even pressure"), "{text}");
        assert!(text.contains("neighbouring walls"), "{text}");
    }
    std::fs::remove_file(seal_to).unwrap();
}

/// With liquid on the other side the substitute stands, and its reason.
#[test]
fn the_substitute_says_why() {
    let tank = TankText::example("plate_box", |text| {
        let outside = "[[outside]]\nhighest = \"0.5 m\"\nlowest = \"0 m\"\n\
                       density = \"1000 kg/m3\"\nparts = [\"side wall\"]\n";
        text.clone() + outside
    });
    let ran = run(&["assess", &tank.path()]);
    let text = ran.stdout.split_whitespace().collect::<Vec<_>>().join(" ");
    let said = "side wall: the device judges the plate outward by the pressure at its lowest edge \
                taken as even (conservative substitute: liquid may stand against its other side)";
    assert!(text.contains(said), "{text}");
}

/// The limit of the plates in rerate is that of their moments: within what the tables exceed.
#[test]
fn rerate_judges_plates_by_their_moments() {
    let tank = TankText::example("plate_box", |text| {
        let text = text.replace("\"2.4 m\" }     #", "\"6 m\" }     #");
        text.replace("\"2.2 m\"", "\"5.5 m\"").replace("\"8 mm\"", "\"9 mm\"")
    });
    let (_, sheet) = document(&["assess", &tank.path(), "--level", "1 m"]);
    let (_, rerated) = document(&["rerate", &tank.path(), "--density", "1020 kg/m3"]);
    let name = "end wall, lower";
    let desk = number(&part(&sheet, name)["limit_level_m"]);
    let side = &part(&rerated, name)["new"];
    assert_eq!(
        (&side["limited_by"], &side["by"][0]["load"]),
        (&"strength".into(), &"bending".into())
    );
    let device = number(&side["limit_level_m"]);
    println!("{name}: {desk:.3} m by all points, {device:.3} m by the tables");
    assert!(device <= desk && device > 0.99 * desk, "{name}: {desk} {device}");
}

/// A plate against suction: the moment of the empty tank is that of even suction, turned inward,
/// and the device says no less; filled over its top the pressure presses outward again.
#[test]
fn a_plate_against_suction_is_judged_by_its_own_capacity() {
    let tank = TankText::example("plate_box", |text| {
        let inward = "capacity_inward = [ { plate = { thickness = \"8 mm\", allowable_stress = \
                      \"100 MPa\", edges = \"clamped\" }, material = \"steel\", basis = \
                      \"drawing\" } ]\n\n[[panel]]\nname     = \"side wall\"";
        text.replacen("\n[[panel]]\nname     = \"side wall\"", inward, 1)
            .replace(
                "vented = true",
                "lowest = \"-3 kPa\"\npressure = \"0 kPa\"\nhighest = \"1 kPa\"",
            )
            .replace(
                "response_time ",
                "inward = { utilisation = 0.9, deadband = 0.02, on_delay = \
                      \"5 s\", off_delay = \"60 s\" }\nresponse_time ",
            )
    });
    let at = |level: &str| {
        let (_, found) = document(&["assess", &tank.path(), "--level", level]);
        part(&found, "end wall, lower").clone()
    };
    let empty = at("0 m");
    let sheet =
        Sheet { width: 1.0, length: 1.2, poisson: 0.3, held: [Held::Clamped; 3], mesh: (20, 48) };
    let bent = sheet.bent(|_| 3e3, &[]);
    let nodes = (0..=48).flat_map(|j| (0..=20).map(move |i| (i, j)));
    let due = nodes.map(|(i, j)| bent.moments(i, j).principal()).fold(0.0, f64::max);
    let stress = number(&empty["loads_inward_bound"]["stress_pa"]);
    assert!((-stress * 0.008 * 0.008 / 6.0 / due - 1.0).abs() < 1e-2, "{stress} {due}");
    let utilisation = number(&empty["utilisation_inward"]);
    assert!((utilisation + stress / 100e6).abs() < 1e-6, "{utilisation} {stress}");
    let inward = empty["plates"].as_array().unwrap().iter().find(|one| one["side"] == "inward");
    let suction = number(&inward.unwrap()["device_pressure_pa"]);
    let device = 3e3 / suction;
    assert!(device >= utilisation && device < 1.3 * utilisation, "{device} {utilisation}");
    let full = number(&at("2.2 m")["utilisation_inward"]);
    // What is left is what the liquid turns inward between the edges and the middle.
    assert!(full < 0.5 * utilisation, "{full} {utilisation}");
}
