//! Random plans, and what a sensor may say to them: the same for every run of one seed.
//!
//! Unlike the parts of the oracle these are numbers of the device: plans that pass
//! [`strake_core::plan::Plan::check`], with every kind of part, sensor, liquid and setting in
//! them. They are made for comparing two machines, so numbers need not belong to a sensible tank.

mod cover;
mod liquid;
mod part;
mod plan;
mod readings;

pub use plan::{plan, plan_bytes};
pub use readings::Readings;

use strake_oracle::random::Random;

/// The f32 nearest to a number between two others.
fn between(random: &mut Random, low: f64, high: f64) -> f32 {
    single(random.between(low, high))
}

/// The f32 nearest to a positive number, every ratio equally likely.
fn ratio(random: &mut Random, low: f64, high: f64) -> f32 {
    single(random.ratio_between(low, high))
}

#[expect(clippy::cast_possible_truncation, reason = "rounding to f32 is what is asked for")]
fn single(x: f64) -> f32 {
    x as f32
}
