//! Time and sleep: the real-time counter 1 at 32,768 Hz (product specification, RTC).
//!
//! It counts 24 bits, 512 s a round, in sleep too; its overflow is counted on by whoever asks next,
//! at the latest by the interrupt that it raises. A comparison ends a sleep.

use core::arch::asm;
use core::cell::Cell;

use cortex_m::peripheral::NVIC;
use critical_section::Mutex;
use embedded_hal::delay::DelayNs;
use nrf52840_hal::pac::{Interrupt, RTC1, rtc0};
use strake_board_common::serial::Line as _;
use strake_board_common::ticks::Elapsed;
use strake_firmware::board::Clock;

use crate::{pins, uart};

/// 1,000 ms are 32,768 ticks.
const MS_PER_4096_TICKS: u64 = 125;
const COUNTER_BITS: u32 = 24;
const COUNTER_MAX: u32 = (1 << COUNTER_BITS) - 1;
/// Longest sleep, half of a round, ms.
const NAP_MS: u64 = 256_000;
/// A comparison nearer than two ticks may be missed (product specification, RTC, compare).
const TICKS_MIN: u32 = 3;
/// Half of a round.
const TICKS_MAX: u32 = 1 << 23;
/// Processor clock, for waits shorter than a few ticks.
const CYCLES_PER_US: u32 = 64;
/// Waits from here on are slept through, microseconds.
const SLEPT_US: u32 = 200;

static ELAPSED: Mutex<Cell<Elapsed<COUNTER_BITS>>> = Mutex::new(Cell::new(Elapsed::from(0)));

#[expect(unsafe_code, reason = "the counter is shared with its interrupt")]
fn registers() -> &'static rtc0::RegisterBlock {
    // SAFETY: a peripheral of this chip that only this file uses; its registers are volatile cells.
    unsafe { &*RTC1::PTR }
}

pub(crate) fn start() {
    let rtc = registers();
    rtc.intenset.write(|w| w.ovrflw().set().compare0().set());
    rtc.tasks_start.write(|w| w.tasks_start().set_bit());
}

fn elapsed_ticks() -> u64 {
    critical_section::with(|cs| {
        let cell = ELAPSED.borrow(cs);
        let elapsed = cell.get().advanced_to(registers().counter.read().bits());
        cell.set(elapsed);
        elapsed.ticks()
    })
}

pub(crate) fn on_interrupt() {
    let rtc = registers();
    rtc.events_ovrflw.reset();
    let [wake, ..] = &rtc.events_compare;
    wake.reset();
    elapsed_ticks();
}

/// Milliseconds since the start of the controller.
#[derive(Clone, Copy, Debug)]
pub struct MonotonicClock(());

impl MonotonicClock {
    pub(crate) const fn new() -> Self {
        Self(())
    }
}

impl Clock for MonotonicClock {
    fn now_ms(&self) -> u64 {
        // Half a million years until this wraps.
        elapsed_ticks().wrapping_mul(MS_PER_4096_TICKS) / 4096
    }
}

/// Lets the counter interrupt `ticks` from now.
#[expect(unsafe_code, reason = "a number into a register")]
fn wake_after(ticks: u64) {
    let rtc = registers();
    let ticks = u32::try_from(ticks).unwrap_or(TICKS_MAX).clamp(TICKS_MIN, TICKS_MAX);
    let at = rtc.counter.read().bits().wrapping_add(ticks) & COUNTER_MAX;
    let ([wake, ..], [compare, ..]) = (&rtc.events_compare, &rtc.cc);
    wake.reset();
    // SAFETY: 24 bits, which is what the register holds.
    compare.write(|w| unsafe { w.bits(at) });
}

/// Waits for an interrupt. To be called in a critical section, so that none is missed.
#[expect(unsafe_code, reason = "clears flags of the floating-point unit")]
fn wait() {
    // Its flags hold an interrupt pending that nobody takes, and the processor would not sleep
    // (errata of the chip: unexpected wake-up when the floating-point unit is in use).
    // SAFETY: flags only; no program here reads them.
    unsafe {
        asm!(
            "vmrs {status}, fpscr",
            "bic {status}, {status}, #0x9F",
            "vmsr fpscr, {status}",
            status = out(reg) _,
            options(nomem, nostack)
        );
    }
    NVIC::unpend(Interrupt::FPU);
    cortex_m::asm::dsb();
    cortex_m::asm::wfi();
}

/// Sleeps until `wake_ms` on the clock; ends early when the host link has bytes, or the button is
/// not as the application last read it. The link is switched with its cable on the way.
pub fn sleep_until(clock: MonotonicClock, wake_ms: u64) {
    loop {
        uart::LINK.switch(pins::host_is_there());
        if !nap(clock, wake_ms) {
            return;
        }
    }
}

/// One stretch of sleep; false when there is no reason to sleep on.
fn nap(clock: MonotonicClock, wake_ms: u64) -> bool {
    critical_section::with(|_| {
        let left_ms = wake_ms.saturating_sub(clock.now_ms());
        if left_ms == 0 || uart::LINK.has_received() || pins::button_has_changed() {
            return false;
        }
        if pins::host_is_there() == uart::LINK.is_on() {
            let nap_ms = if left_ms < NAP_MS { left_ms } else { NAP_MS };
            pins::wake_by_change();
            wake_after(nap_ms.wrapping_mul(4096).div_ceil(MS_PER_4096_TICKS));
            wait();
        }
        true
    })
}

/// Sleeps for half a millisecond, unless `is_over` already or an interrupt comes.
pub(crate) fn doze(is_over: impl FnOnce() -> bool) {
    critical_section::with(|_| {
        if !is_over() {
            wake_after(16);
            wait();
        }
    });
}

/// Waits: short ones in a loop, others asleep.
#[derive(Clone, Copy, Debug)]
pub struct Delay(());

impl Delay {
    pub(crate) const fn new() -> Self {
        Self(())
    }
}

impl DelayNs for Delay {
    fn delay_ns(&mut self, ns: u32) {
        self.delay_us(ns.div_ceil(1000));
    }

    fn delay_us(&mut self, us: u32) {
        if us < SLEPT_US {
            return cortex_m::asm::delay(us.wrapping_mul(CYCLES_PER_US));
        }
        // One tick more: the present one is under way.
        let ticks = u64::from(us).wrapping_mul(32_768).div_ceil(1_000_000).wrapping_add(1);
        let until = elapsed_ticks().wrapping_add(ticks);
        loop {
            let left = until.saturating_sub(elapsed_ticks());
            if left == 0 {
                return;
            }
            critical_section::with(|_| {
                wake_after(left);
                wait();
            });
        }
    }

    fn delay_ms(&mut self, ms: u32) {
        for _ in 0..ms {
            self.delay_us(1000);
        }
    }
}
