//! Loads of liquids at rest by numerical integration in f64: the independent reference against
//! which the load engine is held.
//!
//! Oracle: a second way to the same number, sharing no code, no formula and no precision with the
//! first. Here every load is integrated from its definition, F = - integral p n dA and
//! M = - integral r x p n dA with n from the wall into the liquid, over surfaces cut where the
//! pressure has a kink. The relative error is about 1e-13 of integral |p| |w| dA.
//!
//! Coordinates: z up from the tank datum, x outward, y sideways. Units are SI throughout.

pub mod bending;
pub mod cases;
pub mod envelope;
pub mod generate;
pub mod limit;
pub mod liquid;
pub mod membrane;
pub mod patch;
pub mod plane;
pub mod profiles;
pub mod quadrature;
pub mod random;
pub mod securing;
pub mod shape;
pub mod vector;
pub mod vessel;

#[cfg(test)]
mod tests;
