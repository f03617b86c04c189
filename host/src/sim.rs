//! Simulated hardware for trials and tests.

pub mod board;
pub mod machine;
pub mod nor;
pub mod sensor;

#[cfg(test)]
mod tests;
