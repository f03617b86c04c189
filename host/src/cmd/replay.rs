//! `strake replay`: a journal through the same arithmetic, compared with the device.

use crate::exit::Exit;
use crate::failure::Failure;
use crate::journal_file::{JournalFile, JournalFileError};
use crate::replay::{self, Document};
use crate::term::{Format, Term};
use std::path::PathBuf;

/// What `strake replay` is asked.
#[derive(Debug, clap::Args)]
#[command(after_help = "Examples:\n  \
    strake replay pump_house_7.strake-journal\n  \
    strake replay pump_house_7.strake-journal --format json --fail-on alarm\n\n\
    Exit status 7: not identical; 6: damaged places or missing plans, the rest used.")]
pub struct Args {
    /// The journal file that `strake collect` or `strake trial` wrote
    #[arg(value_name = "JOURNAL")]
    pub journal: PathBuf,
    /// Make an alarm in the journal a failure (status 1)
    #[arg(long, value_enum, value_name = "WHAT")]
    pub fail_on: Option<FailOn>,
}

/// What of a journal's content counts as a failure.
#[derive(Clone, Copy, Debug, PartialEq, Eq, clap::ValueEnum)]
pub enum FailOn {
    /// Any warning or alarm of a part.
    Alarm,
}

/// Replays the journal.
///
/// # Errors
/// When the file cannot be read or is no journal, or the result cannot be written.
pub fn run(args: &Args, term: &mut Term) -> Result<Exit, Failure> {
    let mut file = JournalFile::open(&args.journal).map_err(|error| not_read(&error))?;
    let replay = replay::replay(&mut file).map_err(|error| not_read(&error))?;
    match term.settings().format {
        Format::Json => term.document(&Document::of(&replay))?,
        Format::Text => {
            let (units, coloured) = (term.settings().units, term.colour_out());
            term.result(&replay::text::render(&replay, units, coloured))?;
        }
    }
    let alarmed = replay.engine.summary.alarms.iter().any(|alarm| alarm.kind != "fault");
    Ok(match verdict(&replay) {
        Exit::Done if alarmed && args.fail_on == Some(FailOn::Alarm) => Exit::AboveAlarm,
        exit => exit,
    })
}

/// The exit status of a replay: not identical goes before damage.
pub(super) fn verdict(replay: &replay::Replay) -> Exit {
    let partial = !replay.damage.is_empty() || !replay.missing_plans.is_empty();
    if !replay.engine.verdict.identical() {
        Exit::NotIdentical
    } else if partial {
        Exit::Partial
    } else {
        Exit::Done
    }
}

pub(super) fn not_read(error: &JournalFileError) -> Failure {
    let (exit, code, hint) = match error {
        JournalFileError::Exists { .. } => {
            (Exit::Refused, "file-exists", "give another directory, or --force to replace it")
        }
        _ => (Exit::InvalidInput, "journal", "give a file that strake collect or trial wrote"),
    };
    Failure::new(exit, code, error.to_string(), hint)
}
