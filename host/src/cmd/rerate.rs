//! `strake rerate`: the inverse questions for another liquid.

use super::quantities::{density, length};
use super::state::{StateArgs, refused};
use super::tank_file;
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
#[command(
    mut_arg("level", |level| level.help(
        "Level for densities and thicknesses; else the maximum of service, the overflow, the shell \
         top"
    )),
    mut_arg("density", |density| density.help(
        "Density of the new liquid at the reference temperature, as \"1320 kg/m3\" or \"50 Baume \
         heavy\""
    ))
)]
pub struct Args {
    /// The tank file
    #[arg(value_name = "TANK")]
    pub tank: PathBuf,
    /// The state to calculate.
    #[command(flatten)]
    pub state: StateArgs,
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
    let tested = args
        .tested_level
        .zip(args.tested_density)
        .map(|(level_m, density_kg_m3)| Tested { level_m, density_kg_m3 });
    let question = Question::new(&file, args.state.overrides(), tested).map_err(refused)?;
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
