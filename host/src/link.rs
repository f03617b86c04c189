//! The laptop's side of the link.
//!
//! A [`Port`] carries bytes and knows its own time: a serial line, a channel inside this process,
//! or either of them with noise. [`Client`] asks over it, repeats what is lost and gives up with a
//! reason. [`collect`] takes the journal home.

mod client;
mod collect;
mod error;
mod in_process;
mod noise;
mod port;
mod rate;
mod serial;
#[cfg(test)]
mod tests;
mod transfer;

pub use client::Client;
pub use collect::{Collected, Progress, collect};
pub use error::{LinkError, PortError, VersionMismatch, Versioned};
pub use in_process::{DeviceEnd, InProcess, Wire};
pub use noise::Noisy;
pub use port::Port;
pub use serial::{FoundDevice, SerialPort, connect, ports};

/// Line rate of a Strake device, bits per second, eight data bits, no parity, one stop bit.
pub const BAUD: u32 = 115_200;
