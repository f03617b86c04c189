//! The calculation to check and to file: one HTML page that prints.
//!
//! Every figure is one of [`crate::assess`]; beside it stands the formula with numbers put in, the
//! `W` and `M` that it was made of, and what a [second method](self) gives for the same load. The
//! sheet is worked out as blocks of texts, tables and drawings and only then written as HTML, so
//! that nothing a tank file says can become markup. The same input gives the same bytes; a date
//! stands in it only where it was given.

mod budget;
mod closing;
mod diagram;
mod drawing;
mod front;
mod html;
mod inputs;
mod measure;
mod model;
mod parts;
mod pressure;
mod second;
mod thresholds;
mod write;

use crate::assess::{self, Assessment, FIELD_CHECK, Request, text};
use crate::compile::fingerprint;
use crate::tank::{Findings, Span, TankFile};
use crate::units::{Quantity, UnitSystem};
use measure::Measure;
use model::Block;
use second::Compared;

/// What is asked of a sheet.
#[derive(Clone, Copy, Debug)]
pub struct Options<'a> {
    /// Units of the figures.
    pub units: UnitSystem,
    /// What stands in the line of the date; left blank without it.
    pub date: Option<&'a str>,
}

/// A sheet, and how its two methods compare.
#[derive(Clone, Debug)]
pub struct Sheet {
    /// The page.
    pub html: String,
    /// Fingerprint of the tank file.
    pub fingerprint: u64,
    /// Figures that were worked out by both methods.
    pub compared: usize,
    /// Largest difference, as a share of what is allowed for that load: at most one.
    pub largest_share: f64,
    /// What the sheet was made of.
    pub assessment: Assessment,
}

impl Sheet {
    /// Whether the two methods agree on every load.
    #[must_use]
    pub fn agrees(&self) -> bool {
        self.largest_share <= 1.0
    }
}

/// What every section needs.
struct Context<'a> {
    file: &'a TankFile,
    request: &'a Request,
    assessment: &'a Assessment,
    compared: Vec<Vec<Compared>>,
    units: UnitSystem,
    date: Option<&'a str>,
}

impl Context<'_> {
    /// As the other commands show it.
    fn show(&self, value: impl Into<f64>, quantity: Quantity) -> String {
        self.text().load(value, quantity)
    }

    /// With seven digits, in units that fit each other.
    fn exact(&self, value: impl Into<f64>, measure: Measure) -> String {
        measure.show(value.into(), self.units)
    }

    /// Seven digits without the unit.
    fn number(&self, value: impl Into<f64>, measure: Measure) -> String {
        measure.number(value.into(), self.units)
    }

    const fn unit(&self, measure: Measure) -> &'static str {
        measure.unit(self.units)
    }

    /// The line of the tank file on which a piece of it begins.
    fn line(&self, span: Span) -> usize {
        line_of(self.file.text(), span.start)
    }

    /// What the reader must know, but what has a place of its own on every sheet.
    fn cautions(&self) -> Vec<String> {
        let parts = &self.assessment.document.parts;
        let desk = &self.assessment.desk;
        let mut found = assess::cautions(self.file, self.request, desk, parts, self.units);
        found.retain(|one| !one.starts_with("PROVISIONAL") && one != FIELD_CHECK);
        found
    }

    /// What the text output of `assess` is made with.
    const fn text(&self) -> text::Sheet<'_> {
        text::Sheet {
            file: self.file,
            request: self.request,
            assessment: self.assessment,
            units: self.units,
        }
    }
}

/// The line, counted from one, that a byte stands on.
fn line_of(text: &str, byte: usize) -> usize {
    text.bytes().take(byte).filter(|one| *one == b'\n').count() + 1
}

/// The sheet of a tank in one state.
///
/// # Errors
/// [`Findings`] when the file holds what a plan cannot.
pub fn sheet(file: &TankFile, request: &Request, options: Options<'_>) -> Result<Sheet, Findings> {
    let assessment = assess::assess(file, request)?;
    let compared = second::compare(file, request, &assessment);
    let (count, largest_share) = second::worst(&compared);
    let Options { units, date } = options;
    let context = Context { file, request, assessment: &assessment, compared, units, date };
    let fingerprint = fingerprint(file.text().as_bytes());
    let html = render(&context, fingerprint, (count, largest_share));
    Ok(Sheet { html, fingerprint, compared: count, largest_share, assessment })
}

fn render(context: &Context<'_>, fingerprint: u64, agreement: (usize, f64)) -> String {
    let mut blocks: Vec<Block> = Vec::new();
    front::identity(context, fingerprint, &mut blocks);
    front::provisional(context, &mut blocks);
    front::disagreement(context, &mut blocks);
    front::result(context, &mut blocks);
    front::scope(&mut blocks);
    let sections: [fn(&Context<'_>, &mut Vec<Block>); 8] = [
        inputs::state,
        drawing::section,
        inputs::section,
        pressure::section,
        parts::section,
        thresholds::section,
        budget::section,
        closing::conditions,
    ];
    for section in sections {
        section(context, &mut blocks);
    }
    closing::limits_of_the_method(context, agreement, &mut blocks);
    closing::signatures(&mut blocks);
    let title = format!("{}: calculation of loads and limit levels", context.file.name.value);
    // It has one line on every printed page.
    let foot = format!("{fingerprint:016x} - {FIELD_CHECK}");
    write::page(&title, &write::Foot { left: &foot }, &blocks)
}

#[cfg(test)]
mod tests;
