//! The interrupt table of the machine, up to the last interrupt in use, and what enables them.

use cortex_m::interrupt::InterruptNumber;
use cortex_m::peripheral::NVIC;

use crate::{timer, uart};

type Handler = extern "C" fn();

/// By number: UART0 receive and transmit, UART1 the same, UART2 the same, UART3 no board uses,
/// the two GPIO banks, then the two timers.
#[expect(unsafe_code, reason = "the linker puts the table behind the exceptions")]
#[unsafe(link_section = ".vector_table.interrupts")]
#[unsafe(no_mangle)]
static __INTERRUPTS: [Handler; 10] = [
    link_receive,
    link_transmit,
    bus_receive,
    bus_transmit,
    unexpected,
    unexpected,
    unexpected,
    unexpected,
    time_wrap,
    wake,
];

#[derive(Clone, Copy)]
struct Line(u16);

#[expect(unsafe_code, reason = "a promise about interrupt numbers")]
// SAFETY: made in `enable` only, from the numbers of this machine.
unsafe impl InterruptNumber for Line {
    fn number(self) -> u16 {
        self.0
    }
}

/// Lets the interrupts in use through.
#[expect(unsafe_code, reason = "unmasking could break a critical section built on masks")]
pub(crate) fn enable() {
    for number in [0, 1, 2, 3, 8, 9] {
        // SAFETY: critical sections here disable all interrupts at the core, none uses masks.
        unsafe { NVIC::unmask(Line(number)) };
    }
}

extern "C" fn link_receive() {
    uart::LINK.on_receive();
}

extern "C" fn link_transmit() {
    uart::LINK.on_transmit();
}

extern "C" fn bus_receive() {
    uart::SENSOR_BUS.on_receive();
}

extern "C" fn bus_transmit() {
    uart::SENSOR_BUS.on_transmit();
}

extern "C" fn time_wrap() {
    timer::on_wrap();
}

extern "C" fn wake() {
    timer::on_wake();
}

extern "C" fn unexpected() {
    defmt::panic!("interrupt that nobody asked for");
}
