//! `secured` and `cover_mass` of a hatch: what holds the cover, and what it weighs.

use super::field::{Range, field};
use super::section::{Section, listed};
use super::shape::describe;
use crate::tank::finding::{Code, Located};
use crate::tank::model::{
    Axis, BasisKind, BoltLine, Bolts, CoverMass, FirstBolt, Hinged, Latch, Plane, Secured, Shape,
};
use crate::units::Quantity::{Length, Mass};
use crate::units::format_si;
use toml::de::DeValue;

const WRITE: &str = "{ bolts = 28, bolt_circle_diameter = \"0.77 m\" } or { hinge = \"top\", \
                     offset = \"80 mm\", latch_at = \"0.70 m\" }";
/// Most latches of a cover.
const LATCHES: usize = 16;

/// What holds the cover; `None` when nothing is stated or it could not be read.
pub(super) fn secured(hatch: &mut Section<'_>) -> Option<Located<Secured>> {
    let mut table = hatch.table("secured", WRITE)?;
    let span = table.span;
    let kind = table.one_of(&["bolts", "hinge", "pivot"], &format!("write secured = {WRITE}"));
    let secured = match kind {
        Some("bolts") => bolts(&mut table).map(Secured::Bolts),
        Some("hinge") => hinge(&mut table).map(Secured::Hinged),
        Some(_) => pivot(&mut table).map(Secured::Hinged),
        None => None,
    };
    table.finish();
    secured.map(|secured| Located::new(secured, span))
}

fn bolts(table: &mut Section<'_>) -> Option<Bolts> {
    const FIRST: [(&str, FirstBolt); 2] =
        [("lowest", FirstBolt::Lowest), ("astride", FirstBolt::Astride)];
    let count = table.need_integer("bolts", 3, 999, "28, the number of bolts, 3 or more");
    let keys = ["bolt_circle_diameter", "bolt_rectangle"];
    let hint = "write bolt_circle_diameter = \"0.77 m\", or bolt_rectangle = { width = \"0.7 m\", \
                length = \"0.9 m\" }, through the axes of the bolts";
    let line = match table.one_of(&keys, hint) {
        Some("bolt_rectangle") => bolt_rectangle(table),
        Some(key) => {
            let write = "\"0.77 m\", through the axes of the bolts";
            let circle = table.take(field(key, Length, Range::POSITIVE, write));
            circle.map(|diameter| BoltLine::Circle { diameter_m: diameter.value })
        }
        None => None,
    };
    let first_stated = table.item("first_bolt").is_some();
    let write = "\"lowest\", or \"astride\" when the lowest point lies between two bolts";
    let first = table.take_choice("first_bolt", &FIRST, write).map(|first| first.value);
    if first_stated && first.is_none() {
        return None;
    }
    let first = first.unwrap_or(FirstBolt::Lowest);
    Some(Bolts { count: count?.value, line: line?, first })
}

fn bolt_rectangle(table: &mut Section<'_>) -> Option<BoltLine> {
    let mut rectangle =
        table.table("bolt_rectangle", "{ width = \"0.7 m\", length = \"0.9 m\" }")?;
    let width = rectangle.need(field("width", Length, Range::POSITIVE, "\"0.7 m\", horizontal"));
    let length =
        rectangle.need(field("length", Length, Range::POSITIVE, "\"0.9 m\", up the slope"));
    rectangle.finish();
    Some(BoltLine::Rectangle { width_m: width?.value, length_m: length?.value })
}

#[derive(Clone, Copy, PartialEq, Eq)]
enum Edge {
    Top,
    Bottom,
    Side,
}

fn hinge(table: &mut Section<'_>) -> Option<Hinged> {
    const EDGES: [(&str, Edge); 3] =
        [("top", Edge::Top), ("bottom", Edge::Bottom), ("side", Edge::Side)];
    let edge = table.need_choice("hinge", &EDGES, "\"top\", \"bottom\" or \"side\"");
    let write = "\"80 mm\", from the nearest edge of the opening outward to the hinge line";
    let offset = table.need(field("offset", Length, Range::NOT_NEGATIVE, write));
    let write = "\"0.70 m\", its distance from the hinge line; a list for several latches";
    if table.item("latch_at").is_none() {
        table.missing("latch_at", write);
    }
    let levers = several(table, "latch_at", Range::POSITIVE, write);
    let is_side = edge.as_ref().is_some_and(|edge| edge.value == Edge::Side);
    let (pins, heights) = if is_side { side(table) } else { (Some(None), Some(Vec::new())) };
    let (edge, offset, levers, pins, heights) =
        (edge?.value, offset?.value, levers?, pins?, heights?);
    if (is_side && pins.is_some() || !heights.is_empty()) && heights.len() != levers.len() {
        let message = format!(
            "{} names {} of `latch_at` and {} of `latch_height`",
            table.place,
            levers.len(),
            heights.len()
        );
        let hint = "with `pins` each latch needs its height: \
                    latch_at = [\"0.9 m\", \"0.9 m\"], latch_height = [\"0.6 m\", \"1.0 m\"]";
        table.report(Code::MissingKey, table.span, message, hint);
        return None;
    }
    let mut heights = heights.into_iter();
    let latches = levers
        .into_iter()
        .map(|lever_m| Latch { lever_m: Some(lever_m), height_m: heights.next() })
        .collect();
    let axis = match edge {
        Edge::Top => Axis::Top { offset_m: offset },
        Edge::Bottom => Axis::Bottom { offset_m: offset },
        Edge::Side => Axis::Side { offset_m: offset, pins_m: pins },
    };
    Some(Hinged { axis, latches })
}

/// Pins and heights of the latches of a hinge at the side; the outer options are whether they could
/// be read.
#[expect(clippy::option_option, reason = "no pins and unreadable pins differ")]
fn side(table: &mut Section<'_>) -> (Option<Option<[f64; 2]>>, Option<Vec<f64>>) {
    let write = "[\"0.5 m\", \"1.1 m\"], heights of the pins above the datum, the lower first";
    let pins = match table.item("pins") {
        None => Some(None),
        Some(_) => table
            .need_rising_pair(field("pins", Length, Range::ANY, write))
            .map(|pins| Some(pins.map(|pin| pin.value))),
    };
    let write = "\"0.75 m\", its height above the datum; a list for several latches";
    (pins, several(table, "latch_height", Range::ANY, write))
}

fn pivot(table: &mut Section<'_>) -> Option<Hinged> {
    let write = "\"1.95 m\", the height of the pivot above the datum";
    let height = table.take(field("pivot", Length, Range::ANY, write));
    let write = "\"1.55 m\", its height above the datum; a list for several latches";
    let heights = several(table, "latch_height", Range::ANY, write);
    if let Some(span) = table.key_span("latch_at") {
        let message = "`latch_at` means nothing beside `pivot`: it would not say on which side";
        let hint = "write latch_height = \"1.55 m\", the height of the latch above the datum";
        table.report(Code::ConflictingKeys, span, message, hint);
        return None;
    }
    let latch = |height_m: f64| Latch { lever_m: None, height_m: Some(height_m) };
    Some(Hinged {
        axis: Axis::Pivot { height_m: height? },
        latches: heights?.into_iter().map(latch).collect(),
    })
}

/// One quantity or a list of them; empty when absent.
fn several(
    table: &mut Section<'_>,
    key: &'static str,
    range: Range,
    write: &'static str,
) -> Option<Vec<f64>> {
    let one = field(key, Length, range, write);
    let Some(item) = table.item(key) else { return Some(Vec::new()) };
    if !matches!(item.get_ref(), DeValue::Array(_)) {
        return table.quantity(one, item).map(|found| vec![found.value]);
    }
    let (items, span) = table.items(key, write)?;
    if items.is_empty() || items.len() > LATCHES {
        let message = format!(
            "`{key}` in {} names {} latches, 1 to {LATCHES} can be",
            table.place,
            items.len()
        );
        table.report(Code::TooMany, span, message, format!("write {key} = {write}"));
        return None;
    }
    let read: Vec<f64> = items
        .iter()
        .filter_map(|item| table.quantity(one, item))
        .map(|found| found.value)
        .collect();
    (read.len() == items.len()).then_some(read)
}

/// The mass of the cover; the outer option is whether it could be read.
#[expect(clippy::option_option, reason = "no mass and an unreadable mass differ")]
pub(super) fn cover_mass(hatch: &mut Section<'_>) -> Option<Option<Located<CoverMass>>> {
    const WRITE: &str = "\"45 kg\", or { mass = \"45 kg\", basis = \"surveyed 2026-05\" }";
    let Some(item) = hatch.item("cover_mass") else { return Some(None) };
    if !matches!(item.get_ref(), DeValue::Table(_)) {
        let mass = hatch.take(field("cover_mass", Mass, Range::POSITIVE, WRITE))?;
        return Some(Some(mass.map(|kg| CoverMass { kg, measured: false })));
    }
    let mut table = hatch.table("cover_mass", WRITE)?;
    let mass = table.need(field("mass", Mass, Range::POSITIVE, "\"45 kg\""));
    let basis = table.need_text("basis", "\"surveyed 2026-05\", when it was weighed");
    table.finish();
    let (mass, basis) = (mass?, basis?);
    let lower = basis.value.to_lowercase();
    let kind = BasisKind::WORDS.iter().find(|(word, _)| lower.starts_with(word));
    let Some(&(_, kind)) = kind else {
        let words: Vec<&str> = BasisKind::WORDS.iter().map(|(word, _)| *word).collect();
        let message = format!("`basis` of `cover_mass` begins with none of {}", listed(&words));
        let hint = "only a mass that was weighed (surveyed) may relieve a load";
        hatch.report(Code::Basis, basis.span, message, hint);
        return None;
    };
    let measured = kind == BasisKind::Surveyed;
    Some(Some(mass.map(|kg| CoverMass { kg, measured })))
}

/// Whether what is stated can hold the cover; reports when not.
pub(super) fn works(
    section: &Section<'_>,
    secured: &Located<Secured>,
    opening: &Plane,
    sealed: &Located<Shape>,
) -> bool {
    let fault = match &secured.value {
        Secured::Bolts(bolts) => {
            let outside = bolts_stand_outside(section, bolts, secured, opening);
            return bolts_hold_evenly(section, sealed) && outside;
        }
        Secured::Hinged(hinged) => {
            let beside = matches!(hinged.axis, Axis::Side { .. });
            let uneven = beside && matches!(sealed.value, Shape::Polygon(_));
            let what =
                "a hinge beside a polygon, whose two sides differ, is not offered".to_owned();
            let hint = "describe the rectangle or trapezoid that encloses it";
            if uneven { Some((what, hint)) } else { hinged_fault(hinged, opening) }
        }
    };
    let Some((what, hint)) = fault else { return true };
    let message = format!("`secured` in {}: {what}", section.place);
    section.report(Code::Securing, secured.span, message, hint);
    false
}

/// The middle of the bolts is the centroid of the cover.
fn bolts_hold_evenly(section: &Section<'_>, sealed: &Located<Shape>) -> bool {
    if sealed.value.has_a_middle() {
        return true;
    }
    let message = format!(
        "bolts on a circle hold `{}` in {} unevenly: their middle is not that of the cover",
        sealed.value.word(),
        section.place
    );
    let hint = "rate the cover by force or pressure, or describe the circle, ellipse, obround \
                or rectangle that encloses it";
    section.report(Code::BoltCircle, sealed.span, message, hint);
    false
}

/// The bolts stand outside the opening.
fn bolts_stand_outside(
    section: &Section<'_>,
    bolts: &Bolts,
    secured: &Located<Secured>,
    opening: &Plane,
) -> bool {
    let (line, key, shown, hint) = match bolts.line {
        BoltLine::Circle { diameter_m } => {
            let shown = format_si(diameter_m, Length);
            let hint = "give the diameter of the circle through the axes of the bolts";
            (Shape::Circle { diameter_m }, "bolt_circle_diameter", shown, hint)
        }
        BoltLine::Rectangle { width_m, length_m } => {
            let line = Shape::Rectangle { width_m, length_m };
            let shown = describe(&line);
            (line, "bolt_rectangle", shown, "give the rectangle through the axes of the bolts")
        }
    };
    if line.encloses(&opening.shape) {
        return true;
    }
    let message = format!(
        "`{key}` in {} is {shown}: the bolts would stand in the opening, {}",
        section.place,
        describe(&opening.shape)
    );
    section.report(Code::BoltCircle, secured.span, message, hint);
    false
}

/// Why a hinge or pivot with its latches cannot hold the cover, and what to do.
fn hinged_fault(hinged: &Hinged, opening: &Plane) -> Option<(String, &'static str)> {
    let heights = hinged.latches.iter().any(|latch| latch.height_m.is_some());
    let by_height = matches!(hinged.axis, Axis::Side { pins_m: Some(_), .. } | Axis::Pivot { .. });
    if opening.is_level() && (heights || by_height) {
        let what = "a level cover has one height, it tells no place along it".to_owned();
        return Some((what, "give the levers of the latches: latch_at = \"0.70 m\""));
    }
    let levers: Vec<f64> = hinged.levers_m(opening.sine()).collect();
    if let Axis::Top { offset_m } | Axis::Bottom { offset_m } | Axis::Side { offset_m, .. } =
        hinged.axis
    {
        let short = levers.iter().find(|lever_m| **lever_m <= offset_m)?;
        let what = format!(
            "a latch at {} from the hinge line lies on the hinge's side of the opening, which \
             begins at {}",
            format_si(*short, Length),
            format_si(offset_m, Length)
        );
        return Some((what, "latch_at counts from the hinge line across the opening"));
    }
    let Axis::Pivot { height_m } = hinged.axis else { return None };
    let heights = opening.heights;
    if height_m.value <= heights.bottom_m || height_m.value >= heights.top_m {
        let what = format!(
            "the pivot at {} does not cross the opening, {} to {}",
            format_si(height_m.value, Length),
            format_si(heights.bottom_m, Length),
            format_si(heights.top_m, Length)
        );
        return Some((what, "for a line beside the opening write hinge = \"top\" or \"bottom\""));
    }
    let one_side = levers.iter().all(|m| *m > 0.0) || levers.iter().all(|m| *m < 0.0);
    (!one_side).then(|| {
        let what = "the latches of a pivot must stand all above or all below it".to_owned();
        (what, "judge the other latches by another means")
    })
}
