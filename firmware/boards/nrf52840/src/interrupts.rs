//! The interrupts in use, and what enables them.

use cortex_m::peripheral::NVIC;
use nrf52840_hal::pac::{Interrupt, interrupt};

use crate::uart::{LINK, SENSOR_BUS};
use crate::{pins, timer};

/// Lets the interrupts in use through.
#[expect(unsafe_code, reason = "unmasking could break a critical section built on masks")]
pub(crate) fn enable() {
    let used = [Interrupt::RTC1, Interrupt::GPIOTE, Interrupt::UARTE0_UART0, Interrupt::UARTE1];
    for line in used {
        // SAFETY: critical sections here disable all interrupts at the core, none uses masks.
        unsafe { NVIC::unmask(line) };
    }
}

#[expect(unsafe_code, reason = "the vector table finds them by their names")]
mod handlers {
    use super::{LINK, SENSOR_BUS, interrupt, pins, timer};

    #[interrupt]
    fn RTC1() {
        timer::on_interrupt();
    }

    #[interrupt]
    fn GPIOTE() {
        pins::on_change();
    }

    #[interrupt]
    fn UARTE0_UART0() {
        LINK.on_interrupt();
    }

    #[interrupt]
    fn UARTE1() {
        SENSOR_BUS.on_interrupt();
    }

    #[cortex_m_rt::exception]
    unsafe fn DefaultHandler(_number: i16) -> ! {
        defmt::panic!("interrupt that nobody asked for");
    }
}
