//! The document as text that an engineer can check by hand.

mod limits;
mod parts;

use super::Assessment;
use super::notes::{FIELD_CHECK, assumed};
use super::request::{Request, Source};
use crate::compile::fingerprint;
use crate::page::Page;
use crate::tank::{Gas, Gravity, PressureReference, Sensing, Signal, TankFile};
use crate::units::Quantity::{Acceleration, Current, Density, Length, Pressure, Temperature};
use crate::units::{Quantity, UnitSystem, format};

/// What every section needs.
struct Sheet<'a> {
    file: &'a TankFile,
    request: &'a Request,
    assessment: &'a Assessment,
    units: UnitSystem,
}

impl Sheet<'_> {
    fn show(&self, value: impl Into<f64>, quantity: Quantity) -> String {
        format(value.into(), quantity, self.units)
    }
}

/// The whole text.
#[must_use]
pub fn render(
    file: &TankFile,
    request: &Request,
    assessment: &Assessment,
    units: UnitSystem,
    coloured: bool,
) -> String {
    let sheet = Sheet { file, request, assessment, units };
    let mut page = Page::new(coloured);
    identity(&sheet, &mut page);
    provisional(&sheet, &mut page);
    state(&sheet, &mut page);
    parts::loads(&sheet, &mut page);
    limits::limits(&sheet, &mut page);
    limits::thresholds(&sheet, &mut page);
    notes(&sheet, &mut page);
    page.into_text()
}

fn identity(sheet: &Sheet<'_>, page: &mut Page) {
    let file = sheet.file;
    page.heading(&format!("{}: calculated loads and limit levels", file.name.value));
    let hash = fingerprint(file.text().as_bytes());
    let version = env!("CARGO_PKG_VERSION");
    page.paragraph("", &format!("{}, fingerprint {hash:016x}; strake {version}", file.path()));
}

fn provisional(sheet: &Sheet<'_>, page: &mut Page) {
    let assumed = assumed(sheet.file);
    if assumed.is_empty() {
        return;
    }
    page.blank();
    page.heading("PROVISIONAL: these capacities are assumed");
    for one in assumed {
        page.paragraph("  - ", &one);
    }
}

fn state(sheet: &Sheet<'_>, page: &mut Page) {
    let Sheet { file, request, .. } = sheet;
    let contents = &request.contents;
    page.blank();
    page.heading("State");
    let mut row = |label: &str, value: String, note: String| {
        let first = format!("  {label:<10}{value:<42}");
        page.paragraph(&format!("{first}  "), &note);
    };
    let level_source = match request.level_source {
        Source::File | Source::Override => "command line".to_owned(),
        Source::Overflow => "overflow of the file, no --level given".to_owned(),
        Source::ShellTop => "shell top of the file, no --level given".to_owned(),
    };
    row("level", sheet.show(request.level_m, Length), level_source);
    let overrides = &request.overrides;
    let source = |overridden: bool| if overridden { "command line" } else { "file" };
    let liquid = &contents.liquid;
    let name = source(overrides.product.is_some()).to_owned();
    row("liquid", liquid.name.value.clone(), name);
    let (low, high) = contents.band_kg_m3();
    let density = format!(
        "{} at {}",
        sheet.show(contents.density_kg_m3(), Density),
        sheet.show(contents.temperature_c, Temperature)
    );
    let of_density = source(overrides.density_kg_m3.is_some());
    let of_temperature = source(overrides.temperature_c.is_some());
    let from = if of_density == of_temperature {
        of_density.to_owned()
    } else {
        format!("{of_density}, temperature: {of_temperature}")
    };
    row("density", density, from);
    let band = format!("{} to {}", sheet.show(low, Density), sheet.show(high, Density));
    let range = format!(
        "{} to {}, +-{}",
        sheet.show(liquid.coldest_c.value, Temperature),
        sheet.show(liquid.hottest_c.value, Temperature),
        sheet.show(liquid.uncertainty.value, Quantity::Ratio)
    );
    row("  band", band, range);
    for layer in &file.below {
        let value = format!(
            "{}, {} up to {}",
            layer.liquid.name.value,
            sheet.show(layer.liquid.density_kg_m3.value, Density),
            sheet.show(layer.surface_m.value, Length)
        );
        let within = sheet.show(layer.surface_uncertainty_m.value, Length);
        row("  below", value, format!("file, surface +-{within}"));
    }
    let [lowest, gas, highest] = contents.gas_pa;
    let vented = matches!(file.gas, Gas::Vented) && overrides.gas_pa.is_none();
    let bounds = if vented {
        "file, vented".to_owned()
    } else {
        let from = source(overrides.gas_pa.is_some());
        format!("{from}, {} to {}", sheet.show(lowest, Pressure), sheet.show(highest, Pressure))
    };
    row("gas", sheet.show(gas, Pressure), bounds);
    let from = match file.gravity {
        Gravity::Standard => "standard gravity, no [site] in the file",
        Gravity::Stated { .. } => "file",
        Gravity::Computed { .. } => "file, from latitude and elevation",
    };
    row("gravity", sheet.show(file.gravity.m_s2(), Acceleration), from.to_owned());
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
        row("outside", value, relief);
    }
    let (value, note) = sensor(sheet);
    row("sensor", value, note);
    let datum = "inside bottom at the shell; levels are heights above it";
    row("datum", datum.to_owned(), String::new());
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
        Sensing::Ullage { uncertainty_of_distance, .. } => format!(
            " and {} of the distance",
            sheet.show(uncertainty_of_distance.value, Quantity::Ratio)
        ),
        _ => String::new(),
    };
    (value, format!("file, +-{within}{share}; reads {}", reading(sheet, sheet.request.level_m)))
}

/// What the sensor gives at a true level: the quantity it senses, and the current of a loop.
fn reading(sheet: &Sheet<'_>, level_m: f64) -> String {
    let Some(level) = &sheet.file.level else { return String::new() };
    let seen = f64::from(sheet.assessment.desk.reading(super::part::single(level_m)));
    let (sensed, quantity) = match level.sensing {
        Sensing::Head { .. } => (seen, Pressure),
        Sensing::Innage { zero_m } => (seen - zero_m.value, Length),
        Sensing::Ullage { reference_m, .. } => (reference_m.value - seen, Length),
    };
    let mut text = sheet.show(sensed, quantity);
    if let Some(Signal::CurrentLoop { at_4_ma, at_20_ma }) = level.signal.map(|one| one.value) {
        let current_a = 4e-3 + 16e-3 * (sensed - at_4_ma) / (at_20_ma - at_4_ma);
        text.push_str(&format!(", {}", sheet.show(current_a, Current)));
        if current_a > 20e-3 {
            text.push_str(" (above its range)");
        }
    }
    text
}

fn notes(sheet: &Sheet<'_>, page: &mut Page) {
    let document = &sheet.assessment.document;
    if !document.not_judged.is_empty() {
        page.blank();
        page.heading("Not judged");
        for one in &document.not_judged {
            page.paragraph("  - ", &format!("{}: {}", one.name, one.why));
        }
    }
    if !sheet.file.conditions.is_empty() {
        page.blank();
        page.heading("Conditions");
        for condition in &sheet.file.conditions {
            page.paragraph("  - ", &condition.value);
        }
    }
    let own = |caution: &&String| !caution.starts_with("PROVISIONAL") && *caution != FIELD_CHECK;
    let cautions: Vec<&String> = document.cautions.iter().filter(own).collect();
    if !cautions.is_empty() {
        page.blank();
        page.heading("Cautions");
        for caution in cautions {
            page.paragraph("  - ", caution);
        }
    }
    page.blank();
    page.paragraph("", &format!("{FIELD_CHECK}."));
}
