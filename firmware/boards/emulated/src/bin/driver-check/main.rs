//! Driver check: exercises every driver of the board, a command at a time.
//!
//! One line with a command comes over the host link; one line goes back, `ok` or `no`, with what
//! was found. The commands stand in `commands.rs`.
#![cfg_attr(target_os = "none", no_std)]
#![cfg_attr(target_os = "none", no_main)]
#![deny(unsafe_code)]
#![deny(clippy::undocumented_unsafe_blocks)]

#[cfg(target_os = "none")]
mod commands;
#[cfg(target_os = "none")]
mod flash_rules;
#[cfg(target_os = "none")]
mod provoke;

#[cfg(target_os = "none")]
#[cortex_m_rt::entry]
fn main() -> ! {
    match strake_board_emulated::Parts::take() {
        Some(parts) => commands::serve(parts),
        None => strake_board_emulated::restart(),
    }
}

#[cfg(not(target_os = "none"))]
fn main() {
    eprintln!("this program is for the emulated board: .ci/emulated-device --bin driver-check");
}
