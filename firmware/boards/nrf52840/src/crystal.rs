//! The fast crystal, on while a serial line is: the oscillator inside the chip is too far off for
//! the line's rate, and takes less.

use core::sync::atomic::{AtomicU8, Ordering};

use nrf52840_hal::pac::{CLOCK, clock};

/// Asked this often whether the crystal runs: some ten times the 0.4 ms that it needs.
const POLLS: u32 = 40_000;

/// How many want it.
static WANTED: AtomicU8 = AtomicU8::new(0);

#[expect(unsafe_code, reason = "shared with the start, which is over")]
fn registers() -> &'static clock::RegisterBlock {
    // SAFETY: a peripheral of this chip; only the registers of the fast clock are used.
    unsafe { &*CLOCK::PTR }
}

/// Starts the crystal if nobody has yet; a line without it garbles, and its check sums tell.
pub(crate) fn want() {
    if WANTED.fetch_add(1, Ordering::Relaxed) > 0 {
        return;
    }
    let clock = registers();
    clock.events_hfclkstarted.reset();
    clock.tasks_hfclkstart.write(|w| w.tasks_hfclkstart().set_bit());
    for _ in 0..POLLS {
        if clock.events_hfclkstarted.read().bits() != 0 {
            return;
        }
    }
}

/// Stops it when nobody is left who wants it.
pub(crate) fn release() {
    if WANTED.fetch_sub(1, Ordering::Relaxed) == 1 {
        registers().tasks_hfclkstop.write(|w| w.tasks_hfclkstop().set_bit());
    }
}
