//! Outlines of flat surfaces, and where they stand.

use super::field::{Range, field};
use super::outline;
use super::section::Section;
use crate::tank::finding::{Code, Located, Span};
use crate::tank::model::{Hole, Plane, Shape, sine};
use crate::units::Quantity::{AngleDegrees, Length};
use crate::units::format_si;

/// An outline and the opening in it.
pub(super) struct Cut {
    pub(super) shape: Shape,
    pub(super) hole: Option<Hole>,
}

/// The outline under a key that must be there, without an opening in it.
pub(super) fn need(section: &mut Section<'_>, key: &'static str) -> Option<Located<Shape>> {
    if key == "sealed_to" && section.item(key).is_none() {
        let write = format!("{}: the line of the gasket, to which liquid presses", outline::WRITE);
        section.missing(key, &write);
        return None;
    }
    let mut table = section.need_table(key, outline::WRITE)?;
    let span = table.span;
    if let Some(span) = table.key_span("hole") {
        let message = format!("a hole means nothing in `{key}` of {}", section.place);
        let hint = "a cover has none: leave it out";
        table.report(Code::Outline, span, message, hint);
    }
    let shape = outline::one(&mut table, key);
    table.finish();
    shape.map(|shape| Located::new(shape, span))
}

/// The outline of a panel, with its opening.
pub(super) fn need_cut(section: &mut Section<'_>) -> Option<Located<Cut>> {
    let mut table = section.need_table("shape", outline::WRITE)?;
    let span = table.span;
    let stated = table.item("hole").is_some();
    let shape = outline::one(&mut table, "shape");
    let hole = if stated { outline::hole(&mut table, shape.as_ref()) } else { None };
    table.finish();
    if stated && hole.is_none() {
        return None;
    }
    shape.map(|shape| Located::new(Cut { shape, hole }, span))
}

/// An outline in words.
pub(super) fn describe(shape: &Shape) -> String {
    if let Shape::Circle { diameter_m } = *shape {
        return format!("{} in diameter", format_si(diameter_m, Length));
    }
    let (width, length) = (shape.width_m(), shape.length_m());
    format!("{} by {}", format_si(width, Length), format_si(length, Length))
}

/// A surface in its place, and where its height is written.
pub(super) struct Placed {
    pub(super) plane: Plane,
    pub(super) placed_at: Span,
}

/// Reads slope and height.
pub(super) fn place(section: &mut Section<'_>, cut: Option<Cut>) -> Option<Placed> {
    const PLACE: &str = "write exactly one of centre, bottom and top, as heights above the datum";
    let slope = slope(section);
    let key = section.one_of(&["centre", "bottom", "top"], PLACE)?;
    let height = section.take(field(key, Length, Range::ANY, "\"0.85 m\", above the datum"))?;
    let (Cut { shape, hole }, slope) = (cut?, slope?);
    let below_m = match key {
        "centre" if hole.is_none() => {
            let plane = Plane::centred(shape, slope, height.value);
            return Some(Placed { plane, placed_at: height.span });
        }
        "centre" => shape.centroid_m()[1],
        "bottom" => 0.0,
        _ => shape.length_m(),
    };
    let bottom_m = height.value - below_m * sine(slope);
    let plane = Plane::standing(shape, hole, slope, bottom_m);
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
