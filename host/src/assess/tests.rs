//! Numbers worked out by hand, g = 9.80665 m/s² unless said.

use super::{Document, Overrides, PartRow, Request, assess};
use crate::tank::{self, TankFile};

const BRINE: &str = include_str!("../../../configs/brine_day_tank.toml");
const G: f64 = 9.806_65;

fn parse(text: &str) -> TankFile {
    tank::parse("tank.toml", text.as_bytes())
        .unwrap_or_else(|findings| panic!("{findings}\n{text}"))
}

fn at(file: &TankFile, overrides: Overrides) -> Document {
    let request = Request::new(file, overrides).unwrap();
    assess(file, &request).unwrap_or_else(|findings| panic!("{findings}")).document
}

fn level(level_m: f64) -> Overrides {
    Overrides { level_m: Some(level_m), ..Overrides::default() }
}

#[track_caller]
fn near(a: impl Into<f64>, b: f64, tolerance: f64) {
    let a = a.into();
    assert!((a - b).abs() <= tolerance, "{a} is not {b} within {tolerance}");
}

fn limit(row: &PartRow) -> f64 {
    f64::from(row.judgement.limits.as_ref().unwrap().limit_level_m.unwrap())
}

fn limited_by(row: &PartRow) -> &'static str {
    row.judgement.limits.as_ref().unwrap().limited_by
}

/// A tank with one sharp liquid and nothing uncertain.
fn tank_of(shape: &str, density: &str, gas: &str, parts: &str) -> TankFile {
    parse(&format!(
        "[tank]\nname = \"t\"\n{shape}\n[liquid]\nname = \"liquid\"\ndensity = \"{density}\"\n\
         temperature = \"20 degC\"\nrange = [\"19 degC\", \"20 degC\"]\nexpansion = \"none\"\n\
         uncertainty = \"0 %\"\n[gas]\n{gas}\n{parts}\n"
    ))
}

const VENTED: &str = "vented = true";

fn panel(name: &str, width: &str, length: &str, bottom: &str, capacity: &str) -> String {
    format!(
        "[[panel]]\nname = \"{name}\"\nshape = {{ rectangle = {{ width = \"{width}\", length = \
         \"{length}\" }} }}\nbottom = \"{bottom}\"\nslope = \"90 deg\"\ncapacity = [ {capacity} ]\n"
    )
}

fn designed(level: &str, density: &str, gas: &str) -> String {
    format!(
        "{{ designed_for = {{ level = \"{level}\", density = \"{density}\", gas = \"{gas}\" }}, \
         remaining = 1, basis = \"drawing\" }}"
    )
}

fn course(name: &str, bottom: &str, thickness: &str, more: &str) -> String {
    format!(
        "[[course]]\nname = \"{name}\"\nbottom = \"{bottom}\"\nheight = \"2.4 m\"\n{more}\ncapacity \
         = [ {{ plate = {{ thickness = \"{thickness}\", corrosion_allowance = \"0 mm\", \
         allowable_stress = \"136 MPa\", joint_efficiency = 1 }}, basis = \"drawing\" }} ]\n"
    )
}

#[test]
fn the_brine_day_tank_tells_its_story() {
    let file = parse(BRINE);
    let document = at(&file, Overrides::default());
    assert!((document.state.level_m - 9.3).abs() < 1e-12);
    assert_eq!(document.governing.as_deref(), Some("course 1"));
    // S E (t - CA) = 137e6 x 0.85 x 3.6e-3 = 419 220 N/m, at p = 104 805 Pa.
    let course = &document.parts[0];
    near(course.capacity[0].value, 419_220.0, 0.1);
    near(course.loads.hoop_tension_n_m.unwrap(), 1280.0 * G * 9.0 * 4.0, 1.0);
    near(limit(course), 0.3 + 104_805.0 / (1280.0 * G), 2e-6 * 9.0);
    assert_eq!(limited_by(course), "strength");
    near(
        course.judgement.thickness_for_state_m.unwrap(),
        1280.0 * G * 36.0 / 116.45e6 + 1e-3,
        1e-9,
    );
    // Head sensor at 0.15 m: the bound at 0.3 m is P + 200 Pa less the lightest liquid between.
    let light = 1280.0 / 1.006 * 0.995;
    let bound = 1280.0 * G * 9.15 + 200.0 - light * G * 0.15;
    near(course.loads_outward_bound.pressure_pa, bound, 0.3);
    let at_share =
        |share: f64| 0.15 + (share * 104_805.0 - 200.0 + light * G * 0.15) / (1280.0 * G);
    near(document.warn_level_m.unwrap(), at_share(0.85), 3e-5);
    near(document.warn_level_m.unwrap(), 7.38, 0.005);
    near(document.alarm_level_m.unwrap(), at_share(0.95), 3e-5);
    near(document.alarm_level_m.unwrap(), 8.21, 0.005);
    // Water: the tank is sound to its overflow; the plates alone give 10.987 m.
    let water = Overrides { density_kg_m3: Some(1000.0), ..Overrides::default() };
    let document = at(&file, water);
    let limits = document.parts[0].judgement.limits.as_ref().unwrap();
    assert_eq!((limits.limited_by, limits.limit_level_m), ("overflow", Some(9.3)));
    near(limits.capacity_alone_m.unwrap(), 0.3 + 104_805.0 / (1000.0 * G), 5e-5);
    assert_eq!(document.governing.as_deref(), Some("course 1"));
    // By its product's name: rinse water.
    let rinse = Overrides { product: Some("rinse water".to_owned()), ..Overrides::default() };
    assert!((at(&file, rinse).state.density_kg_m3 - 998.0).abs() < 1e-12);
}

#[test]
fn a_wall_designed_for_water_holds_less_of_a_heavier_liquid() {
    // Water to 6 m, now 1320 kg/m3: by the pressure at the base 6/1.32 m; the same wall by its
    // total force 6/sqrt(1.32) m, at which the base is 14.9 % over.
    let force = format!("{{ force = \"{} N\", basis = \"drawing\" }}", 1000.0 * G * 18.0);
    let parts = panel("pressure", "1 m", "6 m", "0 m", &designed("6 m", "1000 kg/m3", "0 Pa"))
        + &panel("force", "1 m", "6 m", "0 m", &force);
    let shape = "box = { length = \"4 m\", width = \"4 m\", height = \"6 m\" }";
    let file = tank_of(shape, "1320 kg/m3", VENTED, &parts);
    let document = at(&file, level(5.222_329_678_670_935));
    near(limit(&document.parts[0]), 6.0 / 1.32, 5e-6);
    assert_eq!(limited_by(&document.parts[0]), "design_state");
    near(limit(&document.parts[1]), 5.222_33, 1e-5);
    assert_eq!(document.governing.as_deref(), Some("pressure"));
    near(document.parts[0].judgement.utilisation.unwrap(), 1.148_913, 1e-5);
    near(document.parts[1].judgement.utilisation.unwrap(), 1.0, 1e-6);
    // With the liquid of its design the wall is good to the very top.
    let file = tank_of(shape, "1000 kg/m3", VENTED, &parts);
    let document = at(&file, level(6.0));
    near(limit(&document.parts[0]), 6.0, 0.0);
}

#[test]
fn the_middle_course_governs_or_the_shell_top_does() {
    let shell = |diameter: &str, middle: &str, more: &str| {
        let parts = course("low", "0 m", "8 mm", more)
            + &course("middle", "2.4 m", middle, more)
            + &course("high", "4.8 m", "5 mm", more);
        let shape = format!("cylinder = {{ diameter = \"{diameter}\", height = \"7.2 m\" }}");
        at(&tank_of(&shape, "1320 kg/m3", VENTED, &parts), level(7.2))
    };
    let of = |thickness_m: f64, half_m: f64| 136e6 * thickness_m / half_m / (1320.0 * G);
    let document = shell("20 m", "4 mm", "");
    near(limit(&document.parts[1]), 2.4 + of(4e-3, 10.0), 1e-5);
    near(limit(&document.parts[1]), 6.602, 5e-4);
    assert_eq!(document.governing.as_deref(), Some("middle"));
    let document = shell("20 m", "4 mm", "design_point = \"0.3 m\"\nrule = \"API 653 4.3.3.1\"");
    near(limit(&document.parts[1]), 6.902, 5e-4);
    // D = 12 m: all three outlast the shell.
    let document = shell("12 m", "4.2 mm", "");
    for (row, alone) in document.parts.iter().zip([14.01, 9.75, 13.56]) {
        let limits = row.judgement.limits.as_ref().unwrap();
        assert_eq!((limits.limited_by, limits.limit_level_m), ("shell_top", Some(7.2)));
        near(limits.capacity_alone_m.unwrap(), alone, 0.01);
    }
    assert_eq!(document.governing.as_deref(), Some("middle"));
}

#[test]
fn a_course_under_two_liquids_and_gas() {
    // Own case 10: D = 14 m, course from 2.2 m, 820 to 8.0 m over 1010 to 3.1 m, gas 1.2 kPa.
    let with = |point: &str| {
        let gas = "lowest = \"1.2 kPa\"\npressure = \"1.2 kPa\"\nhighest = \"1.2 kPa\"";
        let parts = format!(
            "[[course]]\nname = \"c\"\nbottom = \"2.2 m\"\nheight = \"2.0 m\"\n{point}\ncapacity = [ \
             {{ plate = {{ thickness = \"7.2 mm\", corrosion_allowance = \"1.0 mm\", \
             allowable_stress = \"150 MPa\", joint_efficiency = 0.85 }}, basis = \"drawing\" }} ]\n\
             [[liquid.below]]\nsurface = \"3.1 m\"\nsurface_uncertainty = \"0 m\"\nname = \"brine\"\n\
             density = \"1010 kg/m3\"\ntemperature = \"20 degC\"\nrange = [\"19 degC\", \"20 degC\"]\n\
             expansion = \"none\"\nuncertainty = \"0 %\"\n"
        );
        let shape = "cylinder = { diameter = \"14 m\", height = \"20 m\" }";
        at(&tank_of(shape, "820 kg/m3", gas, &parts), level(8.0))
    };
    let document = with("design_point = \"0.3 m\"\nrule = \"API 653 4.3.3.1\"");
    let row = &document.parts[0];
    near(row.loads.hoop_tension_n_m.unwrap(), 325_821.647, 6.5);
    near(row.judgement.utilisation.unwrap(), 0.412_171_597, 8.2e-6);
    near(limit(row), 16.255_053_1, 3.3e-4);
    near(row.judgement.thickness_for_state_m.unwrap(), 3.555_463_9e-3, 7.1e-8);
    near(with("").parts[0].loads.hoop_tension_n_m.unwrap(), 346_621.552, 6.9);
}

#[test]
fn more_gas_than_designed_for_moves_the_governing_place_upwards() {
    // Designed for 900 kg/m3 to 7.5 m under 1 kPa; now 1180 kg/m3 under 3 kPa. The base governs:
    // (900 g 7.5 + 1000 - 3000) / (1180 g).
    let state = designed("7.5 m", "900 kg/m3", "1 kPa");
    let gas = "lowest = \"3 kPa\"\npressure = \"3 kPa\"\nhighest = \"3 kPa\"";
    let shape = "box = { length = \"4 m\", width = \"4 m\", height = \"8 m\" }";
    let low = tank_of(shape, "1180 kg/m3", gas, &panel("w", "1 m", "6 m", "0 m", &state));
    let document = at(&low, level(6.348));
    near(limit(&document.parts[0]), (900.0 * G * 7.5 - 2000.0) / (1180.0 * G), 1e-5);
    near(limit(&document.parts[0]), 5.548, 5e-4);
    near(document.parts[0].judgement.utilisation.unwrap(), 1.138, 5e-4);
    // Up to 7.5 m the wall's top was designed for the 1 kPa alone: no level is admissible.
    let tall = tank_of(shape, "1180 kg/m3", gas, &panel("w", "1 m", "7.5 m", "0 m", &state));
    let document = at(&tall, level(1.0));
    let limits = document.parts[0].judgement.limits.as_ref().unwrap();
    assert_eq!((limits.limited_by, limits.limit_level_m), ("gas", None));
    assert!(limits.limit_intervals_m.is_empty());
}

#[test]
fn what_has_no_capacity_is_named() {
    let file = parse(BRINE);
    let document = at(&file, level(5.0));
    let roof = &document.not_judged[0];
    assert_eq!(
        (roof.name.as_str(), roof.why.as_str()),
        ("roof hatch", "outward: cover plate rated by others")
    );
    let none = panel("w", "1 m", "2 m", "0 m", "{ none = \"loads only\" }");
    let shape = "box = { length = \"4 m\", width = \"4 m\", height = \"3 m\" }";
    let document = at(&tank_of(shape, "1000 kg/m3", VENTED, &none), level(2.0));
    assert!(document.parts[0].judgement.limits.is_none());
    assert_eq!(document.governing, None);
    assert_eq!(document.not_judged.len(), 1);
    assert!(document.cautions.iter().any(|caution| caution == "no part is judged outward"));
    // A shell without courses is bare.
    let hatch = "[[hatch]]\nname = \"h\"\nshape = { circle = { diameter = \"0.5 m\" } }\nsealed_to = \
                 { circle = { diameter = \"0.5 m\" } }\ncentre = \"1 m\"\nslope = \"90 deg\"\nopens = \
                 \"outward\"\nsecured = { bolts = 12, bolt_circle_diameter = \"0.6 m\" }\ncapacity = [ { \
                 bolt = \"9 kN\", basis = \"drawing\" } ]\n";
    let shape = "cylinder = { diameter = \"3 m\", height = \"4 m\" }";
    let document = at(&tank_of(shape, "1000 kg/m3", VENTED, hatch), level(2.0));
    let whys: Vec<&str> = document.not_judged.iter().map(|one| one.why.as_str()).collect();
    assert_eq!(whys, ["outward: the cover plate, no capacity is stated", "no course covers it"]);
    assert_eq!(document.not_judged[1].name, "shell 0.000 m to 4.000 m");
}

#[test]
fn without_a_level_the_overflow_then_the_shell_top() {
    let force = "{ force = \"60 kN\", basis = \"drawing\" }";
    let wall = panel("w", "1 m", "2 m", "0 m", force);
    let shape = "box = { length = \"4 m\", width = \"4 m\", height = \"3 m\" }";
    let plain = tank_of(shape, "1000 kg/m3", VENTED, &wall);
    let document = at(&plain, Overrides::default());
    assert!((document.state.level_m - 3.0).abs() < 1e-12);
    assert!(document.cautions[0].starts_with("no level stated: taken at the shell top, 3.000 m"));
    let with = wall.clone() + "[fill]\noverflow = \"2.5 m\"\n";
    let document = at(&tank_of(shape, "1000 kg/m3", VENTED, &with), Overrides::default());
    assert!((document.state.level_m - 2.5).abs() < 1e-12);
    assert!(document.cautions[0].starts_with("no level stated: taken at the overflow, 2.500 m"));
    // Loose parts have neither.
    let loose = tank_of("", "1000 kg/m3", VENTED, &wall);
    assert!(Request::new(&loose, Overrides::default()).is_err());
    near(limit(&at(&loose, level(1.0)).parts[0]), 1.0 + 60_000.0 / (2.0 * 1000.0 * G), 1e-5);
}

#[test]
fn the_gas_bounds_are_its_settings() {
    let gas = "lowest = \"-0.6 kPa\"\npressure = \"0.3 kPa\"\nhighest = \"2.0 kPa\"";
    let roof = "[[hatch]]\nname = \"roof\"\nshape = { circle = { diameter = \"0.6 m\" } }\nsealed_to = \
                { circle = { diameter = \"0.6 m\" } }\ncentre = \"3 m\"\nslope = \"180 deg\"\nopens = \
                \"outward\"\ncapacity = [ { force = \"1 kN\", basis = \"drawing\" } ]\n";
    let shape = "cylinder = { diameter = \"3 m\", height = \"3 m\" }";
    let document = at(&tank_of(shape, "1010 kg/m3", gas, roof), level(1.0));
    let area = std::f64::consts::PI * 0.09;
    let row = &document.parts[0];
    near(row.loads.force_n.unwrap(), 300.0 * area, 1e-3);
    near(row.loads_outward_bound.force_n.unwrap(), 2000.0 * area, 1e-3);
    near(row.loads_inward_bound.force_n.unwrap(), -600.0 * area, 1e-3);
    let inward = "inward: the load may turn inward and no inward capacity is stated";
    assert!(document.not_judged.iter().any(|one| one.name == "roof" && one.why == inward));
    assert_eq!(row.judgement.utilisation_inward, None);
}

#[test]
fn vacuum_on_a_half_wet_hatch() {
    // 0.6 x 0.6 m from 0.3 m, level 0.6 m, water, 1.5 kPa vacuum: -275.2 N, the liquid alone
    // +264.8 N; about the bottom edge -135.5 N m; the centre of pressure lies at 0.792 m.
    let gas = "lowest = \"-1.5 kPa\"\npressure = \"-1.5 kPa\"\nhighest = \"-1.5 kPa\"";
    let force = "{ force = \"9 kN\", basis = \"drawing\" }";
    let shape = "box = { length = \"4 m\", width = \"4 m\", height = \"3 m\" }";
    let file = tank_of(shape, "1000 kg/m3", gas, &panel("w", "0.6 m", "0.6 m", "0.3 m", force));
    let document = at(&file, level(0.6));
    let loads = &document.parts[0].loads;
    let liquid = 1000.0 * G * 0.6 * 0.045;
    near(loads.force_n.unwrap(), liquid - 540.0, 0.01);
    near(loads.force_n.unwrap(), -275.2, 0.05);
    near(f64::from(loads.moment_centroid_n_m.unwrap()) - 275.2 * 0.3, -135.5, 0.06);
    near(loads.centre.unwrap().centre_of_pressure_m.unwrap(), 0.792_42, 1e-4);
    near(loads.centre.unwrap().centre_of_pressure_slope_m.unwrap(), 0.6 - 0.792_42, 1e-4);
    // 735.5 Pa of vacuum: the force is gone, a couple of -52.96 N m is left, no centre exists.
    let gas = gas.replace("-1.5 kPa", "-735.49875 Pa");
    let file = tank_of(shape, "1000 kg/m3", &gas, &panel("w", "0.6 m", "0.6 m", "0.3 m", force));
    let document = at(&file, level(0.6));
    let loads = &document.parts[0].loads;
    near(loads.force_n.unwrap(), 0.0, 0.01);
    near(loads.moment_centroid_n_m.unwrap(), -52.96, 0.01);
    assert_eq!(loads.centre.unwrap().centre_of_pressure_m, None);
}

#[test]
fn the_moment_bounds_take_each_half_at_its_worst() {
    // Wall 1 x 2 m, covered; level known to 0.1 m, density to 10 %. Below the centroid pressure
    // turns the wall one way, above it the other: b l2/8 p at the halves' centres, and b l3/12 p'.
    let force = "{ force = \"90 kN\", basis = \"drawing\" }";
    let sensor = "[level]\nsensor = \"innage\"\nat = \"0 m\"\nuncertainty = \"0.1 m\"\n";
    let shape = "box = { length = \"4 m\", width = \"4 m\", height = \"5 m\" }";
    let parts = panel("w", "1 m", "2 m", "0 m", force) + sensor;
    let mut file = tank_of(shape, "1000 kg/m3", VENTED, &parts);
    file.liquid.uncertainty.value = 0.1;
    let row = &at(&file, level(3.0)).parts[0];
    // Moment of the half from s0 to s1 under p = w (h - 1 - s): w [(h - 1) s2/2 - s3/3].
    let half = |weight: f64, level_m: f64, s0: f64, s1: f64| {
        let at = |s: f64| weight * ((level_m - 1.0) * s * s / 2.0 - s * s * s / 3.0);
        at(s1) - at(s0)
    };
    let (heavy, light) = (1100.0 * G, 900.0 * G);
    let most = half(light, 2.9, -1.0, 0.0) + half(heavy, 3.1, 0.0, 1.0);
    let least = half(heavy, 3.1, -1.0, 0.0) + half(light, 2.9, 0.0, 1.0);
    near(row.loads.moment_centroid_n_m.unwrap(), -1000.0 * G * 8.0 / 12.0, 0.02);
    near(row.loads_outward_bound.moment_centroid_n_m.unwrap(), most, 0.05);
    near(row.loads_inward_bound.moment_centroid_n_m.unwrap(), least, 0.05);
}

#[test]
fn a_drain_in_a_flooded_pit_needs_a_least_level() {
    // 1 m of water outside, 5 kPa inward: 1000 g h >= 1000 g - 5000.
    let drain = "[[hatch]]\nname = \"drain\"\nshape = { circle = { diameter = \"0.3 m\" } }\nsealed_to \
                 = { circle = { diameter = \"0.3 m\" } }\ncentre = \"0 m\"\nslope = \"0 deg\"\nopens = \
                 \"inward\"\ncapacity = [ { pressure = \"20 kPa\", basis = \"drawing\" } ]\n\
                 capacity_inward = [ { pressure = \"5 kPa\", basis = \"drawing\" } ]\n\
                 [[outside]]\nhighest = \"1 m\"\ndensity = \"1000 kg/m3\"\n";
    let shape = "box = { length = \"4 m\", width = \"4 m\", height = \"3 m\" }";
    let document = at(&tank_of(shape, "1000 kg/m3", VENTED, drain), level(0.4));
    let row = &document.parts[0];
    let lowest = row.judgement.lowest.unwrap().lowest_level_m.unwrap();
    near(lowest, 1.0 - 5000.0 / (1000.0 * G), 2e-6);
    near(limit(row), 20_000.0 / (1000.0 * G), 5e-6);
    near(row.judgement.utilisation_inward.unwrap(), 1000.0 * G * 0.6 / 5000.0, 1e-5);
    let intervals = &row.judgement.limits.as_ref().unwrap().limit_intervals_m;
    assert_eq!(intervals.len(), 1);
    near(intervals[0][0], f64::from(lowest), 0.0);
    // What relieves outwards is never the outside liquid, unless a lowest level is proven.
    near(row.loads_outward_bound.pressure_pa, 1000.0 * G * 0.4, 1e-2);
    near(row.loads_inward_bound.pressure_pa, -1000.0 * G * 0.6, 1e-2);
    // With 1 kPa outwards the two ask for more and for less: no level is left.
    let weak = drain.replace("20 kPa", "1 kPa");
    let document = at(&tank_of(shape, "1000 kg/m3", VENTED, &weak), level(0.4));
    assert_eq!(limited_by(&document.parts[0]), "inward");
    assert_eq!(document.parts[0].judgement.limits.as_ref().unwrap().limit_level_m, None);
}

#[test]
fn states_that_cannot_be() {
    let file = parse(BRINE);
    let refused = |overrides: Overrides| Request::new(&file, overrides).unwrap_err().message;
    assert!(refused(level(9.7)).contains("above the shell top at 9.600 m"));
    assert!(refused(level(-0.1)).contains("below the floor"));
    let density = Overrides { density_kg_m3: Some(0.0), ..Overrides::default() };
    assert!(refused(density).contains("--density"));
    let cold = Overrides { temperature_c: Some(-273.0), ..Overrides::default() };
    assert!(refused(cold).contains("--temperature"));
    let product = Overrides { product: Some("rinse watr".to_owned()), ..Overrides::default() };
    let error = Request::new(&file, product).unwrap_err();
    assert!(error.hint.contains("\"rinse water\""));
    // A closed tank may be over-full.
    let closed = parse(&BRINE.replace("closed       = false", "closed = true"));
    assert!(Request::new(&closed, level(12.0)).is_ok());
}
