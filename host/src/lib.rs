//! Host library of Strake.
#![forbid(unsafe_code)]

pub mod journal_file;
pub mod link;
