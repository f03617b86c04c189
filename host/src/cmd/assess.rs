//! `strake assess`: the load sheet's numbers on the screen.

use super::quantities::{density, length, pressure, temperature};
use super::tank_file;
use crate::assess::{self, Overrides, Request};
use crate::exit::Exit;
use crate::failure::Failure;
use crate::term::{Format, Term};
use std::path::PathBuf;

/// What `strake assess` is asked.
#[derive(Debug, clap::Args)]
#[command(after_help = "Examples:\n  \
    strake assess day_tank.toml --level \"6.5 m\"\n  \
    strake assess day_tank.toml --density \"1.2 SG\" --units us\n\n\
    Exit status 1: done, and a load's bound is at or above its alarm threshold at that level.")]
pub struct Args {
    /// The tank file
    #[arg(value_name = "TANK")]
    pub tank: PathBuf,
    /// Level above the datum, as "6.5 m"; else the overflow, else the shell top
    #[arg(long, value_parser = length, allow_hyphen_values = true)]
    pub level: Option<f64>,
    /// Density at the file's reference temperature, as "1280 kg/m3" or "1.28 SG"
    #[arg(long, value_parser = density, allow_hyphen_values = true)]
    pub density: Option<f64>,
    /// Temperature of the liquid, as "12 degC"
    #[arg(long, value_parser = temperature, allow_hyphen_values = true)]
    pub temperature: Option<f64>,
    /// Gas pressure above the liquid, gauge, as "2 kPa"
    #[arg(long, value_parser = pressure, allow_hyphen_values = true, value_name = "PRESSURE")]
    pub gas_pressure: Option<f64>,
    /// One of the file's liquids by its name
    #[arg(long, value_name = "NAME")]
    pub product: Option<String>,
}

/// Assesses the tank.
///
/// # Errors
/// When the file is invalid, the state impossible, or the result cannot be written.
pub fn run(args: &Args, term: &mut Term) -> Result<Exit, Failure> {
    let file = tank_file::read(&args.tank)?;
    let overrides = Overrides {
        level_m: args.level,
        density_kg_m3: args.density,
        temperature_c: args.temperature,
        gas_pa: args.gas_pressure,
        product: args.product.clone(),
    };
    let request = Request::new(&file, overrides)
        .map_err(|error| Failure::new(Exit::Usage, "state", error.message, error.hint))?;
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
