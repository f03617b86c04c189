//! The adaptive interval on the whole simulated device: what its journal foretells, when its alarms
//! come, how long the cell lasts.
#![expect(
    clippy::cast_possible_truncation,
    clippy::cast_precision_loss,
    clippy::cast_sign_loss,
    reason = "days of milliseconds and levels of some metres"
)]

mod bench;
mod day;
mod foretold;
mod measured;
