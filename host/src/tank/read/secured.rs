//! `secured` of a hatch: what holds the cover.

use super::field::{Range, field};
use super::section::Section;
use crate::tank::finding::{Code, Located};
use crate::tank::model::{Bolts, FirstBolt};
use crate::units::Quantity::Length;

const WRITE: &str = "{ bolts = 28, bolt_circle_diameter = \"0.77 m\" }";
/// Recognised, for a later version.
const LATER: [&str; 7] =
    ["hinge", "offset", "latch_at", "latch_height", "pins", "pivot", "bolt_rectangle"];

/// The bolts; `None` when nothing is stated or it could not be read.
pub(super) fn bolts(hatch: &mut Section<'_>) -> Option<Located<Bolts>> {
    const FIRST: [(&str, FirstBolt); 2] =
        [("lowest", FirstBolt::Lowest), ("astride", FirstBolt::Astride)];
    let mut table = hatch.table("secured", WRITE)?;
    let span = table.span;
    let mut later = false;
    for key in LATER {
        if let Some(span) = table.key_span(key) {
            later = true;
            let message = format!("`{key}` is not offered by this version");
            let hint = "bolts on a circle are; or leave `secured` out and rate the cover by force";
            table.report(Code::NotOffered, span, message, hint);
        }
    }
    if later {
        table.item("bolts");
        table.item("bolt_circle_diameter");
        table.item("first_bolt");
        table.finish();
        return None;
    }
    let count = table.need_integer("bolts", 3, 999, "28, the number of bolts, 3 or more");
    let write = "\"0.77 m\", through the axes of the bolts";
    let circle = table.need(field("bolt_circle_diameter", Length, Range::POSITIVE, write));
    let first_stated = table.item("first_bolt").is_some();
    let write = "\"lowest\", or \"astride\" when the lowest point lies between two bolts";
    let first = table.take_choice("first_bolt", &FIRST, write).map(|first| first.value);
    table.finish();
    if first_stated && first.is_none() {
        return None;
    }
    let first = first.unwrap_or(FirstBolt::Lowest);
    let bolts = Bolts { count: count?.value, circle_diameter_m: circle?.value, first };
    Some(Located::new(bolts, span))
}
