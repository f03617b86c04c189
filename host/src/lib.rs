//! Host library of Strake.
#![forbid(unsafe_code)]

pub mod sim;
