//! Reading the tank file that a command names.

use crate::exit::Exit;
use crate::failure::Failure;
use crate::tank::{self, TankFile};
use std::path::Path;

/// The tank file at a path.
pub(super) fn read(path: &Path) -> Result<TankFile, Failure> {
    let name = path.display().to_string();
    let bytes = std::fs::read(path).map_err(|error| {
        let message = format!("cannot read {name}: {error}");
        let hint = "give the path of a tank file, as configs/brine_day_tank.toml";
        Failure::new(Exit::InvalidInput, "cannot-read", message, hint)
    })?;
    Ok(tank::parse(&name, &bytes)?)
}
