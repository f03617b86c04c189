//! `[tank]` and `[fill]`.

use super::field::{Range, field};
use super::section::Section;
use crate::tank::finding::{Code, Located};
use crate::tank::model::{Fill, Vessel};
use crate::units::Quantity::{Length, Speed};

/// What `[tank]` says; name and vessel are absent when they could not be read.
pub(super) struct Tank {
    pub(super) name: Option<Located<String>>,
    pub(super) vessel: Option<Vessel>,
    pub(super) conditions: Vec<Located<String>>,
}

const WRITE_TANK: &str = "[tank] with a name, and the shape of the tank: \
                          cylinder = { diameter = \"8.0 m\", height = \"9.6 m\" }";

pub(super) fn tank(root: &mut Section<'_>) -> Tank {
    if root.item("tank").is_none() {
        let message = "table [tank] is missing";
        root.report(Code::MissingTable, root.span, message, format!("write {WRITE_TANK}"));
        return Tank { name: None, vessel: None, conditions: Vec::new() };
    }
    let Some(mut tank) = root.table("tank", WRITE_TANK) else {
        return Tank { name: None, vessel: None, conditions: Vec::new() };
    };
    let name = tank.need_name("name", "\"day tank 3\", the name that people on site use");
    let vessel = vessel(&mut tank);
    let conditions = conditions(&mut tank);
    tank.finish();
    Tank { name, vessel, conditions }
}

/// `None` when it could not be read; a tank without any shape is [`Vessel::Loose`].
fn vessel(tank: &mut Section<'_>) -> Option<Vessel> {
    let offered = "cylinder and box are";
    let lying = tank.key_span("lying").is_some();
    let strapping = tank.key_span("strapping").is_some();
    tank.refuse("lying", &format!("describe its parts without a shape of the tank; {offered}"));
    tank.refuse("strapping", &format!("leave it out: parts are judged without it; {offered}"));
    let cylinder = cylinder(tank);
    let cuboid = cuboid(tank);
    match (cylinder, cuboid) {
        (Some(_), Some(_)) => {
            let span = tank.key_span("box").unwrap_or(tank.span);
            let message = "`box` stands beside `cylinder` in [tank]";
            tank.report(Code::ConflictingKeys, span, message, "keep the one that the tank is");
            None
        }
        (Some(one), None) | (None, Some(one)) => one,
        (None, None) if lying || strapping => None,
        (None, None) => Some(Vessel::Loose),
    }
}

/// The outer option is whether the key stands, the inner one whether it could be read.
#[expect(clippy::option_option, reason = "absent and unreadable are two different answers")]
fn cylinder(tank: &mut Section<'_>) -> Option<Option<Vessel>> {
    const DIAMETER: &str = "\"8.0 m\", the inside diameter of the shell";
    const HEIGHT: &str = "\"9.6 m\", from the inside bottom to the top of the shell";
    tank.key_span("cylinder")?;
    let Some(mut shape) = tank.table("cylinder", "{ diameter = \"8.0 m\", height = \"9.6 m\" }")
    else {
        return Some(None);
    };
    let diameter = shape.need(field("diameter", Length, Range::POSITIVE, DIAMETER));
    let height = shape.need(field("height", Length, Range::POSITIVE, HEIGHT));
    shape.finish();
    let both = diameter.zip(height);
    Some(both.map(|(diameter_m, height_m)| Vessel::Cylinder { diameter_m, height_m }))
}

#[expect(clippy::option_option, reason = "absent and unreadable are two different answers")]
fn cuboid(tank: &mut Section<'_>) -> Option<Option<Vessel>> {
    const WRITE: &str = "{ length = \"6 m\", width = \"3 m\", height = \"2 m\" }";
    tank.key_span("box")?;
    let Some(mut shape) = tank.table("box", WRITE) else { return Some(None) };
    let length = shape.need(field("length", Length, Range::POSITIVE, "\"6 m\", inside"));
    let width = shape.need(field("width", Length, Range::POSITIVE, "\"3 m\", inside"));
    let height = shape.need(field("height", Length, Range::POSITIVE, "\"2 m\", of the walls"));
    shape.finish();
    let all = length.zip(width).zip(height);
    Some(all.map(|((length_m, width_m), height_m)| Vessel::Box { length_m, width_m, height_m }))
}

fn conditions(tank: &mut Section<'_>) -> Vec<Located<String>> {
    const WRITE: &str = "[\"seams radiographed before any fill above 5 m\"]";
    let Some((items, _)) = tank.items("conditions", WRITE) else { return Vec::new() };
    items.iter().filter_map(|item| tank.text_of("conditions", item, WRITE)).collect()
}

pub(super) fn fill(root: &mut Section<'_>) -> Fill {
    let Some(mut fill) = root.table("fill", "[fill] with levels, such as overflow = \"9.3 m\"")
    else {
        return Fill::default();
    };
    let level = |key, write| field(key, Length, Range::POSITIVE, write);
    let speed = |key, write| field(key, Speed, Range::POSITIVE, write);
    let read = Fill {
        overflow_m: fill.take(level("overflow", "\"9.3 m\", the level at which it runs over")),
        maximum_m: fill.take(level("maximum", "\"7.2 m\", the highest level of normal service")),
        lowest_m: fill.take(field(
            "lowest",
            Length,
            Range::NOT_NEGATIVE,
            "\"0.5 m\", the lowest level of normal service",
        )),
        highest_rise_m_s: fill.take(speed("highest_rise", "\"0.2 mm/s\", while filling")),
        highest_fall_m_s: fill
            .take(speed("highest_fall", "\"0.3 mm/s\", while emptying, without a sign")),
        closed: fill.flag("closed"),
    };
    fill.finish();
    read
}
