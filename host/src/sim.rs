//! Simulated hardware for trials and tests.

pub mod board;
pub mod machine;
pub mod nor;
#[cfg(unix)]
pub mod pty;
pub mod sensor;

#[cfg(test)]
mod tests;
