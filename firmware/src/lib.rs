//! The Strake device application: sense, evaluate, alarm, journal, serve, sleep.
//!
//! A `no_std` library over embedded-hal, embedded-io and embedded-storage traits and the few of
//! [`board`]. Boards only wire.
#![cfg_attr(not(test), no_std)]
#![forbid(unsafe_code)]

pub mod app;
pub mod arithmetic;
pub mod board;
pub mod device;
pub mod journal;
pub mod plan_store;
pub mod rooms;
pub mod sensor;
pub mod serve;
pub mod spi_nor;
