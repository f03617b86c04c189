//! Host library of Strake.
#![forbid(unsafe_code)]

pub mod journal_file;
pub mod link;
pub mod nearest;
pub mod replay;
pub mod sim;
pub mod tank;
pub mod units;
