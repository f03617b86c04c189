//! The tank file, version 1: what an engineer writes about a tank, read into values.
//!
//! [`parse`] reads TOML, checks every key, unit and bound, then what the parts say about each
//! other, and returns either a [`TankFile`] or all [`Findings`] at once. Nothing that decides a
//! load is filled in silently: capacities, allowances, gas, uncertainties, gaskets and opening
//! directions are asked for. The few defaults are on the safe side or change no load, and each is
//! named where it stands in the model: standard gravity, a design point at the lower edge, no
//! relief from outside liquid, a first bolt at the lowest point, an alarm that does not latch.
//!
//! Reading goes in three steps: `read` takes each table apart (one file per table), `check` looks
//! at what needs two tables or two parts, and `render` shows what was found. [`schema`] describes
//! every key once, for the readers and for editors.

mod check;
mod finding;
mod model;
mod read;
mod render;
pub mod schema;

pub use finding::{Code, Finding, Findings, Located, Span};
pub use model::*;

use std::path::Path;

/// Most parts of a tank.
pub const MAX_PARTS: usize = 32;
/// Most layers, the liquid on top included.
pub const MAX_LAYERS: usize = 4;
/// Most products beside the liquid.
pub const MAX_PRODUCTS: usize = 8;
/// Most rows of a strapping table.
pub const MAX_STRAPPING_ROWS: usize = 32;
/// Longest name, in bytes of UTF-8.
pub const NAME_BYTES: usize = 24;
/// Largest file read, bytes; a tank file is some kilobytes.
pub const MAX_FILE_BYTES: usize = 256 << 10;
/// Most findings kept of one file; a file with more is no tank file.
pub const MAX_FINDINGS: usize = 200;

/// Reads a tank file. `path_name` is shown in findings; paths in the file count from its folder.
///
/// # Errors
///
/// [`Findings`] with everything that is wrong with the file, in the order of the file.
pub fn parse(path_name: &str, bytes: &[u8]) -> Result<TankFile, Findings> {
    let folder = Path::new(path_name).parent().unwrap_or(Path::new(""));
    parse_in(folder, path_name, bytes)
}

/// The same with the folder from which paths in the file count.
///
/// # Errors
///
/// As [`parse`].
pub fn parse_in(folder: &Path, path_name: &str, bytes: &[u8]) -> Result<TankFile, Findings> {
    read::file(path_name, folder, bytes)
}

#[cfg(test)]
mod tests;
