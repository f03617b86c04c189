//! Loads against published values, own values and the oracle.

mod cases;
mod states;
