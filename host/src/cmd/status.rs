//! `strake status`: what the device says now.

use super::device::{PortArgs, connect};
use crate::exit::Exit;
use crate::failure::Failure;
use crate::status::{Document, look, render};
use crate::term::{Format, Term};
use crate::utc;

/// What `strake status` is asked.
#[derive(Debug, clap::Args)]
#[command(after_help = "Examples:\n  \
    strake status\n  \
    strake status --port /dev/ttyUSB0 --format json\n\n\
    Exit status 1: done, and an alarm stands: a load's bound is above its alarm threshold.")]
pub struct Args {
    /// Which device.
    #[command(flatten)]
    pub device: PortArgs,
}

/// Asks the device.
///
/// # Errors
/// When there is no device, or the result cannot be written.
pub fn run(args: &Args, term: &mut Term) -> Result<Exit, Failure> {
    let mut client = connect(&args.device, term)?;
    let seen = look(&mut client, utc::now_s)?;
    let document = Document::of(&seen);
    match term.settings().format {
        Format::Json => term.document(&document)?,
        Format::Text => {
            let text = render(&document, term.settings().units, term.colour_out());
            term.result(&text)?;
        }
    }
    Ok(if document.above_alarm { Exit::AboveAlarm } else { Exit::Done })
}
