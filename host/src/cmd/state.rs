//! The state to calculate, as several commands ask for it.

use super::quantities::{density, length, pressure, temperature};
use crate::assess::{Overrides, RequestError};
use crate::exit::Exit;
use crate::failure::Failure;

/// Numbers beside the file.
#[derive(Debug, clap::Args)]
pub struct StateArgs {
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

impl StateArgs {
    /// What differs from the file.
    pub(super) fn overrides(&self) -> Overrides {
        Overrides {
            level_m: self.level,
            density_kg_m3: self.density,
            temperature_c: self.temperature,
            gas_pa: self.gas_pressure,
            product: self.product.clone(),
        }
    }
}

/// A state that cannot be calculated is a wrong use.
pub(super) fn refused(error: RequestError) -> Failure {
    Failure::new(Exit::Usage, "state", error.message, error.hint)
}
