//! Rules that look right and are wrong, as far as they are no rows of `tests/cases` and have no
//! test beside their source: what the product must not do.

use crate::product::file::Tank;
use strake::assess::Document;
use strake::tank;
use strake_oracle::liquid::Liquid;

fn hatch(sealed_m: f64, secured: &str, capacities: &str) -> String {
    format!(
        "[[hatch]]\nname = \"cover\"\nshape = {{ circle = {{ diameter = \"0.61 m\" }} }}\n\
         sealed_to = {{ circle = {{ diameter = \"{sealed_m:?} m\" }} }}\ncentre = \"0.85 m\"\n\
         slope = \"90 deg\"\nopens = \"outward\"\nsecured = {secured}\n{capacities}\n"
    )
}

const NONE: &str = "capacity = [ { none = \"loads only\" } ]";

fn gas_alone(pressure_pa: f64) -> Liquid {
    Liquid::uniform(1000.0, 0.0).with_gas(pressure_pa)
}

/// What a text is refused for.
fn refused(text: &str) -> Vec<String> {
    let found = tank::parse("case.toml", text.as_bytes()).expect_err("refused");
    found.list().iter().map(|one| one.message.clone()).collect()
}

fn says(found: &[String], words: &str) {
    assert!(found.iter().any(|one| one.contains(words)), "`{words}` in none of {found:?}");
}

/// The outward capacity says nothing about a vacuum: a shell buckles inward at a small part of it.
#[test]
fn an_inward_load_is_never_judged_by_the_outward_capacity() {
    let course = "[[course]]\nname = \"course\"\nbottom = \"0 m\"\nheight = \"9.6 m\"\n\
                  design_point = \"0 m\"\ncapacity = [ { plate = { thickness = \"7 mm\", \
                  corrosion_allowance = \"0 mm\", allowable_stress = \"137 MPa\", \
                  joint_efficiency = 0.85 }, basis = \"drawing\" } ]\n";
    let vessel = "cylinder = { diameter = \"8 m\", height = \"9.6 m\" }".to_owned();
    let empty = Tank { vessel, ..Tank::of(&gas_alone(-5_000.0), course.to_owned()) };
    let Document { parts, cautions, not_judged, .. } = empty.sheet();
    let judged = &parts[0].judgement;
    assert!(parts[0].loads.pressure_pa < -4_999.0);
    assert_eq!((judged.utilisation, judged.utilisation_inward), (Some(0.0), None));
    let said = not_judged.iter().map(|one| one.why.clone()).chain(cautions).collect::<Vec<_>>();
    says(&said, "inward");
}

/// Liquid presses to the gasket, and a cover turns about its hinge, not about its edge.
#[test]
fn a_cover_is_loaded_to_its_gasket_and_turns_about_its_hinge() {
    let loads = |sealed_m: f64, offset: &str| {
        let secured =
            format!("{{ hinge = \"top\", offset = \"{offset}\", latch_at = \"0.74 m\" }}");
        let tank = Tank::of(&gas_alone(10_000.0), hatch(sealed_m, &secured, NONE));
        let loads = tank.sheet().parts[0].loads.clone();
        (f64::from(loads.force_n.unwrap()), f64::from(loads.moment_n_m.unwrap()))
    };
    let (clear, at_edge) = loads(0.61, "0 mm");
    let (sealed, _) = loads(0.66, "0 mm");
    let (_, beside) = loads(0.61, "80 mm");
    assert!((sealed / clear - 1.1706).abs() < 1e-4, "{sealed} {clear}");
    assert!((beside / at_edge - (0.305 + 0.08) / 0.305).abs() < 1e-5, "{beside} {at_edge}");
}

/// Of a list the smallest governs, and what has no capacity is named.
#[test]
fn a_strong_bolt_does_not_speak_for_the_cover() {
    let bolts = "{ bolts = 8, bolt_circle_diameter = \"0.77 m\" }";
    let strong = "{ bolt = \"20 kN\", basis = \"drawing\" }";
    let weak = "{ force = \"5 kN\", basis = \"drawing\" }";
    let sheet = |list: &str| {
        let text = hatch(0.66, bolts, &format!("capacity = [ {list} ]"));
        Tank::of(&gas_alone(10_000.0), text).sheet()
    };
    let both = sheet(&format!("{strong}, {weak}"));
    let force = both.parts[0].loads.force_n.unwrap();
    let used = both.parts[0].judgement.utilisation.unwrap();
    assert!((used - force / 5_000.0).abs() <= 1e-6 * used, "{used} of {force}");
    let alone = sheet(strong);
    let said: Vec<String> = alone.not_judged.iter().map(|one| one.why.clone()).collect();
    says(&said, "cover");
}

/// Two bolts hold no moment, and the sum of their squares is not that of a circle.
#[test]
fn two_bolts_are_refused() {
    let text = hatch(0.66, "{ bolts = 2, bolt_circle_diameter = \"0.77 m\" }", NONE);
    says(&refused(&Tank::of(&gas_alone(0.0), text).text()), "bolts");
}

/// An unstated gasket, opening side or height of the gas is asked for, never assumed; a length that
/// could be a radius or a diameter is none.
#[test]
fn what_could_be_read_in_two_ways_is_refused() {
    let whole = Tank::of(
        &gas_alone(0.0),
        hatch(0.66, "{ bolts = 8, bolt_circle_diameter = \"0.77 m\" }", NONE),
    )
    .text();
    let without = |line: &str| {
        let kept: Vec<&str> = whole.lines().filter(|one| !one.starts_with(line)).collect();
        assert!(kept.len() < whole.lines().count(), "{line}");
        refused(&kept.join("\n"))
    };
    says(&without("sealed_to"), "sealed_to");
    says(&without("opens"), "opens");
    says(&without("highest"), "highest");
    let stated = "shape = { circle = { diameter = \"0.61 m\" } }";
    let plain = whole.replace(stated, "shape = { circle = \"0.61 m\" }");
    assert_ne!(plain, whole);
    says(&refused(&plain), "circle");
}

/// A head sensor is uncertain in pressure, and says against what it reads.
#[test]
fn a_head_sensor_is_uncertain_in_pressure() {
    let level = "[level]\nsensor = \"head\"\nat = \"0.15 m\"\nreference = \"atmosphere\"\n\
                 uncertainty = \"10 mm\"\n";
    let text = Tank::of(&gas_alone(0.0), level.to_owned() + crate::product::file::WALL).text();
    says(&refused(&text), "uncertainty");
    let text = text.replace("reference = \"atmosphere\"\n", "").replace("10 mm", "0.2 kPa");
    says(&refused(&text), "reference");
}

/// A hatch hands its load to the plate around it unless the file says otherwise, and it must say.
#[test]
fn a_hole_says_who_carries_its_load() {
    let panel = |carried: &str| {
        format!(
            "[[panel]]\nname = \"plate\"\nshape = {{ rectangle = {{ width = \"1 m\", \
             length = \"1 m\" }}, hole = {{ shape = {{ circle = {{ diameter = \"0.5 m\" }} }}, \
             at = [\"0 m\", \"0.2 m\"]{carried} }} }}\nbottom = \"0 m\"\nslope = \"90 deg\"\n{NONE}\n"
        )
    };
    let force = |carried: &str| {
        let tank = Tank::of(&gas_alone(1_000.0), panel(carried));
        f64::from(tank.sheet().parts[0].loads.force_n.unwrap())
    };
    assert!((force(", carried_by = \"plate\"") - 1_000.0).abs() < 1e-2);
    let hole = 1_000.0 * std::f64::consts::PI / 16.0;
    assert!((force(", carried_by = \"elsewhere\"") - (1_000.0 - hole)).abs() < 1e-2);
    says(&refused(&Tank::of(&gas_alone(0.0), panel("")).text()), "carried_by");
}

/// The thickness for a low level is no retirement thickness: the rule has a floor.
#[test]
fn a_thickness_for_a_low_level_is_not_the_required_one() {
    let course = "[[course]]\nname = \"course\"\nbottom = \"0 m\"\nheight = \"2.4 m\"\n\
                  design_point = \"0.3 m\"\nrule = \"API 653 4.3.3.1\"\n\
                  capacity = [ { plate = { thickness = \"4.6 mm\", corrosion_allowance = \"1 mm\", \
                  allowable_stress = \"137 MPa\", joint_efficiency = 0.85 }, \
                  basis = \"drawing\" } ]\n";
    let vessel = "cylinder = { diameter = \"8 m\", height = \"2.4 m\" }".to_owned();
    let tank = Tank { vessel, ..Tank::of(&Liquid::uniform(1280.0, 1.0), course.to_owned()) };
    let state = tank.sheet().parts[0].judgement.thickness_for_state_m.unwrap();
    let thickness = tank.rerated().parts[0].thickness.clone().unwrap();
    assert!((state - 1e-3 - thickness.new.calculated_m).abs() < 1e-9, "{state}");
    assert!(thickness.new.calculated_m < 0.4e-3);
    assert!((thickness.new.required_m - 2.54e-3).abs() < 1e-12);
    assert!((thickness.new.required_with_allowance_m - 3.54e-3).abs() < 1e-12);
}

/// A part below the zero of the levels, such as a sump beside the datum, is no mistake.
#[test]
fn heights_may_be_negative() {
    let wall = crate::product::file::WALL.replace("bottom = \"0 m\"", "bottom = \"-1.5 m\"");
    let tank = Tank::of(&Liquid::uniform(1000.0, -0.5), wall);
    let force = f64::from(tank.sheet().parts[0].loads.force_n.unwrap());
    let due = 0.5 * 1000.0 * 9.806_65;
    assert!((force - due).abs() <= 1e-5 * due, "{force} for {due}");
}
