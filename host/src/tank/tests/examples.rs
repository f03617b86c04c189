//! The example files say what they are meant to say.

use super::{configs, tank_files};
use crate::tank::{
    BasisKind, Capacity, FirstBolt, Gas, Gravity, Hatch, Opens, Part, Secured, Sensing, Shape,
    Signal, TankFile, Thermal, Vessel, normal_gravity_m_s2, parse_in,
};

fn example(name: &str) -> TankFile {
    let (_, bytes) = tank_files(&configs()).into_iter().find(|(stem, _)| stem == name).unwrap();
    parse_in(&configs(), name, &bytes).unwrap_or_else(|findings| panic!("{findings}"))
}

fn near(value: f64, expected: f64) -> bool {
    (value - expected).abs() <= 1e-9 * expected.abs().max(1.0)
}

#[test]
fn every_example_can_be_sealed() {
    for (name, bytes) in tank_files(&configs()) {
        let file =
            parse_in(&configs(), &name, &bytes).unwrap_or_else(|findings| panic!("{findings}"));
        let missing = file.findings(file.missing_for_seal());
        assert!(missing.list().is_empty(), "{missing}");
        assert!(file.uncovered_shell().is_empty(), "{name}");
    }
}

/// Level at which a course reaches its hoop tension, by hand: T = p D / 2 at the design point.
fn limit_m(file: &TankFile, density: f64) -> f64 {
    let Vessel::Cylinder { diameter_m, .. } = file.vessel else { panic!("no cylinder") };
    let limits = file.parts.iter().filter_map(|part| match part {
        Part::Course(course) => {
            let tension = course.capacity[0].capacity.value.hoop_tension_n_m().unwrap();
            let head = 2.0 * tension / diameter_m.value / (density * file.gravity.m_s2());
            Some(course.design_height_m() + head)
        }
        _ => None,
    });
    limits.fold(f64::INFINITY, f64::min)
}

#[test]
fn brine_day_tank_tells_its_story() {
    let file = example("brine_day_tank");
    // S E (t - CA) = 137e6 x 0.85 x 3.6e-3 = 419 220 N/m; x 2 / 8 m = 104 805 Pa;
    // / (1280 x 9.80665) + 0.3 = 8.6493 m, and with 1000 kg/m3 10.9871 m.
    assert!((limit_m(&file, 1280.0) - 8.6493).abs() < 1e-4);
    assert!((limit_m(&file, 1000.0) - 10.9871).abs() < 1e-4);
    let names: Vec<&str> = file.parts.iter().map(Part::name).collect();
    let expected = ["course 1", "course 2", "course 3", "course 4", "ground hatch", "roof hatch"];
    assert_eq!(names, expected);
    assert_eq!(file.gas, Gas::Vented);
    assert!(!file.is_provisional());
    assert!(near(file.fill.highest_rise_m_s.unwrap().value, 0.2e-3));
    let level = file.level.unwrap();
    let Sensing::Head { at_m, .. } = level.sensing else { panic!("no head sensor") };
    assert!(near(at_m.value, 0.15));
    let Signal::CurrentLoop { at_4_ma, at_20_ma } = level.signal.unwrap().value else {
        panic!("no current loop")
    };
    assert!(near(at_4_ma, 0.0) && near(at_20_ma, 150e3));
    let power = file.power.unwrap();
    assert!(near(power.cell.capacity_c.value, 19.0 * 3600.0));
    assert_eq!(file.device_id.unwrap().value, "pump house 7");
}

#[test]
fn a_hatch_is_loaded_inside_its_gasket() {
    let file = example("brine_day_tank");
    let Some(Part::Hatch(hatch)) = file.part("ground hatch") else { panic!("no hatch") };
    assert_eq!(hatch.opening.shape, Shape::Circle { diameter_m: 0.61 });
    assert_eq!(hatch.sealed.shape, Shape::Circle { diameter_m: 0.66 });
    assert!(near(hatch.opening.heights.bottom_m, 0.545));
    assert!(near(hatch.sealed.heights.bottom_m, 0.52));
    assert!(near(hatch.sealed.heights.top_m, 1.18));
    assert_eq!(hatch.opens.value, Opens::Outward);
    let bolts = |hatch: &Hatch| match hatch.secured.as_ref().map(|one| &one.value) {
        Some(Secured::Bolts(bolts)) => (bolts.count, bolts.first),
        other => panic!("{other:?}"),
    };
    assert_eq!(bolts(hatch), (28, FirstBolt::Lowest));
    let Some(Part::Hatch(roof)) = file.part("roof hatch") else { panic!("no hatch") };
    assert!(roof.sealed.is_level());
    assert!(near(roof.sealed.heights.bottom_m, 9.6) && near(roof.sealed.heights.top_m, 9.6));
    assert_eq!(bolts(roof).1, FirstBolt::Astride);
    assert!(matches!(&roof.capacity[1].capacity.value, Capacity::None { .. }));
}

#[test]
fn wine_drum_lies_and_has_volumes() {
    let file = example("wine_drum");
    let Vessel::Lying { diameter_m, length_m } = file.vessel else { panic!("no drum") };
    assert!(near(diameter_m.value, 2.4) && near(length_m.value, 6.0));
    // Half full is half of it; the inflow of 20 m3/h from 1.5 to 2.2 m takes 24.65 min.
    let [half, low, high] = [1.2, 1.5, 2.2].map(|level_m| file.volume_m3(level_m).unwrap());
    assert!(near(half, std::f64::consts::PI * 1.44 * 3.0));
    assert!(((high - low) / 20.0 * 60.0 - 24.65).abs() < 5e-3);
    assert!(near(file.inflow_window_s().unwrap(), 60.0));
}

#[test]
fn rinse_basin_has_layers_slopes_and_an_assumption() {
    let file = example("rinse_basin");
    assert!(file.is_provisional());
    assert!(near(file.vessel.area_m2().unwrap(), 18.0));
    assert!(near(file.liquid.density_kg_m3.value, 1010.0));
    assert_eq!(file.below[0].liquid.name.value, "settled sludge");
    assert_eq!(file.below[0].liquid.thermal.value, Thermal::None);
    assert!(file.outside[0].touches("end wall") && !file.outside[0].touches("apron"));
    assert!(file.outside[0].lowest_m.is_none());
    let Some(Part::Panel(apron)) = file.part("apron") else { panic!("no apron") };
    // 0.8 m at 60 degrees rise 0.8 x sqrt(3)/2 = 0.692820 m.
    assert!((apron.plane.heights.top_m - 0.692_820).abs() < 1e-6);
    assert!((apron.plane.heights.centre_m - 0.346_410).abs() < 1e-6);
    assert_eq!(apron.capacity[0].basis.as_ref().unwrap().value.kind, BasisKind::Assumed);
    let Some(Part::Panel(wall)) = file.part("long wall") else { panic!("no wall") };
    let Capacity::DesignedFor { remaining, .. } = &wall.capacity[0].capacity.value else {
        panic!("no design state")
    };
    assert!(near(remaining.unwrap().value, 0.97));
    assert_eq!(wall.capacity_inward.len(), 1);
    let drain = file.part("drain cover").unwrap();
    assert!(near(drain.heights().top_m, 0.0));
}

#[test]
fn laboratory_tank_reads_its_density_table() {
    let file = example("laboratory_tank");
    assert!(near(file.liquid.density_at(20.0), 998.2));
    assert!(near(file.liquid.density_at(27.5), 996.3));
    let (low, high) = file.liquid.band_kg_m3();
    assert!(near(low, 995.6 * 0.999) && near(high, 999.1 * 1.001));
    assert!(matches!(file.gravity, Gravity::Computed { .. }));
    assert!(near(file.alarm.unwrap().alarm.utilisation.value, 0.90));
}

#[test]
fn gravity_is_that_of_the_reference_ellipsoid() {
    // Moritz, Geodetic Reference System 1980: equator, 45 degrees, pole.
    assert!((normal_gravity_m_s2(0.0, 0.0) - 9.780_326_771_5).abs() < 1e-9);
    assert!((normal_gravity_m_s2(45.0, 0.0) - 9.806_199_203).abs() < 1e-8);
    assert!((normal_gravity_m_s2(-90.0, 0.0) - 9.832_186_368_5).abs() < 1e-8);
    assert!((normal_gravity_m_s2(45.0, 1000.0) - (9.806_199_203 - 0.003_086)).abs() < 1e-8);
}
