//! The technician's commands: the real program against a simulated device behind a
//! pseudo-terminal, and against lines on which there is none.
#![cfg(unix)]

mod acknowledge;
mod bench;
mod collect;
mod commission;
mod no_device;
mod over_port;
mod status;
