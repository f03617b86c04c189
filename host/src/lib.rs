//! Host library of Strake.
#![forbid(unsafe_code)]
#![cfg_attr(not(test), warn(clippy::print_stdout, clippy::print_stderr))]

pub mod assess;
pub mod cli;
pub mod cmd;
pub mod compile;
pub mod energy;
pub mod exit;
pub mod failure;
pub mod inverse;
pub mod journal_file;
pub mod link;
pub mod mesh;
pub mod nearest;
pub mod output_file;
pub mod page;
pub mod plan_file;
pub mod plan_words;
pub mod plate;
pub mod replay;
pub mod rerate;
pub mod sheet;
pub mod sim;
pub mod status;
pub mod tank;
pub mod term;
pub mod trial;
pub mod units;
pub mod utc;
pub mod verify;
