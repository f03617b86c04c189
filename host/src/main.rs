//! Command line of Strake.
#![forbid(unsafe_code)]
fn main() {}
