//! `strake schema`: the JSON Schema of the tank file.

use crate::exit::Exit;
use crate::failure::Failure;
use crate::tank::schema;
use crate::term::Term;

/// What `strake schema` is asked.
#[derive(Debug, clap::Args)]
#[command(after_help = "Examples:\n  \
    strake schema > tank.schema.json\n\n\
    An editor that knows JSON Schema, draft 2020-12, then completes and checks the keys of a\n\
    tank file. It sees keys, words and whether a unit stands; units, geometry and what two parts\n\
    say of each other only strake checks.")]
pub struct Args {}

/// Prints the schema.
///
/// # Errors
/// When the result cannot be written.
pub fn run(_: &Args, term: &mut Term) -> Result<Exit, Failure> {
    term.document(&schema::document())?;
    Ok(Exit::Done)
}
