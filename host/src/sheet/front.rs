//! What stands first: whose calculation it is, what is provisional, and the result.

use super::Context;
use super::measure::short;
use super::model::{Block, Cell, Frame, Row, Table, Words, strong};
use super::second::Pair;
use crate::assess::{FIELD_CHECK, PartRow, assumed, text};
use crate::inverse::Step;

/// Identity of the tank and of the calculation; what the program cannot know is left blank.
pub(super) fn identity(context: &Context<'_>, fingerprint: u64, blocks: &mut Vec<Block>) {
    let file = context.file;
    let blank = Table::new("llll", &["", "", "", ""]);
    let mut table = Table { look: "identity", ..blank };
    let date = context.date.unwrap_or("");
    let version = env!("CARGO_PKG_VERSION");
    let rows = [
        ["tank", &file.name.value, "tank number", ""],
        ["owner", "", "drawing, revision", ""],
        ["tank file", file.path(), "date", date],
        ["fingerprint", &format!("{fingerprint:016x}"), "program", &format!("strake {version}")],
    ];
    for [a, b, c, d] in rows {
        table.row(vec![strong(a).into(), b.into(), strong(c).into(), d.into()]);
    }
    blocks.push(Block::Table(table));
}

/// Assumed capacities, before anything else is read.
pub(super) fn provisional(context: &Context<'_>, blocks: &mut Vec<Block>) {
    let assumed = assumed(context.file);
    if assumed.is_empty() {
        return;
    }
    blocks.push(Block::Framed {
        frame: Frame::Warning,
        title: "PROVISIONAL: these capacities are assumed".to_owned(),
        blocks: vec![
            Block::List(assumed.into_iter().map(Words::from).collect()),
            Block::text("Every figure that rests on them is provisional until they are settled."),
        ],
    });
}

/// Loads on which the two methods differ by more than is allowed: then nothing may be used.
pub(super) fn disagreement(context: &Context<'_>, blocks: &mut Vec<Block>) {
    let mut found = Vec::new();
    for (part, list) in context.file.parts.iter().zip(&context.compared) {
        for one in list {
            let pairs = one.states.iter().flatten();
            let worst = pairs.map(Pair::share).fold(0.0, f64::max);
            if worst > 1.0 {
                let share = short(worst);
                let text = format!("{}: {}, {share} of what is allowed", part.name(), one.label);
                found.push(Words::from(text));
            }
        }
    }
    if found.is_empty() {
        return;
    }
    blocks.push(Block::Framed {
        frame: Frame::Warning,
        title: "THE TWO METHODS DO NOT AGREE: no figure of this sheet may be used".to_owned(),
        blocks: vec![Block::List(found)],
    });
}

/// The result page: what governs, and every part in one line.
pub(super) fn result(context: &Context<'_>, blocks: &mut Vec<Block>) {
    let mut inside = vec![Block::Text(governing(context))];
    let pressing = pressing(context);
    if !pressing.is_empty() {
        inside.push(Block::List(pressing.into_iter().map(Words::from).collect()));
    }
    inside.push(Block::Table(parts(context)));
    let step = Step::of(context.units).name();
    inside.push(Block::text(format!(
        "Calculated limit levels are rounded down to {step}, lowest levels up, after conversion. \
         The bound has the highest density and gas pressure; a sensor's uncertainty is in the \
         utilisation of the bound and in the thresholds. {FIELD_CHECK}."
    )));
    blocks.push(Block::Framed { frame: Frame::Result, title: "Result".to_owned(), blocks: inside });
}

fn governing(context: &Context<'_>) -> Words {
    let document = &context.assessment.document;
    let row = document.governing.as_ref().and_then(|name| {
        let mut rows = document.parts.iter();
        rows.find(|row| row.name == *name)
    });
    let Some((row, limits)) = row.and_then(|row| Some((row, row.judgement.limits.as_ref()?)))
    else {
        return strong("No part is judged outward: no calculated limit level follows.");
    };
    let by = limits.limited_by.replace('_', " ");
    let text = match limits.limit_level_m {
        None => {
            format!("Governing: {}, no level is within its capacity (limited by {by}).", row.name)
        }
        Some(level_m) => format!(
            "Governing: {}, calculated limit level {} (unrounded {}), limited by {by}.",
            row.name,
            text::down(context.units, Some(level_m)),
            text::unrounded(context.units, level_m)
        ),
    };
    strong(text)
}

/// Bounds above their thresholds, and where the level comes from when nobody stated it.
fn pressing(context: &Context<'_>) -> Vec<String> {
    let mut found = context.cautions();
    found.retain(|one| one.contains("is at or above") || one.starts_with("no level stated"));
    found
}

fn parts(context: &Context<'_>) -> Table {
    let titles = [
        "no.",
        "part",
        "utilisation",
        "its bound",
        "inward",
        "limit level",
        "of the bound",
        "lowest",
        "limited by",
    ];
    let mut table = Table::new("llrrrrrrl", &titles);
    for (index, row) in context.assessment.document.parts.iter().enumerate() {
        table.rows.push(Row::new(part(context, index + 1, row)).marked("part"));
    }
    table
}

fn part(context: &Context<'_>, number: usize, row: &PartRow) -> Vec<Cell> {
    let judged = &row.judgement;
    let used = |one: Option<f32>| one.map_or_else(|| "-".to_owned(), |u| format!("{u:.3}"));
    let (limit, bound, by) = match &judged.limits {
        None => ("-".to_owned(), "-".to_owned(), "not judged outward".to_owned()),
        Some(limits) => (
            text::down(context.units, limits.limit_level_m),
            text::down(context.units, limits.limit_level_bound_m),
            limits.limited_by.replace('_', " "),
        ),
    };
    let lowest = judged
        .lowest
        .map_or_else(|| "-".to_owned(), |lowest| text::up(context.units, lowest.lowest_level_m));
    let cells = [
        number.to_string(),
        row.name.clone(),
        used(judged.utilisation),
        used(judged.utilisation_bound),
        used(judged.utilisation_inward),
        limit,
        bound,
        lowest,
        by,
    ];
    cells.into_iter().map(Cell::from).collect()
}

/// What the calculation is about.
pub(super) fn scope(blocks: &mut Vec<Block>) {
    blocks.push(Block::Section("Scope".to_owned()));
    blocks.push(Block::text(
        "Loads of liquids at rest and of the gas above them on the parts that the tank file names, \
         against the capacities that the engineer states there. A calculated limit level is the \
         highest level up to which every outward and inward utilisation of a part stays at or below \
         one on the whole way up from the floor. It is a figure of this calculation; only the \
         person responsible decides what the tank is filled to. What is not covered stands at the \
         end.",
    ));
}
