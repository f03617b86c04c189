//! `strake assess`: the load sheet's numbers on the screen.

use super::quantities::flow;
use super::state::{StateArgs, refused};
use super::tank_file;
use crate::assess::{self, Request};
use crate::exit::Exit;
use crate::failure::Failure;
use crate::term::{Format, Term};
use std::path::PathBuf;

/// What `strake assess` is asked.
#[derive(Debug, clap::Args)]
#[command(after_help = "Examples:\n  \
    strake assess day_tank.toml --level \"6.5 m\"\n  \
    strake assess day_tank.toml --density \"1.2 SG\" --units us\n  \
    strake assess day_tank.toml --level \"6.5 m\" --inflow \"20 m3/h\"\n\n\
    Exit status 1: done, and a load's bound is at or above its alarm threshold at that level.")]
pub struct Args {
    /// The tank file
    #[arg(value_name = "TANK")]
    pub tank: PathBuf,
    /// The state to calculate.
    #[command(flatten)]
    pub state: StateArgs,
    /// Net inflow, as "20 m3/h": how long it takes from that level to the limits
    #[arg(long, value_parser = flow, allow_hyphen_values = true, value_name = "FLOW")]
    pub inflow: Option<f64>,
}

/// Assesses the tank.
///
/// # Errors
/// When the file is invalid, the state impossible, or the result cannot be written.
pub fn run(args: &Args, term: &mut Term) -> Result<Exit, Failure> {
    let file = tank_file::read(&args.tank)?;
    let request = Request::new(&file, args.state.overrides())
        .and_then(|request| request.with_inflow(&file, args.inflow))
        .map_err(refused)?;
    let assessment = assess::assess(&file, &request)?;
    match term.settings().format {
        Format::Json => term.document(&assessment.document)?,
        Format::Text => {
            let (units, coloured) = (term.settings().units, term.colour_out());
            let text = assess::text::render(&file, &request, &assessment, units, coloured);
            term.result(&text)?;
        }
    }
    Ok(if assessment.above_alarm { Exit::AboveAlarm } else { Exit::Done })
}
