//! `[tank]` and `[fill]`.

use super::field::{Range, field};
use super::section::Section;
use crate::tank::MAX_STRAPPING_ROWS;
use crate::tank::finding::{Code, Located};
use crate::tank::model::{Fill, Strapping, Vessel};
use crate::units::Quantity::{Length, Speed, Volume};

/// What `[tank]` says; name and vessel are absent when they could not be read.
#[derive(Default)]
pub(super) struct Tank {
    pub(super) name: Option<Located<String>>,
    pub(super) vessel: Option<Vessel>,
    pub(super) strapping: Option<Strapping>,
    pub(super) conditions: Vec<Located<String>>,
}

const WRITE_TANK: &str = "[tank] with a name, and the shape of the tank: \
                          cylinder = { diameter = \"8.0 m\", height = \"9.6 m\" }";

pub(super) fn tank(root: &mut Section<'_>) -> Tank {
    if root.item("tank").is_none() {
        let message = "table [tank] is missing";
        root.report(Code::MissingTable, root.span, message, format!("write {WRITE_TANK}"));
        return Tank::default();
    }
    let Some(mut tank) = root.table("tank", WRITE_TANK) else {
        return Tank::default();
    };
    let name = tank.need_name("name", "\"day tank 3\", the name that people on site use");
    let strapping = strapping(&mut tank);
    let vessel = vessel(&mut tank, strapping.as_ref());
    let conditions = conditions(&mut tank);
    tank.finish();
    Tank { name, vessel, strapping, conditions }
}

/// `None` when it could not be read; a tank without any shape is [`Vessel::Loose`].
fn vessel(tank: &mut Section<'_>, strapping: Option<&Strapping>) -> Option<Vessel> {
    let write = "keep the one that the tank is";
    let shape = tank.at_most_one(&["cylinder", "box", "lying"], write);
    let known = [cylinder(tank), cuboid(tank), lying(tank)];
    let strapped = tank.key_span("strapping").is_some();
    match shape {
        Some(_) => known.into_iter().flatten().next().flatten(),
        None if strapped => {
            let strapping = strapping?;
            let (top_m, _) = strapping.rows.last()?;
            Some(Vessel::Strapped { top_m: Located::new(*top_m, strapping.span) })
        }
        None => Some(Vessel::Loose),
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

#[expect(clippy::option_option, reason = "absent and unreadable are two different answers")]
fn lying(tank: &mut Section<'_>) -> Option<Option<Vessel>> {
    const WRITE: &str = "{ diameter = \"2.4 m\", length = \"6 m\", heads = \"flat\" }";
    tank.key_span("lying")?;
    let Some(mut shape) = tank.table("lying", WRITE) else { return Some(None) };
    let diameter = shape.need(field("diameter", Length, Range::POSITIVE, "\"2.4 m\", inside"));
    let length = shape.need(field("length", Length, Range::POSITIVE, "\"6 m\", inside"));
    let heads = heads(&mut shape);
    shape.finish();
    let all = diameter.zip(length).filter(|_| heads);
    Some(all.map(|(diameter_m, length_m)| Vessel::Lying { diameter_m, length_m }))
}

/// Whether the heads are flat.
fn heads(shape: &mut Section<'_>) -> bool {
    const WRITE: &str = "\"flat\"";
    let Some(item) = shape.item("heads") else {
        shape.missing("heads", WRITE);
        return false;
    };
    let Some(heads) = shape.text_of("heads", item, WRITE) else { return false };
    if heads.value == "flat" {
        return true;
    }
    let message =
        format!("`heads` in {} is `{}`, only flat ones are offered", shape.place, heads.value);
    let hint = "give the volumes of a drum with dished heads as a strapping table instead";
    shape.report(Code::NotOffered, heads.span, message, hint);
    false
}

fn strapping(tank: &mut Section<'_>) -> Option<Strapping> {
    const WRITE: &str = "[[\"0 m\", \"0 m3\"], [\"1 m\", \"3.2 m3\"], [\"2 m\", \"7.1 m3\"]]";
    tank.item("strapping")?;
    let (rows, span) = tank.rows_of_two(
        field("strapping", Length, Range::ANY, WRITE),
        field("strapping", Volume, Range::NOT_NEGATIVE, WRITE),
    )?;
    let rising = rows.windows(2).all(|pair| matches!(pair, [a, b] if a.0 < b.0 && a.1 < b.1));
    if !(2..=MAX_STRAPPING_ROWS).contains(&rows.len()) || !rising {
        let message = format!(
            "`strapping` in {} needs 2 to {MAX_STRAPPING_ROWS} rows with rising height and volume",
            tank.place
        );
        let hint = "keep the rows between which a straight line serves";
        tank.report(Code::StrappingTable, span, message, hint);
        return None;
    }
    Some(Strapping { rows, span })
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
