//! The log: defmt frames on UART2, sent at once and in order.

use core::cell::UnsafeCell;
use core::sync::atomic::{AtomicBool, Ordering};

use strake_firmware::board::Clock;

use crate::uart;

const BAUD: u32 = 115_200;

pub(crate) fn start() {
    uart::LOG.enable_polled_output(BAUD);
}

fn send(bytes: &[u8]) {
    for &byte in bytes {
        uart::LOG.send_polled(byte);
    }
}

#[expect(unsafe_code, reason = "the end of a run finds it by its name")]
mod ending {
    use super::{OPEN, Ordering, uart};

    /// The failure's own frame can then be told apart from the one it interrupted.
    #[unsafe(no_mangle)]
    extern "Rust" fn _strake_abandon_frame() {
        if OPEN.swap(false, Ordering::Relaxed) {
            // Zero ends a frame in defmt's default encoding.
            uart::LOG.send_polled(0);
        }
    }
}

defmt::timestamp!("{=u64:ms}", crate::timer::MonotonicClock::new().now_ms());

/// Whether a frame is being written.
static OPEN: AtomicBool = AtomicBool::new(false);

#[expect(unsafe_code, reason = "defmt asks for an unsafe trait; the critical section guards it")]
mod logger {
    use super::{OPEN, Ordering, UnsafeCell, send};

    struct Shared {
        encoder: UnsafeCell<defmt::Encoder>,
        restore: UnsafeCell<critical_section::RestoreState>,
    }

    // SAFETY: both cells are touched between `acquire` and `release` only, in a critical section on
    // the one core there is.
    unsafe impl Sync for Shared {}

    static SHARED: Shared = Shared {
        encoder: UnsafeCell::new(defmt::Encoder::new()),
        restore: UnsafeCell::new(critical_section::RestoreState::invalid()),
    };

    #[defmt::global_logger]
    struct Logger;

    // SAFETY: `acquire` enters a critical section that `release` leaves, so frames never mix.
    unsafe impl defmt::Logger for Logger {
        fn acquire() {
            // SAFETY: left by `release`, which defmt calls once for each `acquire`.
            let restore = unsafe { critical_section::acquire() };
            // A failure within a frame comes here a second time, after `abandon_frame`.
            OPEN.store(true, Ordering::Relaxed);
            // SAFETY: in the critical section, see `Sync` above.
            unsafe {
                *SHARED.restore.get() = restore;
                (*SHARED.encoder.get()).start_frame(send);
            }
        }

        unsafe fn flush() {
            // `send` returns when the transmitter has taken the byte: nothing waits here.
        }

        unsafe fn release() {
            // SAFETY: in the critical section that `acquire` entered.
            unsafe {
                (*SHARED.encoder.get()).end_frame(send);
                OPEN.store(false, Ordering::Relaxed);
                critical_section::release(*SHARED.restore.get());
            }
        }

        unsafe fn write(bytes: &[u8]) {
            // SAFETY: in the critical section that `acquire` entered.
            unsafe { (*SHARED.encoder.get()).write(bytes, send) }
        }
    }
}
