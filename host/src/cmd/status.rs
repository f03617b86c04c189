//! `strake status`: what the device says now.

use super::device::{PortArgs, connect};
use super::tank_file;
use crate::energy::{Energy, estimate};
use crate::exit::Exit;
use crate::failure::Failure;
use crate::status::{Document, EnergyRow, look, render};
use crate::tank::TankFile;
use crate::term::{Format, Term};
use crate::utc;
use std::path::{Path, PathBuf};

/// What `strake status` is asked.
#[derive(Debug, clap::Args)]
#[command(after_help = "Examples:\n  \
    strake status\n  \
    strake status --port /dev/ttyUSB0 --format json\n  \
    strake status --tank day_tank.toml\n\n\
    Exit status 1: done, and an alarm stands: a load's bound is above its alarm threshold.")]
pub struct Args {
    /// Which device.
    #[command(flatten)]
    pub device: PortArgs,
    /// The tank file the plan was sealed from: adds how long the cell lasts, an estimate
    #[arg(long, value_name = "FILE")]
    pub tank: Option<PathBuf>,
}

/// Asks the device.
///
/// # Errors
/// When the tank file is invalid or says nothing of the cell, there is no device, or the result
/// cannot be written.
pub fn run(args: &Args, term: &mut Term) -> Result<Exit, Failure> {
    let estimated = args.tank.as_deref().map(estimated).transpose()?;
    let mut client = connect(&args.device, term)?;
    let seen = look(&mut client, utc::now_s)?;
    let mut document = Document::of(&seen);
    document.energy = estimated.map(|(file, energy)| EnergyRow::of(&file, energy, &seen));
    match term.settings().format {
        Format::Json => term.document(&document)?,
        Format::Text => {
            let text = render(&document, term.settings().units, term.colour_out());
            term.result(&text)?;
        }
    }
    Ok(if document.above_alarm { Exit::AboveAlarm } else { Exit::Done })
}

/// The tank file at a path with what it says of the cell.
fn estimated(path: &Path) -> Result<(TankFile, Energy), Failure> {
    let file = tank_file::read(path)?;
    let energy = estimate(&file).ok_or_else(|| {
        let message = format!("{} says nothing of the cell", path.display());
        let hint = "give the file its sections [power] and [logging], or leave out --tank";
        Failure::new(Exit::InvalidInput, "no-power", message, hint)
    })?;
    Ok((file, energy))
}
