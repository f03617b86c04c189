//! The adaptive interval on the whole simulated device: what its journal foretells, when its alarms
//! come, how long the cell lasts.

mod bench;
mod day;
mod foretold;
mod measured;
