//! From the sensor's terminals to one integer per channel.
//!
//! A raw count is a type of its own: microamperes of a current loop, or the register value of a bus
//! sensor. Only the plan's scale turns it into a quantity. A burst of raw counts is filtered to ONE
//! integer, and exactly that integer is judged, logged and replayed.

mod channel;

pub use channel::{Channel, Quality, SensorError};
