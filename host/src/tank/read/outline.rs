//! The outlines that a file may name, and an opening in one.

use toml::de::DeValue;

use super::field::{Field, Range, field};
use super::section::Section;
use crate::tank::finding::{Code, Located, Span};
use crate::tank::model::{CORNERS_MAX, Corners, Hole, Shape};
use crate::units::Quantity::{Length, Ratio};
use crate::units::format_si;

pub(super) const WRITE: &str = "{ circle = { diameter = \"0.6 m\" } } or { rectangle = { width = \
                                \"1.0 m\", length = \"1.2 m\" } }";
const KINDS: [&str; 7] =
    ["circle", "ellipse", "obround", "rectangle", "triangle", "trapezoid", "polygon"];
/// Largest share of an outline that an opening may take: a narrow rim is a part of its own, and
/// the difference of two loads would lose its digits.
const HOLE_SHARE: f64 = 0.8;

/// The one outline that a table names.
pub(super) fn one(table: &mut Section<'_>, key: &str) -> Option<Shape> {
    let kind = table.one_of(&KINDS, &format!("write {key} = {WRITE}, or one of the others"))?;
    let write = match kind {
        "circle" => "{ diameter = \"0.6 m\" }: the key says diameter",
        "triangle" => "{ base = \"1.4 m\", height = \"1.1 m\", apex = \"up\" }",
        "trapezoid" => "{ top = \"2 m\", bottom = \"1 m\", length = \"1.2 m\" }",
        "polygon" => "{ points = [[\"0 m\", \"0 m\"], [\"1 m\", \"0 m\"], [\"0 m\", \"1 m\"]] }",
        _ => "{ width = \"1.0 m\", length = \"1.2 m\" }",
    };
    let mut table = table.table(kind, write)?;
    let shape = of_kind(&mut table, kind);
    table.finish();
    shape
}

fn of_kind(table: &mut Section<'_>, kind: &str) -> Option<Shape> {
    const APEX: [(&str, bool); 2] = [("up", true), ("down", false)];
    let mut size = |key, write| {
        table.need(field(key, Length, Range::POSITIVE, write)).map(|value| value.value)
    };
    let sides = |size: &mut dyn FnMut(&'static str, &'static str) -> Option<f64>| {
        let width = size("width", "\"1.0 m\", horizontal");
        let length = size("length", "\"1.2 m\", up the slope");
        Some((width?, length?))
    };
    match kind {
        "circle" => size("diameter", "\"0.6 m\"").map(|diameter_m| Shape::Circle { diameter_m }),
        "ellipse" => {
            sides(&mut size).map(|(width_m, length_m)| Shape::Ellipse { width_m, length_m })
        }
        "obround" => {
            sides(&mut size).map(|(width_m, length_m)| Shape::Obround { width_m, length_m })
        }
        "rectangle" => {
            sides(&mut size).map(|(width_m, length_m)| Shape::Rectangle { width_m, length_m })
        }
        "triangle" => {
            let base = size("base", "\"1.4 m\", the level side");
            let height = size("height", "\"1.1 m\", up the slope");
            let write = "\"up\" or \"down\", where the corner opposite the base points";
            let apex = table.need_choice("apex", &APEX, write);
            Some(Shape::Triangle { base_m: base?, height_m: height?, apex_up: apex?.value })
        }
        "trapezoid" => {
            let top = size("top", "\"2 m\", the upper level side");
            let bottom = size("bottom", "\"1 m\", the lower level side");
            let length = size("length", "\"1.2 m\", up the slope");
            Some(Shape::Trapezoid { top_m: top?, bottom_m: bottom?, length_m: length? })
        }
        _ => polygon(table),
    }
}

const POINT: Field = field(
    "points",
    Length,
    Range::ANY,
    "[[\"0 m\", \"0 m\"], [\"1 m\", \"0 m\"], ..], sideways and up the slope",
);

fn polygon(table: &mut Section<'_>) -> Option<Shape> {
    if table.item("points").is_none() {
        table.missing("points", POINT.write);
        return None;
    }
    let (items, span) = table.items("points", POINT.write)?;
    let point = |item| {
        let DeValue::Array(pair) = toml::Spanned::get_ref(item) else {
            table.wrong_type("points", item, "a list of pairs", POINT.write);
            return None;
        };
        let [x, s] = &pair[..] else {
            let message = format!("a point in {} has {} values, not 2", table.place, pair.len());
            let hint = format!("write points = {}", POINT.write);
            table.report(Code::WrongType, item.span().into(), message, hint);
            return None;
        };
        let (x, s) = (table.quantity(POINT, x), table.quantity(POINT, s));
        Some([x?.value, s?.value])
    };
    let read: Vec<[f64; 2]> = items.iter().filter_map(point).collect();
    if read.len() < items.len() {
        return None;
    }
    sound(table, &read, span).map(Shape::Polygon)
}

/// The corners, if they make a polygon.
fn sound(table: &Section<'_>, points: &[[f64; 2]], span: Span) -> Option<Corners> {
    let refuse = |message: String, hint: &str| {
        table.report(Code::Outline, span, message, hint);
        None
    };
    let count = points.len();
    let Some(corners) = Corners::new(points) else {
        let message =
            format!("`points` in {} has {count} corners, not 3 to {CORNERS_MAX}", table.place);
        return refuse(message, "leave out corners that hardly turn, to the larger side");
    };
    if let Some((one, other)) = corners.crossing() {
        let message = format!("sides {one} and {other} of {} cross or touch", table.place);
        return refuse(message, "give the corners in the order in which one walks around it");
    }
    if corners.area_m2() < 1e-6 {
        let message = format!("the corners of {} enclose nothing", table.place);
        return refuse(message, "give at least three corners that do not stand in one line");
    }
    Some(corners)
}

/// The opening in an outline.
pub(super) fn hole(parent: &mut Section<'_>, around: Option<&Shape>) -> Option<Hole> {
    const WRITE: &str = "{ shape = { circle = { diameter = \"0.4 m\" } }, carried_by = \"plate\" }";
    const CARRIED: [(&str, bool); 2] = [("plate", false), ("elsewhere", true)];
    const AT: Field = field(
        "at",
        Length,
        Range::ANY,
        "[\"0 m\", \"0.3 m\"], its centroid sideways and up the slope",
    );
    let mut table = parent.table("hole", WRITE)?;
    let span = table.span;
    let mut inner = table.need_table("shape", "{ circle = { diameter = \"0.4 m\" } }");
    let shape = inner.as_mut().and_then(|inner| one(inner, "shape"));
    if let Some(inner) = inner {
        inner.finish();
    }
    let write = "\"plate\" when what closes it hands its load to the plate, else \"elsewhere\"";
    let carried = table.need_choice("carried_by", &CARRIED, write);
    let at_span = table.key_span("at");
    let at = if at_span.is_some() { table.pair(AT) } else { None };
    if at_span.is_none() && matches!(around, Some(Shape::Polygon(_))) {
        let is_polygon = matches!(shape, Some(Shape::Polygon(_)));
        if !is_polygon && shape.is_some() {
            table.missing("at", AT.write);
            table.finish();
            return None;
        }
    }
    if let (Some(span), Some(Shape::Polygon(_))) = (at_span, &shape) {
        let message = "`at` stands beside the points of a hole, which say where it is";
        table.report(Code::ConflictingKeys, span, message, "leave `at` out");
    }
    table.finish();
    if at_span.is_some() && at.is_none() {
        return None;
    }
    let (shape, around, carried) = (shape?, around?, carried?);
    let at_m = lowest_m(&shape, around, at.map(|at| at.map(|one| one.value)));
    let shape = Located::new(shape, span);
    inside(parent, around, &shape, at_m)?;
    Some(Hole { shape: shape.value, at_m, carried_elsewhere: carried.value })
}

/// Lowest point of an opening: x, and up the slope from that of the outline.
fn lowest_m(hole: &Shape, around: &Shape, at: Option<[f64; 2]>) -> [f64; 2] {
    let origin_up = match around {
        Shape::Polygon(corners) => -corners.lowest_m(),
        _ => around.centroid_m()[1],
    };
    if let Shape::Polygon(corners) = hole {
        return [0.0, corners.lowest_m() + origin_up];
    }
    let [x, s] = at.unwrap_or([0.0; 2]);
    [x, s + origin_up - hole.centroid_m()[1]]
}

fn inside(
    section: &Section<'_>,
    around: &Shape,
    hole: &Located<Shape>,
    at_m: [f64; 2],
) -> Option<()> {
    let share = hole.value.area_m2() / around.area_m2();
    let place = &section.place;
    let (message, hint) = if !around.holds(&hole.value, at_m) {
        (format!("the hole in {place} reaches beyond the plate"), "check its size and its place")
    } else if share > HOLE_SHARE {
        let (share, limit) = (format_si(share, Ratio), format_si(HOLE_SHARE, Ratio));
        (
            format!("the hole takes {share} of {place}, it may take up to {limit}"),
            "describe the rim that is left as parts of its own",
        )
    } else {
        return Some(());
    };
    section.report(Code::Outline, hole.span, message, hint);
    None
}
