//! The liquid: densities with their bands, layers, gas, and the pressure states they make.
//!
//! A *band* is the interval a density is held never to leave; the *estimate* is the one the
//! engineer entered. A bound of a load is one evaluation of the one formula with a bounding liquid,
//! chosen by what the sensor measures ([`states`]).

mod density;
mod states;
#[cfg(test)]
pub(crate) mod truth;

pub use density::{Band, DensityTable, TABLE_POINTS_MAX};
pub use states::{Readings, States, highest_surface_m, level_m, states};

/// Layers of one liquid on another, the top one included.
pub const LAYERS_MAX: usize = 4;
/// Liquids the tank may hold besides the first.
pub const PRODUCTS_MAX: usize = 8;

/// A heavier layer under the top liquid.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Layer {
    /// Height of its surface above the datum, m.
    pub surface_m: f32,
    /// Half-width of that height, never exceeded, m.
    pub surface_uncertainty_m: f32,
    /// Its density.
    pub density: Band,
}

/// Gas above the liquid, Pa gauge: the relief and vacuum settings and the usual value.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Gas {
    /// Lowest, Pa.
    pub lowest_pa: f32,
    /// Usual, Pa.
    pub nominal_pa: f32,
    /// Highest, Pa.
    pub highest_pa: f32,
}

/// Liquid against the outside of some parts: a flooded bund, a neighbouring compartment.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Outside {
    /// Highest level, m above the datum: counts fully inwards.
    pub highest_m: f32,
    /// Lowest proven level, m above the datum: all that may relieve the outward bound.
    pub lowest_m: f32,
    /// Its density.
    pub density: Band,
}
