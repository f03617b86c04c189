//! `strake sheet`: the calculation to check and file.

use super::state::{StateArgs, refused};
use super::tank_file;
use crate::assess::{FIELD_CHECK, Request, assumed};
use crate::exit::Exit;
use crate::failure::Failure;
use crate::output_file;
use crate::page::{Page, counted};
use crate::sheet::{self, Options, Sheet};
use crate::tank::TankFile;
use crate::term::{Format, Term};
use serde::Serialize;
use std::path::PathBuf;

/// What `strake sheet` is asked.
#[derive(Debug, clap::Args)]
#[command(after_help = "Examples:\n  \
    strake sheet day_tank.toml -o day_tank.html\n  \
    strake sheet day_tank.toml -o day_tank.html --level \"7.2 m\" --date 2026-11-30\n  \
    strake sheet day_tank.toml -o day_tank.html --units us --force\n\n\
    One HTML page that needs nothing else; print it from a browser, on A4 or Letter.\n\
    Exit status 7: the two methods do not agree on a load; the sheet says which.")]
pub struct Args {
    /// The tank file
    #[arg(value_name = "TANK")]
    pub tank: PathBuf,
    /// The HTML file to write
    #[arg(short, long, value_name = "FILE")]
    pub output: PathBuf,
    /// The state to calculate.
    #[command(flatten)]
    pub state: StateArgs,
    /// What stands in the line of the date; left blank without it
    #[arg(long, value_name = "TEXT")]
    pub date: Option<String>,
    /// Replace the file if it exists
    #[arg(long)]
    pub force: bool,
}

/// The document `strake.sheet/1`.
#[derive(Debug, Serialize)]
struct Document {
    schema: &'static str,
    tank: String,
    file: String,
    fingerprint: String,
    provisional: Vec<String>,
    governing: Option<String>,
    loads_compared: usize,
    /// Share of what is allowed for that load.
    largest_difference: f64,
    agrees: bool,
    cautions: Vec<String>,
}

/// Writes the sheet.
///
/// # Errors
/// When the file is invalid, the state impossible, when the output exists, or when it cannot be
/// written.
pub fn run(args: &Args, term: &mut Term) -> Result<Exit, Failure> {
    let file = tank_file::read(&args.tank)?;
    let request = Request::new(&file, args.state.overrides()).map_err(refused)?;
    let options = Options { units: term.settings().units, date: args.date.as_deref() };
    let sheet = sheet::sheet(&file, &request, options)?;
    output_file::write(&args.output, sheet.html.as_bytes(), args.force)?;
    let document = document(args, &file, &sheet);
    match term.settings().format {
        Format::Json => term.document(&document)?,
        Format::Text => term.result(&text(&document, term))?,
    }
    Ok(if sheet.agrees() { Exit::Done } else { Exit::NotIdentical })
}

fn document(args: &Args, file: &TankFile, sheet: &Sheet) -> Document {
    Document {
        schema: "strake.sheet/1",
        tank: file.name.value.clone(),
        file: args.output.display().to_string(),
        fingerprint: format!("{:016x}", sheet.fingerprint),
        provisional: assumed(file),
        governing: sheet.assessment.document.governing.clone(),
        loads_compared: sheet.compared,
        largest_difference: sheet.largest_share,
        agrees: sheet.agrees(),
        cautions: vec![FIELD_CHECK.to_owned()],
    }
}

fn text(document: &Document, term: &Term) -> String {
    let mut page = Page::new(term.colour_out());
    page.heading(&format!("{}: sheet written to {}", document.tank, document.file));
    if !document.provisional.is_empty() {
        page.heading("PROVISIONAL: these capacities are assumed");
        for one in &document.provisional {
            page.paragraph("  - ", one);
        }
    }
    page.line(&format!("  tank file  fingerprint {}", document.fingerprint));
    let count = u64::try_from(document.loads_compared).unwrap_or(u64::MAX);
    let figures = counted(count, "figure");
    if document.agrees {
        page.line(&format!(
            "  checked    {figures} by a second method, the largest difference is {:.2} of what is \
             allowed",
            document.largest_difference
        ));
    } else {
        page.heading("THE TWO METHODS DO NOT AGREE: no figure of this sheet may be used");
    }
    for caution in &document.cautions {
        page.paragraph("", &format!("{caution}."));
    }
    page.into_text()
}
