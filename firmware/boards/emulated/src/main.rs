//! Emulated board.
fn main() {}
