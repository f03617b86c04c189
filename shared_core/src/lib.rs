//! Loads, signals, alarms, plan, journal format and wire messages of Strake.
//!
//! No heap, no operating system, no unsafe code, no clock, no input or output: bytes and numbers
//! in, bytes and numbers out. The device, the replay and every what-if call the same functions.
#![cfg_attr(not(test), no_std)]
#![forbid(unsafe_code)]

pub mod alarm;
mod cursor;
pub mod evaluate;
pub mod journal;
pub mod lane;
pub mod liquid;
pub mod part;
pub mod plan;
pub mod plan_slot;
pub mod pressure;
pub mod shape;
pub mod signal;
pub mod wire;
