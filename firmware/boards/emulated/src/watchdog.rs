//! The watchdog: CMSDK APB watchdog (Arm DDI 0479, section 4.6).
//!
//! It works in two halves. After half of the time without feeding it raises the non-maskable
//! interrupt, which only leaves a mark in retained memory; after the other half it resets the
//! machine. Feeding takes the mark back. Under `-icount ...,sleep=off` the emulator stops with no
//! event left once the program no longer runs; tests of the watchdog leave that option out.

use strake_board_common::register::Register;
use strake_board_common::retained;
use strake_firmware::board::Watchdog;

use crate::timer::TICKS_PER_SECOND;

/// Longest time-out, milliseconds: two halves of a 32-bit count at 25 MHz.
pub const LONGEST_MS: u32 = 343_000;

const INTERRUPT_ENABLE: u32 = 1 << 0;
const RESET_ENABLE: u32 = 1 << 1;
const UNLOCK: u32 = 0x1ACC_E551;

#[expect(unsafe_code, reason = "names the watchdog's registers")]
mod registers {
    use super::Register;

    const BASE: usize = 0x4000_8000;
    // SAFETY: the registers of this machine's watchdog, here and below.
    pub(super) const LOAD: Register = unsafe { Register::at(BASE) };
    // SAFETY: as above.
    pub(super) const CONTROL: Register = unsafe { Register::at(BASE + 0x8) };
    // SAFETY: as above.
    pub(super) const INTERRUPT: Register = unsafe { Register::at(BASE + 0xC) };
    // SAFETY: as above.
    pub(super) const LOCK: Register = unsafe { Register::at(BASE + 0xC00) };
}
use registers::{CONTROL, INTERRUPT, LOAD, LOCK};

/// A watchdog that nobody started yet.
#[derive(Debug)]
pub struct Stopped(());

impl Stopped {
    pub(crate) fn new() -> Self {
        Self(())
    }

    /// Starts the count: the machine resets `timeout_ms` after the last feeding. More than
    /// [`LONGEST_MS`] is taken as that.
    #[must_use]
    pub fn start(self, timeout_ms: u32) -> Running {
        let timeout_ms = if timeout_ms < LONGEST_MS { timeout_ms } else { LONGEST_MS };
        LOCK.write(UNLOCK);
        LOAD.write((timeout_ms / 2).wrapping_mul(TICKS_PER_SECOND / 1000));
        CONTROL.write(INTERRUPT_ENABLE | RESET_ENABLE);
        LOCK.write(0);
        Running { timeout_ms }
    }
}

/// A watchdog that counts; it cannot be stopped.
#[derive(Debug)]
pub struct Running {
    timeout_ms: u32,
}

impl Watchdog for Running {
    fn patience_ms(&self) -> u64 {
        self.timeout_ms.into()
    }

    fn feed(&mut self) {
        critical_section::with(|_| {
            LOCK.write(UNLOCK);
            INTERRUPT.write(1);
            LOCK.write(0);
            retained::clear_mark();
        });
    }
}

#[expect(unsafe_code, reason = "cortex-m-rt wants this handler marked")]
mod half_time {
    use super::retained::{Mark, leave_mark};

    // It comes through critical sections; a single volatile store is all it does.
    #[cortex_m_rt::exception]
    unsafe fn NonMaskableInt() {
        leave_mark(Mark::Watchdog);
    }
}
