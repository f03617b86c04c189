//! The table of limit levels, and the levels at which thresholds are reached.

use super::Sheet;
use super::state::reading;
use crate::assess::document::PartRow;
use crate::inverse::{Step, rounded_down, rounded_up};
use crate::page::Page;
use crate::units::Quantity::Length;
use crate::units::UnitSystem;

/// Columns of a name, of an unrounded and of a rounded level.
const NAME: usize = 26;
const UNROUNDED: usize = 12;
const ROUNDED: usize = 16;

const fn step(units: UnitSystem) -> Step {
    match units {
        UnitSystem::Si => Step::TenMillimetres,
        UnitSystem::UsCustomary => Step::EighthInch,
    }
}

/// A level as calculated.
pub(crate) fn unrounded(units: UnitSystem, level_m: f32) -> String {
    let level_m = f64::from(level_m);
    match units {
        UnitSystem::Si => format!("{level_m:.6} m"),
        UnitSystem::UsCustomary => format!("{:.5} ft", level_m / 0.3048),
    }
}

/// A rounded level.
fn stepped(units: UnitSystem, level_m: f64) -> String {
    match units {
        UnitSystem::Si => format!("{level_m:.2} m"),
        UnitSystem::UsCustomary => crate::units::format_us(level_m, Length),
    }
}

/// A limit level rounded down.
pub(crate) fn down(units: UnitSystem, level_m: Option<f32>) -> String {
    level_m.map_or_else(
        || "no level".to_owned(),
        |level_m| stepped(units, rounded_down(level_m, step(units))),
    )
}

/// A lowest level rounded up.
pub(crate) fn up(units: UnitSystem, level_m: Option<f32>) -> String {
    level_m.map_or_else(
        || "no level".to_owned(),
        |level_m| stepped(units, rounded_up(level_m, step(units))),
    )
}

pub(super) fn limits(sheet: &Sheet<'_>, page: &mut Page) {
    let rows = &sheet.assessment.document.parts;
    let judged: Vec<&PartRow> = rows
        .iter()
        .filter(|row| row.judgement.limits.is_some() || row.judgement.lowest.is_some())
        .collect();
    if judged.is_empty() {
        return;
    }
    let units = sheet.units;
    page.blank();
    let with_lowest = judged.iter().any(|row| row.judgement.lowest.is_some());
    let line = |name: &str, unrounded: &str, cells: [&str; 3], by: &str| {
        let [limit, bound, lowest] = cells;
        let lowest = if with_lowest { format!("{lowest:>ROUNDED$}") } else { String::new() };
        format!(
            "{name:<NAME$}{unrounded:>UNROUNDED$}{limit:>ROUNDED$}{bound:>ROUNDED$}{lowest}  {by}"
        )
    };
    let head = ["rounded down", "of the bound", "lowest"];
    page.heading(&line("Calculated limit level", "unrounded", head, "limited by"));
    for row in judged {
        let limits = row.judgement.limits.as_ref();
        let level_m = limits.and_then(|limits| limits.limit_level_m);
        let exact = level_m.map_or_else(|| "-".to_owned(), |level_m| unrounded(units, level_m));
        let (limit, bound, by) = match limits {
            Some(limits) => (
                down(units, limits.limit_level_m),
                down(units, limits.limit_level_bound_m),
                limits.limited_by.replace('_', " "),
            ),
            None => ("-".to_owned(), "-".to_owned(), "not judged outward".to_owned()),
        };
        let lowest = match &row.judgement.lowest {
            None => "-".to_owned(),
            Some(lowest) => up(units, lowest.lowest_level_m),
        };
        page.line(&line(&format!("  {}", row.name), &exact, [&limit, &bound, &lowest], &by));
    }
    let step_name = step(units).name();
    page.paragraph(
        "  ",
        &format!(
            "Levels are rounded down to {step_name}, lowest levels up. The bound has the highest \
             density and gas pressure; it holds no uncertainty of a sensor."
        ),
    );
    for row in rows {
        let several = row.judgement.limits.as_ref().filter(|one| one.limit_intervals_m.len() > 1);
        if let Some(limits) = several {
            intervals(sheet, page, row, &limits.limit_intervals_m);
        }
    }
    governing(sheet, page, rows);
}

/// A part that is within its capacities in more than one stretch: a limit level alone misleads.
fn intervals(sheet: &Sheet<'_>, page: &mut Page, row: &PartRow, list: &[[f32; 2]]) {
    let stretches = list.iter().map(|&[low_m, high_m]| {
        format!("{} to {}", sheet.show(low_m, Length), sheet.show(high_m, Length))
    });
    let stretches = stretches.collect::<Vec<_>>().join(" and ");
    page.paragraph("  ", &format!("{}: within its capacities from {stretches} only.", row.name));
}

fn governing(sheet: &Sheet<'_>, page: &mut Page, rows: &[PartRow]) {
    let name = sheet.assessment.document.governing.as_ref();
    let Some(row) = name.and_then(|name| rows.iter().find(|row| row.name == *name)) else {
        return;
    };
    let Some(limits) = &row.judgement.limits else { return };
    let by = limits.limited_by.replace('_', " ");
    page.blank();
    let text = if limits.limit_level_m.is_none() {
        format!("{}, no level is within its capacity (limited by {by})", row.name)
    } else {
        let limit = down(sheet.units, limits.limit_level_m);
        format!("{}, calculated limit level {limit} (limited by {by})", row.name)
    };
    page.heading(&format!("Governing: {text}"));
    if let Some(alone_m) = limits.capacity_alone_m {
        let alone = down(sheet.units, Some(alone_m));
        page.line(&format!("  its capacity alone is reached at {alone}"));
    }
}

/// Where the first bound reaches the thresholds of `[alarm]`.
pub(super) fn thresholds(sheet: &Sheet<'_>, page: &mut Page) {
    let Some(alarms) = &sheet.file.alarm else { return };
    page.blank();
    page.heading("Thresholds, as the sensor sees them");
    let document = &sheet.assessment.document;
    let pairs = [
        ("warn", alarms.warn.utilisation.value, document.warn_level_m),
        ("alarm", alarms.alarm.utilisation.value, document.alarm_level_m),
    ];
    for (name, utilisation, level_m) in pairs {
        let at = match level_m {
            None => "not reached".to_owned(),
            Some(level_m) => {
                let read = reading(sheet, f64::from(level_m));
                let read = if read.is_empty() { read } else { format!(" (reads {read})") };
                format!("first reached at {}{read}", sheet.show(level_m, Length))
            }
        };
        page.paragraph(
            &format!("  {name:<7}"),
            &format!("a bound at {utilisation} of its capacity: {at}"),
        );
    }
}
