//! A board with the nRF52840, a Cortex-M4F at 64 MHz: compiled for it, not run on it.
//!
//! One file per peripheral, each behind a trait of embedded-hal, embedded-io, embedded-storage or
//! `strake_firmware::board`; `Parts::take` hands them out once. The board decides nothing. Where a
//! remark names the product specification, it means the chip's, by the name of the chapter.
//!
//! Pins, clocks, watchdog and the I2C bus are set up by the chip's hardware abstraction crate. It
//! waits and asserts where this device may do neither, so the serial lines, the SPI bus and the
//! flash controller are driven here, over the same crate's registers.
//!
//! On a host only the arithmetic is there, for its tests.
#![cfg_attr(target_os = "none", no_std)]
#![cfg_attr(
    target_os = "none",
    expect(missing_debug_implementations, reason = "the chip's crate has none for its pins")
)]
#![deny(unsafe_code)]
#![deny(clippy::undocumented_unsafe_blocks)]

#[cfg(target_os = "none")]
mod board;
#[cfg(target_os = "none")]
mod crystal;
#[cfg(target_os = "none")]
mod interrupts;
#[cfg(target_os = "none")]
mod log;
#[cfg(target_os = "none")]
mod mpu;
#[cfg(target_os = "none")]
pub mod nvmc;
#[cfg(target_os = "none")]
pub mod pins;
pub mod reset;
#[cfg(target_os = "none")]
pub mod sensor;
#[cfg(target_os = "none")]
pub mod spi;
#[cfg(target_os = "none")]
pub mod timer;
#[cfg(target_os = "none")]
pub mod uart;
#[cfg(target_os = "none")]
pub mod watchdog;

#[cfg(target_os = "none")]
pub use board::{Flash, Parts, restart};
