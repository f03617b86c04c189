//! Command line of Strake.
#![forbid(unsafe_code)]

use std::process::ExitCode;

fn main() -> ExitCode {
    strake::cli::run(std::env::args_os()).into()
}
