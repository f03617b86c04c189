//! The answers as text, in columns that fit 80.

mod plates;

use super::document::{ByLoad, Document, Liquid, PartRow, Side, TankLimit};
use super::{Question, Rerating, notes};
use crate::assess::{self, FIELD_CHECK, assumed};
use crate::compile::fingerprint;
use crate::inverse::{Step, density_down, density_up, rounded_down, rounded_up};
use crate::page::Page;
use crate::tank::TankFile;
use crate::units::Quantity::{self, Density, Length, Pressure, Temperature};
use crate::units::{UnitSystem, format, format_us};

/// Columns of a name and of a number.
const NAME: usize = 24;
const CELL: usize = 14;

/// What every section needs.
struct Sheet<'a> {
    file: &'a TankFile,
    question: &'a Question,
    document: &'a Document,
    units: UnitSystem,
}

impl Sheet<'_> {
    fn show(&self, value: impl Into<f64>, quantity: Quantity) -> String {
        let value = value.into();
        // Nothing is nothing in any unit.
        let nothing = value == 0.0 && quantity == Pressure;
        if nothing { "0".to_owned() } else { format(value, quantity, self.units) }
    }

    /// A level that is already a whole step.
    fn stepped(&self, level_m: f64) -> String {
        match self.units {
            UnitSystem::Si => format!("{level_m:.2} m"),
            UnitSystem::UsCustomary => feet_in_marks(level_m),
        }
    }

    fn down(&self, level_m: Option<f32>) -> String {
        let step = Step::of(self.units);
        level_m.map_or_else(none, |level_m| self.stepped(rounded_down(level_m, step)))
    }

    fn up(&self, level_m: Option<f32>) -> String {
        let step = Step::of(self.units);
        level_m.map_or_else(none, |level_m| self.stepped(rounded_up(level_m, step)))
    }

    fn density(&self, rounded_kg_m3: f64) -> String {
        match self.units {
            UnitSystem::Si => format!("{rounded_kg_m3:.0} kg/m3"),
            UnitSystem::UsCustomary => {
                format!("{:.1} lb/ft3", rounded_kg_m3 * 0.028_316_846_592 / 0.453_592_37)
            }
        }
    }
}

/// `26' 3 1/2"`, which leaves room in a column.
fn feet_in_marks(level_m: f64) -> String {
    // Below a foot the long form writes decimals; a whole step has none that is lost here.
    let a_foot_up = format_us(level_m.abs() + 0.3048, Length);
    let feet = (level_m.abs() / 0.3048 + 1e-9).floor();
    let inches = a_foot_up.split_once(" ft ").map_or("", |(_, inches)| inches);
    let sign = if level_m < 0.0 { "-" } else { "" };
    format!("{sign}{feet:.0}' {}\"", inches.trim_end_matches(" in"))
}

fn none() -> String {
    "no level".to_owned()
}

/// A name and three numbers, and what follows.
fn line(name: &str, cells: [&str; 3], rest: &str) -> String {
    let [a, b, c] = cells;
    // A name that fills its column stands on a line of its own.
    let (own, name) =
        if name.chars().count() < NAME { (String::new(), name) } else { (format!("{name}\n"), "") };
    own + &format!("{name:<NAME$}{a:>CELL$}{b:>CELL$}{c:>CELL$}  {rest}")
}

/// The whole text.
#[must_use]
pub fn render(
    file: &TankFile,
    question: &Question,
    rerating: &Rerating,
    units: UnitSystem,
    coloured: bool,
) -> String {
    let sheet = Sheet { file, question, document: &rerating.document, units };
    let mut page = Page::narrow(coloured);
    page.heading(&format!("{}: re-rated for another liquid", file.name.value));
    let hash = fingerprint(file.text().as_bytes());
    let version = env!("CARGO_PKG_VERSION");
    page.paragraph("", &format!("{}, fingerprint {hash:016x}; strake {version}", file.path()));
    let assumed = assumed(file);
    if !assumed.is_empty() {
        page.blank();
        page.heading("PROVISIONAL: these capacities are assumed");
        for one in assumed {
            page.paragraph("  - ", &one);
        }
    }
    liquids(&sheet, &mut page);
    limits(&sheet, &mut page);
    governing(&sheet, &mut page);
    densities(&sheet, &mut page);
    plates::thicknesses(&sheet, &mut page);
    plates::lives(&sheet, &mut page);
    plates::tested(&sheet, &mut page);
    remarks(&sheet, &mut page, rerating);
    page.into_text()
}

fn liquids(sheet: &Sheet<'_>, page: &mut Page) {
    let (old, new) = (&sheet.document.old, &sheet.document.new);
    page.blank();
    page.heading(&format!("{:<20}{:>28}{:>28}", "Liquid", "as in file", "re-rated"));
    let mut row = |label: &str, pick: &dyn Fn(&Liquid) -> String| {
        page.line(&format!("  {label:<18}{:>28}{:>28}", pick(old), pick(new)));
    };
    row("name", &|side| side.liquid.clone());
    row("density", &|side| sheet.show(side.density_kg_m3, Density));
    row("  lowest", &|side| sheet.show(side.density_low_kg_m3, Density));
    row("  highest", &|side| sheet.show(side.density_high_kg_m3, Density));
    row("at", &|side| sheet.show(side.temperature_c, Temperature));
    row("gas pressure", &|side| sheet.show(side.gas_pressure_pa, Pressure));
    let level = sheet.show(sheet.document.level_m, Length);
    if old.sensor_reads.is_some() {
        row("head sensor reads", &|side| {
            side.sensor_reads.map_or_else(none, |pa| sheet.show(pa, Pressure))
        });
    }
    page.paragraph(
        "  ",
        &format!(
            "Levels are heights above the inside bottom at the shell. The level of the question \
             is {level} ({}).",
            match sheet.document.level_from {
                "command line" => "command line".to_owned(),
                from => format!("{from} of the file, no --level given"),
            }
        ),
    );
}

fn limits(sheet: &Sheet<'_>, page: &mut Page) {
    let rows = &sheet.document.parts;
    page.blank();
    let head = ["as in file", "re-rated", "its bound"];
    page.heading(&line("Calculated limit level", head, "limited by"));
    for row in rows {
        let (Some(old), Some(new)) = (&row.old, &row.new) else { continue };
        let levels = [old.limit_level_m, new.limit_level_m, new.limit_level_bound_m];
        let [a, b, c] = levels.map(|level_m| sheet.down(level_m));
        let by = new.limited_by.replace('_', " ");
        page.line(&line(&format!("  {}", row.name), [&a, &b, &c], &by));
        for (old, new) in old.by.iter().zip(&new.by) {
            by_load(sheet, page, old, new);
        }
        lowest(sheet, page, old, new);
        for (which, side) in [("as in file", old), ("re-rated", new)] {
            intervals(sheet, page, which, side);
        }
    }
    let top = sheet.document.parts.iter().any(|row| {
        let sides = [&row.old, &row.new];
        sides.into_iter().flatten().any(|side| side.by.iter().any(|one| !one.reached))
    });
    let step = Step::of(sheet.units).name();
    let open = if top { " A + says that overflow or shell top come first." } else { "" };
    page.paragraph(
        "  ",
        &format!(
            "Rounded down to {step}, lowest levels up. The bound has the highest density and gas \
             pressure, and no uncertainty of a sensor.{open}"
        ),
    );
}

/// One load of a part: which ends where.
fn by_load(sheet: &Sheet<'_>, page: &mut Page, old: &ByLoad, new: &ByLoad) {
    let cell = |one: &ByLoad| {
        let level = sheet.down(one.limit_level_m);
        if one.reached { level } else { format!("{level}+") }
    };
    let name = format!("    by {}", new.load.replace('_', " "));
    let rest = match (new.against, new.decides) {
        ("capacity", _) => "",
        (_, true) => "decisive",
        _ => "not decisive",
    };
    page.line(&line(&name, [&cell(old), &cell(new), ""], rest));
}

fn lowest(sheet: &Sheet<'_>, page: &mut Page, old: &Side, new: &Side) {
    let (Some(old), Some(new)) = (old.lowest_level_m, new.lowest_level_m) else { return };
    let (old, new) = (sheet.up(old), sheet.up(new));
    page.line(&line("    lowest level", [&old, &new, ""], "inward load"));
}

fn intervals(sheet: &Sheet<'_>, page: &mut Page, which: &str, side: &Side) {
    if side.limit_intervals_m.len() < 2 {
        return;
    }
    let stretches = side.limit_intervals_m.iter().map(|&[low_m, high_m]| {
        format!("{} to {}", sheet.up(Some(low_m)), sheet.down(Some(high_m)))
    });
    let stretches = stretches.collect::<Vec<_>>().join(" and ");
    page.paragraph("    ", &format!("{which}: within its capacities from {stretches} only"));
}

fn governing(sheet: &Sheet<'_>, page: &mut Page) {
    let sides = [("as in file", &sheet.document.old), ("re-rated", &sheet.document.new)];
    let sides = sides.map(|(label, side)| side.limit.as_ref().map(|limit| (label, limit)));
    if sides.iter().all(Option::is_none) {
        return;
    }
    page.blank();
    page.heading("Calculated limit of the tank");
    for (label, limit) in sides.into_iter().flatten() {
        page.paragraph(&format!("  {label:<12}"), &tank_limit(sheet, limit));
    }
    if let Some([from_m, to_m]) = sheet.document.instrument_only_m {
        let (from, to) = (sheet.down(Some(from_m)), sheet.show(to_m, Length));
        page.paragraph(
            "  ",
            &format!(
                "Between {from} and {to} nothing but an instrument and people keep the liquid \
                 out. Who has to accept the limit may ask for a change to the tank itself, such as \
                 a lower overflow."
            ),
        );
    }
}

fn tank_limit(sheet: &Sheet<'_>, limit: &TankLimit) -> String {
    let by = limit.limited_by.replace('_', " ");
    let lowest = match limit.lowest_level_m {
        Some(level_m) if level_m.is_none_or(|level_m| level_m > 0.0) => {
            format!("; not below {}", sheet.up(level_m))
        }
        _ => String::new(),
    };
    let level = sheet.down(limit.limit_level_m);
    match limit.limited_by {
        "overflow" | "shell_top" => {
            format!("{level}, limited by the {by}, not by strength{lowest}")
        }
        _ => format!("{level}, {}, by {by}{lowest}", limit.governing),
    }
}

fn densities(sheet: &Sheet<'_>, page: &mut Page) {
    let rows = &sheet.document.parts;
    if rows.iter().all(|row| row.highest_density.is_none()) {
        return;
    }
    let with_lowest = rows.iter().any(|row| row.lowest_density.is_some());
    page.blank();
    let title = format!("Density at {}", sheet.show(sheet.document.level_m, Length));
    let lowest = if with_lowest { "lowest" } else { "" };
    page.heading(&format!("{title:<26}{:>14}{lowest:>14}  limited by", "highest"));
    for row in rows {
        let Some(highest) = row.highest_density else { continue };
        let unbounded = highest.highest_density_limited_by == "range";
        let most = highest.highest_density_kg_m3;
        let most = if unbounded { None } else { most }.map_or_else(
            || (if unbounded { "any" } else { "none" }).to_owned(),
            |density| sheet.density(density_down(density, sheet.units)),
        );
        let (least, least_by) = row.lowest_density.map_or_else(
            || (String::new(), ""),
            |lowest| {
                let least = lowest.lowest_density_kg_m3.map_or_else(
                    || "none".to_owned(),
                    |density| sheet.density(density_up(density, sheet.units)),
                );
                (least, lowest.lowest_density_limited_by)
            },
        );
        let most_by = if unbounded { "nothing" } else { highest.highest_density_limited_by };
        let by = [most_by, least_by].map(|by| by.replace('_', " "));
        let by = by.join(if least_by.is_empty() { "" } else { "; " });
        let name = format!("  {}", row.name);
        page.line(&format!("{name:<26}{most:>14}{least:>14}  {by}"));
    }
    let reading = if with_lowest {
        " The lowest: the sensor reads what the new liquid gives at that level, and a lighter one \
         stands higher; at the limit of overflow or shell top it would run over first."
    } else {
        ""
    };
    page.paragraph(
        "  ",
        &format!("Of the estimate at its temperature, outward, up to that level.{reading}"),
    );
}

fn remarks(sheet: &Sheet<'_>, page: &mut Page, rerating: &Rerating) {
    let Sheet { file, question, units, .. } = sheet;
    let mut list = |title: &str, lines: Vec<String>| {
        if lines.is_empty() {
            return;
        }
        page.blank();
        page.heading(title);
        for one in lines {
            page.paragraph("  - ", &one);
        }
    };
    let not_judged = assess::not_judged(file, &rerating.desk, *units);
    let lines = not_judged.iter().map(|one| format!("{}: {}", one.name, one.why)).collect();
    list("Not judged", lines);
    list("Conditions", file.conditions.iter().map(|one| one.value.clone()).collect());
    let mut cautions = notes::cautions(file, question, &rerating.desk, *units);
    // Those two have their own place on the page.
    cautions.retain(|one| !one.starts_with("PROVISIONAL") && one != FIELD_CHECK);
    list("Cautions", cautions);
    page.blank();
    page.paragraph("", &format!("{FIELD_CHECK}."));
}

fn named(row: &PartRow) -> String {
    format!("  {}", row.name)
}
