//! Thickness, remaining life and the water test.

use super::{Sheet, line, named};
use crate::inverse::thickness_up;
use crate::page::Page;
use crate::rerate::document::{Life, PartRow, Thickness};
use crate::units::Quantity::{Density, Length, Speed};
use crate::units::UnitSystem;

/// A year, s.
const YEAR_S: f64 = 31_536_000.0;

fn with_plates<'a>(sheet: &'a Sheet<'_>) -> Vec<(&'a PartRow, &'a Thickness)> {
    let rows = sheet.document.parts.iter();
    rows.filter_map(|row| row.thickness.as_ref().map(|thickness| (row, thickness))).collect()
}

fn thickness(sheet: &Sheet<'_>, metres: f64) -> String {
    match sheet.units {
        UnitSystem::Si => format!("{:.2} mm", metres * 1e3),
        UnitSystem::UsCustomary => format!("{:.3} in", metres / 0.0254),
    }
}

pub(super) fn thicknesses(sheet: &Sheet<'_>, page: &mut Page) {
    let rows = with_plates(sheet);
    if rows.is_empty() {
        return;
    }
    page.blank();
    let title = format!("Thickness at {}", sheet.show(sheet.document.level_m, Length));
    let head = ["now", "as in file", "re-rated"];
    page.heading(&line(&title, head, "+ allowance"));
    for (row, one) in &rows {
        let up = |metres: f64| thickness(sheet, thickness_up(metres, sheet.units));
        let (now, old) = (thickness(sheet, one.now_m), up(one.old.required_m));
        let (new, planned) = (up(one.new.required_m), up(one.new.required_with_allowance_m));
        let short = if one.now_m < one.new.required_m {
            " SHORT"
        } else if one.now_m < one.new.required_with_allowance_m {
            " short"
        } else {
            ""
        };
        page.line(&line(&named(row), [&now, &old, &new], &format!("{planned}{short}")));
    }
    let floors = floors(sheet, &rows);
    let short = rows.iter().any(|(_, one)| one.now_m < one.new.required_with_allowance_m);
    let short = if short {
        " SHORT: thinner than required; short: thinner than required with the allowance."
    } else {
        ""
    };
    page.paragraph(
        "  ",
        &format!(
            "Required at that level without corrosion allowance, rounded up; in the last column \
             with it.{short}{floors}"
        ),
    );
}

fn floors(sheet: &Sheet<'_>, rows: &[(&PartRow, &Thickness)]) -> String {
    let mut said: Vec<String> = Vec::new();
    for (_, one) in rows {
        if let (Some(floor_m), Some(from)) = (one.floor_m, one.floor_from) {
            let text = format!(" Not below {}, {from}.", thickness(sheet, floor_m));
            if !said.contains(&text) {
                said.push(text);
            }
        }
    }
    if said.is_empty() {
        " No rule with a least thickness is named.".to_owned()
    } else {
        said.concat()
    }
}

pub(super) fn lives(sheet: &Sheet<'_>, page: &mut Page) {
    let rows = with_plates(sheet);
    if rows.iter().all(|(_, one)| one.new.remaining_life.is_none()) {
        return;
    }
    page.blank();
    page.heading(&format!("{:<32}{:>24}{:>24}", "Remaining life", "as in file", "re-rated"));
    for (row, one) in rows {
        let (Some(old), Some(new)) = (&one.old.remaining_life, &one.new.remaining_life) else {
            continue;
        };
        let rate = sheet.show(new.rate_m_per_year / YEAR_S, Speed);
        let from = match &new.from {
            Some(day) => format!("from {day} on, by its basis"),
            None => "from the day of the thickness on; the basis names none".to_owned(),
        };
        page.paragraph(&format!("{}: ", named(row)), &format!("{rate} {from}"));
        let mut put = |label: &str, pick: &dyn Fn(&Life) -> String| {
            page.line(&format!("{label:<32}{:>24}{:>24}", pick(old), pick(new)));
        };
        put("    to retirement thickness", &|life| {
            years(life.to_retirement_years, life.to_retirement_date.as_deref())
        });
        put("    to planned thickness", &|life| {
            years(life.to_planned_years, life.to_planned_date.as_deref())
        });
    }
    page.paragraph(
        "  ",
        "Retirement: (thickness - required) / rate. Planned: (thickness - allowance - required) / \
         rate, which keeps the allowance. Rounded down. It replaces no inspection interval.",
    );
}

fn years(years: Option<f64>, date: Option<&str>) -> String {
    let Some(years) = years else { return "no loss stated".to_owned() };
    if years <= 0.0 {
        return "spent".to_owned();
    }
    let down = (years * 10.0).floor() / 10.0;
    let date = date.map_or_else(String::new, |date| format!(", {date}"));
    format!("{down:.1} years{date}")
}

pub(super) fn tested(sheet: &Sheet<'_>, page: &mut Page) {
    let Some(tested) = sheet.document.tested else { return };
    page.blank();
    page.heading(&line("Covered by the water test", ["to level", "of full", ""], ""));
    for row in &sheet.document.parts {
        let Some(one) = row.tested else { continue };
        let level = match one.proven_level_m {
            None => "left dry".to_owned(),
            Some(_) => sheet.down(one.proven_level_m),
        };
        let share = one.share_of_full.map_or_else(
            || "stays dry".to_owned(),
            |share| format!("{:.1} %", (share * 1e3).floor() / 10.0),
        );
        page.line(&line(&named(row), [&level, &share, ""], ""));
    }
    page.paragraph(
        "  ",
        &format!(
            "The test: {} to {}. Up to that level of the new liquid no height of the part carries \
             more than in the test; of full is the pressure at its lowest point over that of the \
             new liquid to overflow or shell top. A test proves pressure, not the plates' rest of \
             life.",
            sheet.show(tested.density_kg_m3, Density),
            sheet.show(tested.level_m, Length)
        ),
    );
}
