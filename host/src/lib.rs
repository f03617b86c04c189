//! Host library of Strake.
#![forbid(unsafe_code)]

pub mod nearest;
pub mod tank;
pub mod units;
pub mod sim;
pub mod journal_file;
pub mod link;
