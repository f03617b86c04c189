//! The emulated board: QEMU `mps2-an386`, a Cortex-M4F at 25 MHz.
//!
//! One file per peripheral, each behind a trait of embedded-hal, embedded-io, embedded-storage or
//! `strake_firmware::board`; `Parts::take` hands them out once. The board decides nothing: when
//! to measure, to alarm and to feed the watchdog is the application's business.
//!
//! What the machine offers in place of the real parts:
//!
//! | part of the device | here |
//! | --- | --- |
//! | host link | UART0, interrupt driven |
//! | sensor bus | UART1, interrupt driven |
//! | log (defmt) | UART2, polled |
//! | alarm contact, lamp | LED register of the FPGA block, bits 0 and 1 |
//! | button | one word of PSRAM that the emulator's owner writes |
//! | journal, plan slots | PSRAM treated as NOR flash |
//! | retained memory | SRAM that the start-up code leaves alone |
//! | stack guard | memory protection unit, no access below the stack |
//!
//! On a host the package is empty, so that a check of the whole workspace compiles.
#![cfg_attr(target_os = "none", no_std)]
#![deny(unsafe_code)]
#![deny(clippy::undocumented_unsafe_blocks)]

#[cfg(target_os = "none")]
mod board;
#[cfg(target_os = "none")]
pub mod flash;
#[cfg(target_os = "none")]
mod interrupts;
#[cfg(target_os = "none")]
mod log;
#[cfg(target_os = "none")]
pub mod mpu;
#[cfg(target_os = "none")]
pub mod pins;
#[cfg(target_os = "none")]
pub mod timer;
#[cfg(target_os = "none")]
pub mod uart;
#[cfg(target_os = "none")]
pub mod watchdog;

#[cfg(target_os = "none")]
pub use board::{Parts, restart};
#[cfg(target_os = "none")]
pub use strake_board_common::{retained, stack};
