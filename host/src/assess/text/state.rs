//! The state that was assessed, with the source of each number.

use super::Sheet;
use crate::assess::part::single;
use crate::assess::request::Source;
use crate::compile::table_error;
use crate::page::Page;
use crate::tank::{Gas, Gravity, PressureReference, Sensing, Signal, Thermal};
use crate::units::Quantity::{
    Acceleration, Current, Density, Length, Pressure, Ratio, Temperature,
};

/// One row: what, its value, and where that comes from.
type Row = (&'static str, String, String);

pub(super) fn state(sheet: &Sheet<'_>, page: &mut Page) {
    page.blank();
    page.heading("State");
    for (label, value, note) in state_rows(sheet) {
        page.paragraph(&format!("  {label:<10}{value:<42}  "), &note);
    }
}

/// What was assessed: each value, and where it comes from.
pub(crate) fn state_rows(sheet: &Sheet<'_>) -> Vec<Row> {
    let mut rows = vec![level(sheet)];
    liquids(sheet, &mut rows);
    surroundings(sheet, &mut rows);
    let (value, note) = sensor(sheet);
    rows.push(("sensor", value, note));
    rows.extend(in_water(sheet));
    let datum = "inside bottom at the shell; levels are heights above it";
    rows.push(("datum", datum.to_owned(), String::new()));
    rows
}

const fn source(overridden: bool) -> &'static str {
    if overridden { "command line" } else { "file" }
}

fn level(sheet: &Sheet<'_>) -> Row {
    let source = match sheet.request.level_source {
        Source::Override => "command line",
        Source::Overflow => "overflow of the file, no --level given",
        Source::ShellTop => "shell top of the file, no --level given",
    };
    ("level", sheet.show(sheet.request.level_m, Length), source.to_owned())
}

fn liquids(sheet: &Sheet<'_>, rows: &mut Vec<Row>) {
    let contents = &sheet.request.contents;
    let overrides = &sheet.request.overrides;
    let liquid = &contents.liquid;
    let product = source(overrides.product.is_some()).to_owned();
    rows.push(("liquid", liquid.name.value.clone(), product));
    let density = format!(
        "{} at {}",
        sheet.show(contents.density_kg_m3(), Density),
        sheet.show(contents.temperature_c, Temperature)
    );
    let from = source(overrides.density_kg_m3.is_some());
    let temperature = source(overrides.temperature_c.is_some());
    let from = if from == temperature {
        from.to_owned()
    } else {
        format!("{from}, temperature: {temperature}")
    };
    rows.push(("density", density, from));
    let (low, high) = contents.band_kg_m3();
    let band = format!("{} to {}", sheet.show(low, Density), sheet.show(high, Density));
    let range = format!(
        "{} to {}, +-{}",
        sheet.show(liquid.coldest_c.value, Temperature),
        sheet.show(liquid.hottest_c.value, Temperature),
        sheet.show(liquid.uncertainty.value, Ratio)
    );
    rows.push(("  band", band, range));
    rows.extend(expansion(sheet));
    for layer in &sheet.file.below {
        let value = format!(
            "{}, {} up to {}",
            layer.liquid.name.value,
            sheet.show(layer.liquid.density_kg_m3.value, Density),
            sheet.show(layer.surface_m.value, Length)
        );
        let within = sheet.show(layer.surface_uncertainty_m.value, Length);
        rows.push(("  below", value, format!("file, surface +-{within}")));
    }
}

/// How a petroleum liquid follows the temperature, and what the device's table leaves out.
fn expansion(sheet: &Sheet<'_>) -> Vec<Row> {
    let liquid = &sheet.request.contents.liquid;
    let mut rows = Vec::new();
    if let Thermal::Petroleum(group) = liquid.thermal.value {
        let base = group.base_kg_m3(liquid.density_kg_m3.value, liquid.temperature_c.value);
        let value = format!("{} at 15 degC", sheet.show(base, Density));
        let note = format!("{}, API MPMS 11.1 (1980), {}", group.word(), group.table());
        rows.push(("  base", value, note));
    }
    if sheet.file.temperature_signal.is_some() && !matches!(liquid.thermal.value, Thermal::None) {
        let (points, error) = table_error(liquid);
        let value = format!("of the device: {points} points, straight lines");
        rows.push(("  table", value, format!("within {error:.1e} of the density")));
    }
    rows
}

fn surroundings(sheet: &Sheet<'_>, rows: &mut Vec<Row>) {
    let file = sheet.file;
    let [lowest, gas, highest] = sheet.request.contents.gas_pa;
    let overridden = sheet.request.overrides.gas_pa.is_some();
    let bounds = if matches!(file.gas, Gas::Vented) && !overridden {
        "file, vented".to_owned()
    } else {
        let (lowest, highest) = (sheet.load(lowest, Pressure), sheet.load(highest, Pressure));
        format!("{}, {lowest} to {highest}", source(overridden))
    };
    rows.push(("gas", sheet.load(gas, Pressure), bounds));
    let from = match file.gravity {
        Gravity::Standard => "standard gravity, no [site] in the file",
        Gravity::Stated { .. } => "file",
        Gravity::Computed { .. } => "file, from latitude and elevation",
    };
    rows.push(("gravity", sheet.show(file.gravity.m_s2(), Acceleration), from.to_owned()));
    for outside in &file.outside {
        let value = format!(
            "{} up to {}",
            sheet.show(outside.density_kg_m3.value, Density),
            sheet.show(outside.highest_m.value, Length)
        );
        let relief = match outside.lowest_m {
            Some(lowest) => format!("file, relieves up to {}", sheet.show(lowest.value, Length)),
            None => "file, relieves nothing".to_owned(),
        };
        rows.push(("outside", value, relief));
    }
}

/// The sensor, and what it reads at the assessed level.
fn sensor(sheet: &Sheet<'_>) -> (String, String) {
    let Some(level) = &sheet.file.level else {
        return ("none".to_owned(), "bounds hold no uncertainty of a level".to_owned());
    };
    let (value, sensed) = match level.sensing {
        Sensing::Head { at_m, reference } => {
            let against = match reference.value {
                PressureReference::Atmosphere => "air",
                PressureReference::GasSpace => "gas space",
                PressureReference::Absolute { .. } => "vacuum",
            };
            let at = sheet.show(at_m.value, Length);
            (format!("head at {at}, against {against}"), Pressure)
        }
        Sensing::Innage { zero_m } => {
            (format!("innage from {}", sheet.show(zero_m.value, Length)), Length)
        }
        Sensing::Ullage { reference_m, .. } => {
            (format!("ullage from {}", sheet.show(reference_m.value, Length)), Length)
        }
    };
    let within = sheet.show(level.uncertainty.value, sensed);
    let share = match level.sensing {
        Sensing::Ullage { uncertainty_of_distance, .. } => {
            format!(" and {} of the distance", sheet.show(uncertainty_of_distance.value, Ratio))
        }
        _ => String::new(),
    };
    (value, format!("file, +-{within}{share}; reads {}", reading(sheet, sheet.request.level_m)))
}

/// What a head sensor whose scale is in heights of water would show: its reading is taken for a
/// level where nobody knows the density.
fn in_water(sheet: &Sheet<'_>) -> Option<Row> {
    let level = sheet.file.level.as_ref()?;
    let Sensing::Head { at_m, reference } = &level.sensing else { return None };
    if matches!(reference.value, PressureReference::Absolute { .. }) {
        return None;
    }
    let read_pa = f64::from(sheet.assessment.desk.reading(single(sheet.request.level_m)));
    let shown_m = at_m.value + read_pa / (1000.0 * sheet.file.gravity.m_s2());
    let note = "where its scale is for water".to_owned();
    Some(("  shows", sheet.show(shown_m, Length), note))
}

/// What the sensor gives at a true level: the quantity it senses, and the current of a loop.
pub(crate) fn reading(sheet: &Sheet<'_>, level_m: f64) -> String {
    let Some(level) = &sheet.file.level else { return String::new() };
    let seen = f64::from(sheet.assessment.desk.reading(single(level_m)));
    let (sensed, quantity) = match level.sensing {
        Sensing::Head { .. } => (seen, Pressure),
        Sensing::Innage { zero_m } => (seen - zero_m.value, Length),
        Sensing::Ullage { reference_m, .. } => (reference_m.value - seen, Length),
    };
    let value = sheet.show(sensed, quantity);
    let Some(Signal::CurrentLoop { at_4_ma, at_20_ma }) = level.signal.map(|one| one.value) else {
        return value;
    };
    let current_a = 4e-3 + 16e-3 * (sensed - at_4_ma) / (at_20_ma - at_4_ma);
    let beyond = if current_a > 20e-3 { " (above its range)" } else { "" };
    format!("{value}, {}{beyond}", sheet.show(current_a, Current))
}
