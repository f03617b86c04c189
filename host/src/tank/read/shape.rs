//! Outlines of flat surfaces, and where they stand.

use super::field::{Range, field};
use super::section::Section;
use crate::tank::finding::{Code, Located, Span};
use crate::tank::model::{Plane, Shape, sine};
use crate::units::Quantity::{AngleDegrees, Length};
use crate::units::format_si;

const WRITE: &str = "{ circle = { diameter = \"0.6 m\" } } or { rectangle = { width = \"1.0 m\", \
                     length = \"1.2 m\" } }";
/// Recognised, for a later version.
const LATER: [&str; 6] = ["ellipse", "obround", "triangle", "trapezoid", "polygon", "hole"];

/// The outline under a key that must be there.
pub(super) fn need(section: &mut Section<'_>, key: &'static str) -> Option<Located<Shape>> {
    if key == "sealed_to" && section.item(key).is_none() {
        section.missing(key, &format!("{WRITE}: the line of the gasket, to which liquid presses"));
        return None;
    }
    let mut table = section.need_table(key, WRITE)?;
    let span = table.span;
    let mut later = false;
    for kind in LATER {
        if let Some(span) = table.key_span(kind) {
            later = true;
            let message = format!("{kind} is not offered by this version");
            let hint = "circle and rectangle are; a larger one of these errs to the safe side";
            table.report(Code::NotOffered, span, message, hint);
        }
    }
    let shape = if later {
        // A finding is enough; the outlines offered are known keys none the less.
        table.item("circle");
        table.item("rectangle");
        None
    } else {
        match table.one_of(&["circle", "rectangle"], &format!("write {key} = {WRITE}")) {
            Some("circle") => circle(&mut table),
            Some(_) => rectangle(&mut table),
            None => None,
        }
    };
    table.finish();
    shape.map(|shape| Located::new(shape, span))
}

fn circle(parent: &mut Section<'_>) -> Option<Shape> {
    let mut table = parent.table("circle", "{ diameter = \"0.6 m\" }: the key says diameter")?;
    let diameter = table.need(field("diameter", Length, Range::POSITIVE, "\"0.6 m\""));
    table.finish();
    Some(Shape::Circle { diameter_m: diameter?.value })
}

fn rectangle(parent: &mut Section<'_>) -> Option<Shape> {
    let mut table = parent.table("rectangle", "{ width = \"1.0 m\", length = \"1.2 m\" }")?;
    let width = table.need(field("width", Length, Range::POSITIVE, "\"1.0 m\", horizontal"));
    let length = table.need(field("length", Length, Range::POSITIVE, "\"1.2 m\", up the slope"));
    table.finish();
    Some(Shape::Rectangle { width_m: width?.value, length_m: length?.value })
}

/// An outline in words.
pub(super) fn describe(shape: &Shape) -> String {
    match *shape {
        Shape::Circle { diameter_m } => format!("{} in diameter", format_si(diameter_m, Length)),
        Shape::Rectangle { width_m, length_m } => {
            format!("{} by {}", format_si(width_m, Length), format_si(length_m, Length))
        }
    }
}

/// A surface in its place, and where its height is written.
pub(super) struct Placed {
    pub(super) plane: Plane,
    pub(super) placed_at: Span,
}

/// Reads slope and height.
pub(super) fn place(section: &mut Section<'_>, shape: Option<Located<Shape>>) -> Option<Placed> {
    const PLACE: &str = "write exactly one of centre, bottom and top, as heights above the datum";
    let slope = slope(section);
    let key = section.one_of(&["centre", "bottom", "top"], PLACE)?;
    let height = section.take(field(key, Length, Range::ANY, "\"0.85 m\", above the datum"))?;
    let (shape, slope) = (shape?, slope?);
    let half = 0.5 * shape.value.length_m() * sine(slope);
    let centre = match key {
        "centre" => height.value,
        "bottom" => height.value + half,
        _ => height.value - half,
    };
    let plane = Plane::centred(shape.value, slope, centre);
    Some(Placed { plane, placed_at: height.span })
}

/// Angle through the liquid from the level floor, degrees.
fn slope(section: &mut Section<'_>) -> Option<f64> {
    let slope = section.need(field(
        "slope",
        AngleDegrees,
        Range::between(0.0, 180.0),
        "\"90 deg\", through the liquid from the level floor: 0 floor, 90 wall, 180 roof",
    ))?;
    let value = slope.value;
    let nearly = if value > 0.0 && value < 1.0 {
        "0 deg"
    } else if value > 179.0 && value < 180.0 {
        "180 deg"
    } else {
        return Some(value);
    };
    let message = format!("`slope` in {} is {value} deg, nearly level", section.place);
    let hint = format!("write slope = \"{nearly}\": within a degree a surface counts as level");
    section.report(Code::Slope, slope.span, message, hint);
    None
}
