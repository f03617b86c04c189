//! The tank drawn to scale: the vessel with its courses, then every other part as it is seen from
//! the front, at its height. Sideways places are not in a tank file; parts stand side by side.

mod outline;

use super::Context;
use super::diagram::{Axis, axes, label, line, mm, tick};
use super::html::Html;
use super::model::{Block, Words};
use crate::assess::PartRow;
use crate::tank::{Part, Vessel};
use outline::{Outline, outline};

/// Room on the page, mm: all rows together, and one row beside its axis.
const TALL: f64 = 205.0;
const BROAD: f64 = 158.0;
/// Height of one row at most.
const TALLEST: f64 = 78.0;
const AXIS: f64 = 15.0;
/// Below the floor of a row, for number and utilisation of each part; above its top.
const FEET: f64 = 9.5;
const HEAD: f64 = 5.0;
/// Least room for one part, for its figures.
const SLOT: f64 = 13.0;
const GAP: f64 = 3.0;
/// Fill of what is below its warning.
const CALM: &str = "#f4f6f8";

/// One drawing in the row.
struct Item {
    width_m: f64,
    shapes: Vec<Shape>,
    /// Number of the part; none of the vessel, whose courses have theirs inside.
    number: Option<usize>,
}

struct Shape {
    outline: Outline,
    /// Number of the part, to be written inside.
    inside: Option<usize>,
    row: usize,
}

pub(super) fn section(context: &Context<'_>, blocks: &mut Vec<Block>) {
    blocks.push(Block::Section("Drawing".to_owned()));
    let caption = "To scale, heights above the datum (inside bottom at the shell). The vessel with \
                   its courses, then every other part seen from the front at its height; parts on a \
                   slope are shown as they project on an upright plane, arcs and shells from the \
                   side. Sideways places are not in the tank file. Under each part its number and \
                   the utilisation of the estimate; shaded: the bound is at or above the warning, \
                   shaded dark with a thick edge: at or above one.";
    let svg = draw(context);
    blocks.push(Block::Figure { svg, caption: Words::from(caption) });
}

fn items(context: &Context<'_>) -> Vec<Item> {
    let mut found = Vec::new();
    let courses: Vec<Shape> = context
        .file
        .parts
        .iter()
        .enumerate()
        .filter_map(|(row, part)| match part {
            Part::Course(course) => {
                let Vessel::Cylinder { diameter_m, .. } = context.file.vessel else { return None };
                let heights = [course.heights.bottom_m, course.heights.top_m];
                let outline = Outline::rectangle(diameter_m.value, heights);
                Some(Shape { outline, inside: Some(row + 1), row })
            }
            _ => None,
        })
        .collect();
    let width_m = match context.file.vessel {
        Vessel::Cylinder { diameter_m, .. } => Some(diameter_m.value),
        Vessel::Box { length_m, .. } | Vessel::Lying { length_m, .. } => Some(length_m.value),
        Vessel::Strapped { .. } | Vessel::Loose => None,
    };
    if let Some(width_m) = width_m {
        found.push(Item { width_m, shapes: courses, number: None });
    }
    for (row, part) in context.file.parts.iter().enumerate() {
        if let Some(outline) = outline(part) {
            let width_m = outline.width_m();
            let shapes = vec![Shape { outline, inside: None, row }];
            found.push(Item { width_m, shapes, number: Some(row + 1) });
        }
    }
    found
}

/// Rows of items that fit beside each other, at a scale of mm per m.
fn rows(items: &[Item], scale: f64) -> Vec<Vec<&Item>> {
    let mut found: Vec<Vec<&Item>> = vec![Vec::new()];
    let mut used = 0.0;
    for item in items {
        let width = slot(item, scale);
        let fits = used + width <= BROAD;
        if !fits && found.last().is_some_and(|row| !row.is_empty()) {
            found.push(Vec::new());
            used = 0.0;
        }
        used += width + GAP;
        if let Some(row) = found.last_mut() {
            row.push(item);
        }
    }
    found
}

fn slot(item: &Item, scale: f64) -> f64 {
    (item.width_m * scale).max(SLOT)
}

fn draw(context: &Context<'_>) -> String {
    let profiles = super::second::Profiles::of(context.file, context.request, None);
    let [low, high] = super::diagram::heights_m(context, &profiles);
    let items = items(context);
    let widest = items.iter().map(|item| item.width_m).fold(0.1, f64::max);
    let mut scale = (TALLEST / (high - low)).min(BROAD / widest);
    let tall = |scale: f64, rows: usize| {
        let rows = u32::try_from(rows).map_or(1.0, f64::from);
        rows * ((high - low) * scale + FEET + HEAD)
    };
    while tall(scale, rows(&items, scale).len()) > TALL && scale > 0.5 {
        scale *= 0.95;
    }
    let rows = rows(&items, scale);
    let one = (high - low) * scale + FEET + HEAD;
    let height = tall(scale, rows.len());
    let mut html = Html::default();
    let (width, view) = (AXIS + BROAD, format!("0 0 {} {}", mm(AXIS + BROAD), mm(height)));
    let (width, height) = (format!("{}mm", mm(width)), format!("{}mm", mm(height)));
    let size = [("width", width.as_str()), ("height", &height), ("viewBox", &view)];
    let role = [("role", "img"), ("aria-label", "the tank and its parts to scale")];
    html.open("svg", &[&size[..], &role[..]].concat());
    let mut top = HEAD;
    for row in rows {
        let z = Axis::new([low, high], top + (high - low) * scale, -(high - low) * scale);
        self::row(&mut html, context, &row, z, scale);
        top += one;
    }
    html.into_text()
}

fn row(html: &mut Html, context: &Context<'_>, items: &[&Item], z: Axis, scale: f64) {
    frame(html, context, z);
    let mut left = AXIS + 1.0;
    for item in items {
        let width = slot(item, scale);
        let middle = left + 0.5 * width;
        if item.number.is_none() {
            vessel(html, context, item, (middle, z, scale));
        }
        for shape in &item.shapes {
            let row = &context.assessment.document.parts[shape.row];
            part(html, context, shape, row, (middle, z, scale));
        }
        if let (Some(number), Some(shape)) = (item.number, item.shapes.first()) {
            let row = &context.assessment.document.parts[shape.row];
            let foot = z.place(z.low());
            label(html, [middle, foot + 4.0], "middle", &number.to_string());
            label(html, [middle, foot + 7.6], "middle", &utilisation(row));
        }
        left += width + GAP;
    }
}

fn utilisation(row: &PartRow) -> String {
    row.judgement.utilisation.map_or_else(|| "not judged".to_owned(), |used| format!("{used:.3}"))
}

/// Axis, level and overflow.
fn frame(html: &mut Html, context: &Context<'_>, z: Axis) {
    let [(unit, metre), _] = axes(context.units);
    let in_units = Axis::new([z.low() / metre, z.high() / metre], 0.0, 1.0);
    for value in in_units.ticks(6.0) {
        let y = z.place(value * metre);
        line(html, [AXIS - 1.2, y], [AXIS + BROAD, y], "#e2e2e2", 0.15);
        label(html, [AXIS - 2.0, y + 1.0], "end", &tick(value));
    }
    label(html, [0.5, z.place(z.high()) - 1.5], "start", &format!("z, {unit}"));
    line(html, [AXIS, z.place(z.low())], [AXIS, z.place(z.high())], "#111", 0.25);
    let level = z.place(context.request.level_m);
    line(html, [AXIS, level], [AXIS + BROAD, level], "#1f5fa8", 0.4);
    label(html, [AXIS + BROAD, level - 0.9], "end", "level assessed");
    let overflow = context.file.fill.overflow_m.map(|overflow| overflow.value);
    if let Some(overflow_m) = overflow.filter(|one| (one - context.request.level_m).abs() > 1e-9) {
        let y = z.place(overflow_m);
        line(html, [AXIS, y], [AXIS + BROAD, y], "#888", 0.25);
        label(html, [AXIS + BROAD, y - 0.9], "end", "overflow");
    }
}

/// The outline of the vessel.
fn vessel(
    html: &mut Html,
    context: &Context<'_>,
    item: &Item,
    (middle, z, scale): (f64, Axis, f64),
) {
    let Some(height_m) = context.file.vessel.height_m() else { return };
    let half = 0.5 * item.width_m * scale;
    let [x, y] = [middle - half, z.place(height_m)].map(mm);
    let [width, height] = [2.0 * half, z.place(0.0) - z.place(height_m)].map(mm);
    let place = [("x", x.as_str()), ("y", &y), ("width", &width), ("height", &height)];
    let look = [("fill", "none"), ("stroke", "#111"), ("stroke-width", "0.6")];
    html.empty("rect", &[&place[..], &look[..]].concat());
}

/// Fill, and width of the edge, by the bound of the utilisation.
fn look(context: &Context<'_>, row: &PartRow) -> (&'static str, &'static str) {
    let judged = &row.judgement;
    let bounds = [judged.utilisation_bound, judged.utilisation_inward];
    let bound =
        bounds.into_iter().flatten().fold(0.0_f32, |most, one| if one > most { one } else { most });
    let warn = context.file.alarm.as_ref().map_or(1.0, |alarm| alarm.warn.utilisation.value);
    if bound >= 1.0 {
        ("#e08a7a", "0.9")
    } else if f64::from(bound) >= warn {
        ("#f2d7a0", "0.35")
    } else {
        (CALM, "0.3")
    }
}

fn part(
    html: &mut Html,
    context: &Context<'_>,
    shape: &Shape,
    row: &PartRow,
    (middle, z, scale): (f64, Axis, f64),
) {
    let (fill, edge) = look(context, row);
    let at = |[x, height]: [f64; 2]| [middle + x * scale, z.place(height)];
    for ring in &shape.outline.rings {
        let points: Vec<String> = ring.iter().map(|&point| at(point).map(mm).join(",")).collect();
        let points = points.join(" ");
        // What is seen edge on is a line: the fill would not show.
        let (tag, fill, stroke, width) = if shape.outline.open {
            ("polyline", "none", if fill == CALM { "#111" } else { fill }, "1.1")
        } else {
            ("polygon", fill, "#111", edge)
        };
        let attributes = [
            ("points", points.as_str()),
            ("fill", fill),
            ("stroke", stroke),
            ("stroke-width", width),
        ];
        html.empty(tag, &attributes);
    }
    for hole in &shape.outline.holes {
        let points: Vec<String> = hole.iter().map(|&point| at(point).map(mm).join(",")).collect();
        let points = points.join(" ");
        let attributes = [
            ("points", points.as_str()),
            ("fill", "#fff"),
            ("stroke", "#111"),
            ("stroke-width", "0.2"),
        ];
        html.empty("polygon", &attributes);
    }
    if let Some(number) = shape.inside {
        let [x, y] = at(shape.outline.middle());
        label(html, [x, y + 1.0], "middle", &format!("{number}: {}", utilisation(row)));
    }
}
