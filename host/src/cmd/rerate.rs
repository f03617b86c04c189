//! `strake rerate`: the inverse questions for another liquid.

use super::quantities::{density, length, pressure, temperature};
use super::tank_file;
use crate::assess::Overrides;
use crate::exit::Exit;
use crate::failure::Failure;
use crate::rerate::{self, Question, Tested};
use crate::term::{Format, Term};
use std::path::PathBuf;

/// What `strake rerate` is asked.
#[derive(Debug, clap::Args)]
#[command(after_help = "Examples:\n  \
    strake rerate day_tank.toml --density \"1.32 SG\"\n  \
    strake rerate day_tank.toml --product \"rinse water\" --level \"6.5 m\"\n  \
    strake rerate day_tank.toml --density \"11 lb/US gal\" --units us \\\n    \
    --tested-level \"24 ft\" --tested-density \"62.4 lb/ft3\"")]
pub struct Args {
    /// The tank file
    #[arg(value_name = "TANK")]
    pub tank: PathBuf,
    /// Density of the new liquid at the reference temperature, as "1320 kg/m3" or "50 Baume heavy"
    #[arg(long, value_parser = density, allow_hyphen_values = true)]
    pub density: Option<f64>,
    /// Temperature of the new liquid, as "12 degC"
    #[arg(long, value_parser = temperature, allow_hyphen_values = true)]
    pub temperature: Option<f64>,
    /// Gas pressure above the new liquid, gauge, as "2 kPa"
    #[arg(long, value_parser = pressure, allow_hyphen_values = true, value_name = "PRESSURE")]
    pub gas_pressure: Option<f64>,
    /// One of the file's liquids by its name
    #[arg(long, value_name = "NAME")]
    pub product: Option<String>,
    /// Level for densities and thicknesses; else the maximum of service, the overflow, the shell
    /// top
    #[arg(long, value_parser = length, allow_hyphen_values = true)]
    pub level: Option<f64>,
    /// Level of a water test, to show how far it covers the new liquid
    #[arg(long, value_parser = length, requires = "tested_density", value_name = "LEVEL")]
    pub tested_level: Option<f64>,
    /// Density of the water of that test
    #[arg(long, value_parser = density, requires = "tested_level", value_name = "DENSITY")]
    pub tested_density: Option<f64>,
}

/// Answers.
///
/// # Errors
/// When the file is invalid, a state impossible, or the result cannot be written.
pub fn run(args: &Args, term: &mut Term) -> Result<Exit, Failure> {
    let file = tank_file::read(&args.tank)?;
    let overrides = Overrides {
        level_m: args.level,
        density_kg_m3: args.density,
        temperature_c: args.temperature,
        gas_pa: args.gas_pressure,
        product: args.product.clone(),
    };
    let tested = args
        .tested_level
        .zip(args.tested_density)
        .map(|(level_m, density_kg_m3)| Tested { level_m, density_kg_m3 });
    let question = Question::new(&file, overrides, tested)
        .map_err(|error| Failure::new(Exit::Usage, "state", error.message, error.hint))?;
    let rerating = rerate::rerate(&file, &question)?;
    match term.settings().format {
        Format::Json => term.document(&rerating.document)?,
        Format::Text => {
            let (units, coloured) = (term.settings().units, term.colour_out());
            term.result(&rerate::text::render(&file, &question, &rerating, units, coloured))?;
        }
    }
    Ok(Exit::Done)
}
