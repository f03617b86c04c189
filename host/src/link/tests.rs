//! The client against a device that serves a made-up journal.

mod collecting;
mod exchanges;
mod fake;
mod line;
mod messages;
#[cfg(unix)]
mod serial;
mod throughput;
mod transfer;
