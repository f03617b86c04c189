//! The subcommands. Each file has `Args`, what clap reads, and `run`, which does it: results go to
//! the terminal, a failure comes back with its exit status.

pub mod acknowledge;
pub mod assess;
pub mod collect;
pub mod commission;
mod device;
pub mod ports;
mod quantities;
pub mod replay;
pub mod rerate;
pub mod schema;
pub mod seal;
pub mod sheet;
mod state;
pub mod status;
mod tank_file;
pub mod trial;
pub mod verify;

pub use device::PortArgs;

use crate::exit::Exit;
use crate::failure::Failure;
use crate::term::Term;

/// What to do.
#[derive(Debug, clap::Subcommand)]
pub enum Command {
    /// Acknowledge what sounds, and reset latches whose condition has gone
    Acknowledge(acknowledge::Args),
    /// Loads, utilisation and limit level of every part of a tank
    Assess(assess::Args),
    /// Take the journal of a device home
    Collect(collect::Args),
    /// Put a sealed plan into a device and set its clock
    Commission(commission::Args),
    /// The serial ports, and which device answers on each
    Ports(ports::Args),
    /// Recompute a journal and compare it with what the device decided
    Replay(replay::Args),
    /// The inverse questions for another liquid: limit level, density, thickness, remaining life
    Rerate(rerate::Args),
    /// The JSON Schema of the tank file, for editors
    Schema(schema::Args),
    /// Compile a tank file into the plan that a device loads
    Seal(seal::Args),
    /// The calculation to check and file, as one HTML page that prints
    Sheet(sheet::Args),
    /// What a device says now: its health, the level, the parts, alarms and faults
    Status(status::Args),
    /// The whole job on a simulated device
    Trial(trial::Args),
    /// Whether a journal is whole and holds what it says about itself
    Verify(verify::Args),
}

impl Command {
    /// Does it.
    ///
    /// # Errors
    /// Why it could not be done.
    pub fn run(&self, term: &mut Term) -> Result<Exit, Failure> {
        match self {
            Self::Acknowledge(args) => acknowledge::run(args, term),
            Self::Assess(args) => assess::run(args, term),
            Self::Collect(args) => collect::run(args, term),
            Self::Commission(args) => commission::run(args, term),
            Self::Ports(args) => ports::run(args, term),
            Self::Replay(args) => replay::run(args, term),
            Self::Rerate(args) => rerate::run(args, term),
            Self::Schema(args) => schema::run(args, term),
            Self::Seal(args) => seal::run(args, term),
            Self::Sheet(args) => sheet::run(args, term),
            Self::Status(args) => status::run(args, term),
            Self::Trial(args) => trial::run(args, term),
            Self::Verify(args) => verify::run(args, term),
        }
    }
}
