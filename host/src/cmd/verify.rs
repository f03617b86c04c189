//! `strake verify`: is a journal whole, and does it hold what it says about itself?

use super::replay::not_read;
use crate::exit::Exit;
use crate::failure::Failure;
use crate::journal_file::JournalFile;
use crate::term::{Format, Term};
use crate::verify::{self, Document, Report, text};
use std::path::PathBuf;

/// What `strake verify` is asked.
#[derive(Debug, clap::Args)]
#[command(after_help = "Examples:\n  \
    strake verify pump_house_7.strake-journal\n  \
    strake verify pump_house_7.strake-journal --format json\n\n\
    It checks numbers, check sums, fingerprints and states against each other and judges no load;\n\
    strake replay does that. Exit status 6: damaged or incomplete; 7: it contradicts itself.")]
pub struct Args {
    /// The journal file that `strake collect` or `strake trial` wrote
    #[arg(value_name = "JOURNAL")]
    pub journal: PathBuf,
}

/// Verifies the journal.
///
/// # Errors
/// When the file cannot be read or is no journal, or the result cannot be written.
pub fn run(args: &Args, term: &mut Term) -> Result<Exit, Failure> {
    let mut file = JournalFile::open(&args.journal).map_err(|error| not_read(&error))?;
    let report = verify::verify(&mut file).map_err(|error| not_read(&error))?;
    match term.settings().format {
        Format::Json => term.document(&Document::of(&report))?,
        Format::Text => {
            let coloured = term.colour_out();
            term.result(&text::render(&report, coloured))?;
        }
    }
    Ok(verdict(&report))
}

fn verdict(report: &Report) -> Exit {
    if !report.contradictions.is_empty() {
        Exit::NotIdentical
    } else if report.sound() {
        Exit::Done
    } else {
        Exit::Partial
    }
}
