//! Simulated hardware for trials and tests.

pub mod nor;
