//! What the boards have in common: the processor's part, whatever stands around it.
//!
//! A board starts its parts and hands them to the application; here is what each would else write
//! again: memory functions, retained memory and its marks, the end of a run that cannot go on, the
//! protection of memory, the stack's depth, and time from a counter that wraps.
//!
//! On a host only the arithmetic of ticks is there, for its tests.
#![cfg_attr(target_os = "none", no_std)]
#![deny(unsafe_code)]
#![deny(clippy::undocumented_unsafe_blocks)]

#[cfg(target_os = "none")]
pub mod ending;
#[cfg(target_os = "none")]
mod memory;
#[cfg(target_os = "none")]
pub mod mpu;
#[cfg(target_os = "none")]
pub mod register;
#[cfg(target_os = "none")]
pub mod retained;
#[cfg(target_os = "none")]
pub mod serial;
#[cfg(target_os = "none")]
pub mod stack;
pub mod ticks;
