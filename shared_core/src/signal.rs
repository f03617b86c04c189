//! From the sensor's terminals to a reading with its bounds.
//!
//! A raw count is a type of its own: microamperes of a current loop, or the register value of a bus
//! sensor. Only the plan's scale turns it into a quantity. A burst of raw counts is filtered to ONE
//! integer ([`burst`]), and exactly that integer is judged, logged and replayed. A reading
//! ([`resolve`]) is one of: not yet read, valid, held, projected, failed; an alarm never sees a
//! bare number.

pub mod burst;
mod channel;
mod current_loop;
mod resolve;

pub use channel::{Channel, Quality, SensorError};
pub use current_loop::{LoopClass, classify};
pub(crate) use resolve::reach;
pub use resolve::{ReadingClass, Resolved, Sight, half_width, resolve};
