//! Time and sleep: two CMSDK APB timers (Arm DDI 0479, section 4.4) at 25 MHz.
//!
//! Timer 0 counts down without end and gives the time; timer 1 ends a sleep. Neither stops in
//! sleep. Under `-icount ...,sleep=off` the emulator jumps to the next timer event instead of
//! waiting, so days pass in seconds; answers from outside then seem late.

use core::cell::Cell;

use critical_section::Mutex;
use strake_board_common::register::Register;
use strake_board_common::serial::Line as _;
use strake_board_common::ticks::Elapsed;
use strake_firmware::board::Clock;

use crate::{pins, uart};

/// Clock of the timers, the watchdog and the UARTs, hertz.
pub(crate) const TICKS_PER_SECOND: u32 = 25_000_000;
const TICKS_PER_MS: u32 = TICKS_PER_SECOND / 1000;

/// Longest time asleep before the button is looked at again, milliseconds.
const NAP_MS: u32 = 250;

const ENABLE: u32 = 1 << 0;
const INTERRUPT_ENABLE: u32 = 1 << 3;

struct Timer {
    control: Register,
    value: Register,
    reload: Register,
    interrupt: Register,
}

impl Timer {
    #[expect(unsafe_code, reason = "names the registers of a timer")]
    const fn at(base: usize) -> Self {
        // SAFETY: called with the base addresses of this machine's timers only, below.
        unsafe {
            Self {
                control: Register::at(base),
                value: Register::at(base + 0x4),
                reload: Register::at(base + 0x8),
                interrupt: Register::at(base + 0xC),
            }
        }
    }

    /// Counts down from `ticks`, then from `reload` again and again; never again when that is 0.
    fn start(&self, ticks: u32, reload: u32) {
        self.reload.write(reload);
        self.value.write(ticks);
        self.control.write(ENABLE | INTERRUPT_ENABLE);
    }
}

const TIME: Timer = Timer::at(0x4000_0000);
const WAKE: Timer = Timer::at(0x4000_1000);

/// The timer counts down, so its complement counts up.
static ELAPSED: Mutex<Cell<Elapsed<32>>> = Mutex::new(Cell::new(Elapsed::from(0)));

pub(crate) fn start() {
    TIME.start(u32::MAX, u32::MAX);
}

/// Ticks since the start. The interrupt at each wrap of the counter (172 s) calls this too, so no
/// wrap goes unseen however long nobody asks.
fn elapsed_ticks() -> u64 {
    critical_section::with(|cs| {
        let cell = ELAPSED.borrow(cs);
        let elapsed = cell.get().advanced_to(!TIME.value.read());
        cell.set(elapsed);
        elapsed.ticks()
    })
}

pub(crate) fn on_wrap() {
    TIME.interrupt.write(1);
    elapsed_ticks();
}

pub(crate) fn on_wake() {
    WAKE.interrupt.write(1);
    WAKE.control.write(0);
}

/// Milliseconds since the start of the controller.
#[derive(Clone, Copy, Debug)]
pub struct MonotonicClock(());

impl MonotonicClock {
    pub(crate) fn new() -> Self {
        Self(())
    }
}

impl Clock for MonotonicClock {
    fn now_ms(&self) -> u64 {
        elapsed_ticks() / u64::from(TICKS_PER_MS)
    }
}

/// Sleeps until `wake_ms` on the clock; ends early when the host link has bytes, or the button is
/// not as the application last read it.
pub fn sleep_until(clock: MonotonicClock, wake_ms: u64) {
    while nap(clock, wake_ms) {}
}

/// One stretch of sleep; false when there is no reason to sleep on.
fn nap(clock: MonotonicClock, wake_ms: u64) -> bool {
    // The question and the sleep stand in one critical section: an interrupt in between still
    // ends the wait, and is served after it.
    critical_section::with(|_| {
        let left_ms = wake_ms.saturating_sub(clock.now_ms());
        if left_ms == 0 || uart::LINK.has_received() || pins::button_has_changed() {
            return false;
        }
        let nap_ms = u32::try_from(left_ms).unwrap_or(NAP_MS);
        let nap_ms = if nap_ms < NAP_MS { nap_ms } else { NAP_MS };
        WAKE.start(nap_ms.wrapping_mul(TICKS_PER_MS), 0);
        cortex_m::asm::dsb();
        cortex_m::asm::wfi();
        true
    })
}
