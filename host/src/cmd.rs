//! The subcommands. Each file has `Args`, what clap reads, and `run`, which does it: results go to
//! the terminal, a failure comes back with its exit status.

pub mod assess;
pub mod replay;
pub mod seal;
mod tank_file;
pub mod trial;

use crate::exit::Exit;
use crate::failure::Failure;
use crate::term::Term;

/// What to do.
#[derive(Debug, clap::Subcommand)]
pub enum Command {
    /// Loads, utilisation and limit level of every part of a tank
    Assess(assess::Args),
    /// Recompute a journal and compare it with what the device decided
    Replay(replay::Args),
    /// Compile a tank file into the plan that a device loads
    Seal(seal::Args),
    /// The whole job on a simulated device
    Trial(trial::Args),
}

impl Command {
    /// Does it.
    ///
    /// # Errors
    /// Why it could not be done.
    pub fn run(&self, term: &mut Term) -> Result<Exit, Failure> {
        match self {
            Self::Assess(args) => assess::run(args, term),
            Self::Replay(args) => replay::run(args, term),
            Self::Seal(args) => seal::run(args, term),
            Self::Trial(args) => trial::run(args, term),
        }
    }
}
