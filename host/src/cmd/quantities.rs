//! Quantities on the command line.

use crate::units::{Quantity, parse};

pub(super) fn length(text: &str) -> Result<f64, String> {
    quantity(text, Quantity::Length)
}

pub(super) fn density(text: &str) -> Result<f64, String> {
    quantity(text, Quantity::Density)
}

pub(super) fn temperature(text: &str) -> Result<f64, String> {
    quantity(text, Quantity::Temperature)
}

pub(super) fn pressure(text: &str) -> Result<f64, String> {
    quantity(text, Quantity::Pressure)
}

pub(super) fn flow(text: &str) -> Result<f64, String> {
    quantity(text, Quantity::Flow)
}

fn quantity(text: &str, quantity: Quantity) -> Result<f64, String> {
    parse(text, quantity)
        .map_err(|error| format!("{error}; write a number and a unit: {}", quantity.usual_units()))
}
