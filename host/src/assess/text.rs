//! The document as text that an engineer can check by hand.

mod filling;
mod limits;
mod margin;
mod parts;
mod plate;
mod secured;
mod state;

use super::Assessment;
use super::notes::{self, FIELD_CHECK, assumed};
use super::request::Request;
use crate::compile::fingerprint;
use crate::energy::battery;
use crate::page::Page;
use crate::tank::TankFile;
use crate::units::{Quantity, UnitSystem, format};

pub(crate) use limits::{down, unrounded, up};
pub(crate) use parts::{capacity_words, describe, thickness_up};
pub(crate) use state::{reading, state_rows};

/// What every section needs.
#[derive(Clone, Copy)]
pub(crate) struct Sheet<'a> {
    pub(crate) file: &'a TankFile,
    pub(crate) request: &'a Request,
    pub(crate) assessment: &'a Assessment,
    pub(crate) units: UnitSystem,
}

impl Sheet<'_> {
    pub(crate) fn show(&self, value: impl Into<f64>, quantity: Quantity) -> String {
        format(value.into(), quantity, self.units)
    }

    /// A load: nothing is nothing in any unit.
    pub(crate) fn load(&self, value: impl Into<f64>, quantity: Quantity) -> String {
        let value = value.into();
        if value == 0.0 { "0".to_owned() } else { self.show(value, quantity) }
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
    state::state(&sheet, &mut page);
    parts::loads(&sheet, &mut page);
    secured::openings(&sheet, &mut page);
    limits::limits(&sheet, &mut page);
    limits::thresholds(&sheet, &mut page);
    margin::set_points(&sheet, &mut page);
    margin::margin(&sheet, &mut page);
    filling::filling(&sheet, &mut page);
    if let Some(energy) = &sheet.assessment.document.energy {
        battery(energy, None, &mut page);
    }
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

fn notes(sheet: &Sheet<'_>, page: &mut Page) {
    let Sheet { file, request, assessment, units } = sheet;
    let mut not_judged = notes::not_judged(file, &assessment.desk, *units);
    not_judged.extend(notes::plates_not_judged(&assessment.document.parts));
    if !not_judged.is_empty() {
        page.blank();
        page.heading("Not judged");
        for one in &not_judged {
            page.paragraph("  - ", &format!("{}: {}", one.name, one.why));
        }
    }
    if !file.conditions.is_empty() {
        page.blank();
        page.heading("Conditions");
        for condition in &file.conditions {
            page.paragraph("  - ", &condition.value);
        }
    }
    let parts = &assessment.document.parts;
    let mut cautions = notes::cautions(file, request, &assessment.desk, parts, *units);
    // Those two have their own place on the page.
    cautions.retain(|one| !one.starts_with("PROVISIONAL") && one != FIELD_CHECK);
    if !cautions.is_empty() {
        page.blank();
        page.heading("Cautions");
        for caution in cautions {
            page.paragraph("  - ", &caution);
        }
    }
    page.blank();
    page.paragraph("", &format!("{FIELD_CHECK}."));
}
