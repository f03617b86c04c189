//! `[gas]`, `[[outside]]` and `[site]`.

use super::field::{Range, field};
use super::section::Section;
use crate::tank::finding::{Code, Located};
use crate::tank::model::{Gas, Gravity, Outside};
use crate::units::Quantity::{Acceleration, AngleDegrees, Density, Length, Pressure};

const WRITE_GAS: &str = "[gas] with vented = true, or with lowest, pressure and highest";
/// Perfect vacuum, gauge, Pa.
const VACUUM: f64 = -101_325.0;

pub(super) fn gas(root: &mut Section<'_>) -> Option<Gas> {
    if root.item("gas").is_none() {
        let message = "table [gas] is missing; gas pressure is never assumed";
        root.report(Code::MissingTable, root.span, message, format!("write {WRITE_GAS}"));
        return None;
    }
    let mut section = root.table("gas", WRITE_GAS)?;
    section.refuse("signal", "give lowest, pressure and highest; they bound the gas without one");
    let vented_stated = section.item("vented").is_some();
    let vented = section.flag("vented");
    if vented_stated && vented.is_none() {
        return None;
    }
    let held = ["lowest", "pressure", "highest"];
    if vented.is_some_and(|vented| vented.value) {
        for key in held {
            if let Some(span) = section.key_span(key) {
                let message = format!("`{key}` stands beside `vented = true` in [gas]");
                let hint = "a vented tank holds no pressure: remove one of the two";
                section.report(Code::ConflictingKeys, span, message, hint);
            }
        }
        section.finish();
        return Some(Gas::Vented);
    }
    let setting = |key, write| field(key, Pressure, Range::above(VACUUM, 1e7), write);
    let lowest = section.need(setting("lowest", "\"-0.6 kPa\", the vacuum setting, gauge"));
    let pressure = section.need(setting("pressure", "\"0.3 kPa\", in normal service, gauge"));
    let highest = section.need(setting("highest", "\"2.0 kPa\", the relief setting, gauge"));
    section.finish();
    Some(Gas::Held { lowest_pa: lowest?, pressure_pa: pressure?, highest_pa: highest? })
}

pub(super) fn outside(root: &mut Section<'_>) -> Vec<Outside> {
    let tables = root.tables("outside", "[[outside]] at the head of each");
    tables.into_iter().filter_map(one_outside).collect()
}

fn one_outside(mut section: Section<'_>) -> Option<Outside> {
    let level = |key, write| field(key, Length, Range::ANY, write);
    let highest = section.need(level("highest", "\"1.2 m\", the level it may reach"));
    let lowest = section.take(level("lowest", "\"0 m\", the level that is proven to stand always"));
    let write = "\"1000 kg/m3\"";
    let density = section.need(field("density", Density, Range::POSITIVE, write));
    let parts = part_names(&mut section);
    section.finish();
    Some(Outside { highest_m: highest?, lowest_m: lowest, density_kg_m3: density?, parts: parts? })
}

/// `None` when the list is there and could not be read, or is empty.
fn part_names(section: &mut Section<'_>) -> Option<Vec<Located<String>>> {
    const WRITE: &str = "[\"ground hatch\"], names of parts; leave it out for all parts";
    if section.item("parts").is_none() {
        return Some(Vec::new());
    }
    let (items, span) = section.items("parts", WRITE)?;
    if items.is_empty() {
        let message = format!("`parts` in {} is empty", section.place);
        section.report(Code::EmptyText, span, message, format!("write parts = {WRITE}"));
        return None;
    }
    items.iter().map(|item| section.text_of("parts", item, WRITE)).collect()
}

/// `None` when it could not be read; without `[site]` standard gravity holds.
pub(super) fn gravity(root: &mut Section<'_>) -> Option<Gravity> {
    const WRITE: &str = "gravity = \"9.81 m/s2\", or latitude and elevation";
    if root.item("site").is_none() {
        return Some(Gravity::Standard);
    }
    let mut section = root.table("site", WRITE)?;
    let chosen = section.one_of(&["gravity", "latitude"], &format!("write {WRITE}"));
    let gravity = section.take(field(
        "gravity",
        Acceleration,
        Range::between(9.7, 10.0),
        "\"9.81 m/s2\", from 9.76 at high places near the equator to 9.84 at the poles",
    ));
    let latitude = section.take(field(
        "latitude",
        AngleDegrees,
        Range::between(-90.0, 90.0),
        "\"59.9 deg\", from -90 deg (south) to 90 deg (north)",
    ));
    let height =
        field("elevation", Length, Range::between(-500.0, 9000.0), "\"20 m\", above sea level");
    let elevation = if chosen == Some("latitude") {
        section.need(height)
    } else {
        if let (Some("gravity"), Some(span)) = (chosen, section.key_span("elevation")) {
            let message = "`elevation` stands beside `gravity` in [site]";
            section.report(Code::ConflictingKeys, span, message, "gravity needs no elevation");
        }
        None
    };
    section.finish();
    match chosen? {
        "gravity" => Some(Gravity::Stated { gravity_m_s2: gravity? }),
        _ => Some(Gravity::Computed { latitude_deg: latitude?, elevation_m: elevation? }),
    }
}
