//! The serial ports: CMSDK APB UART (Arm DDI 0479, section 4.3).
//!
//! The host link and the sensor bus are interrupt driven through a queue in each direction. When
//! the receive queue is full the byte stays in the UART; the emulator then holds the sender back,
//! a real line would overrun. Overrun, parity and framing errors do not exist on this machine.

use core::cell::RefCell;

use critical_section::Mutex;
use heapless::Deque;
use strake_board_common::register::Register;
use strake_board_common::serial::{self, Line};

use crate::timer::TICKS_PER_SECOND;

/// Bytes that each queue holds.
const QUEUE: usize = 256;

const TX_FULL: u32 = 1 << 0;
const RX_FULL: u32 = 1 << 1;

const TX_ENABLE: u32 = 1 << 0;
const RX_ENABLE: u32 = 1 << 1;
const TX_INTERRUPT: u32 = 1 << 2;
const RX_INTERRUPT: u32 = 1 << 3;

/// Registers of one UART.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Uart {
    data: Register,
    state: Register,
    control: Register,
    interrupt: Register,
    divider: Register,
}

impl Uart {
    #[expect(unsafe_code, reason = "names the registers of a UART")]
    const fn at(base: usize) -> Self {
        // SAFETY: called with the base addresses of this machine's UARTs only, below.
        unsafe {
            Self {
                data: Register::at(base),
                state: Register::at(base + 0x4),
                control: Register::at(base + 0x8),
                interrupt: Register::at(base + 0xC),
                divider: Register::at(base + 0x10),
            }
        }
    }

    fn enable(self, baud: u32, control: u32) {
        // The divider's least value is 16 (Arm DDI 0479, table 4-7).
        let divider = TICKS_PER_SECOND.checked_div(baud).unwrap_or(0);
        self.divider.write(if divider < 16 { 16 } else { divider });
        self.control.write(control);
    }

    /// Switches the transmitter on, without interrupts.
    pub(crate) fn enable_polled_output(self, baud: u32) {
        self.enable(baud, TX_ENABLE);
    }

    /// Sends one byte as soon as the transmitter takes it.
    pub(crate) fn send_polled(self, byte: u8) {
        while self.state.read() & TX_FULL != 0 {}
        self.data.write(u32::from(byte));
    }
}

/// The log's UART.
pub(crate) const LOG: Uart = Uart::at(0x4000_6000);

struct Queues {
    received: Deque<u8, QUEUE>,
    to_send: Deque<u8, QUEUE>,
}

type SharedQueues = Mutex<RefCell<Queues>>;

const fn empty() -> SharedQueues {
    Mutex::new(RefCell::new(Queues { received: Deque::new(), to_send: Deque::new() }))
}

// Apart from the registers' addresses: all zero, they need no copy in flash.
static LINK_QUEUES: SharedQueues = empty();
static SENSOR_BUS_QUEUES: SharedQueues = empty();

/// A UART with its queues, shared between a [`SerialPort`] and the interrupts.
#[expect(missing_debug_implementations, reason = "queues change under interrupts")]
pub struct Buffered {
    uart: Uart,
    queues: &'static SharedQueues,
}

pub(crate) static LINK: Buffered = Buffered { uart: Uart::at(0x4000_4000), queues: &LINK_QUEUES };
pub(crate) static SENSOR_BUS: Buffered =
    Buffered { uart: Uart::at(0x4000_5000), queues: &SENSOR_BUS_QUEUES };

impl Buffered {
    pub(crate) fn start(&self, baud: u32) {
        self.uart.enable(baud, TX_ENABLE | RX_ENABLE | TX_INTERRUPT | RX_INTERRUPT);
    }

    /// Works on the queues, which nobody else does in a critical section; were it otherwise,
    /// nothing is done and the default is the answer.
    fn with<R: Default>(&self, f: impl FnOnce(&mut Queues) -> R) -> R {
        critical_section::with(|cs| {
            self.queues
                .borrow(cs)
                .try_borrow_mut()
                .map(|mut queues| f(&mut queues))
                .unwrap_or_default()
        })
    }

    /// Takes what the UART received, as far as the queue has room.
    fn pump_received(&self, queues: &mut Queues) {
        while !queues.received.is_full() && self.uart.state.read() & RX_FULL != 0 {
            let [byte, ..] = self.uart.data.read().to_le_bytes();
            // Cannot fail, there is room.
            let _ = queues.received.push_back(byte);
        }
    }

    /// Gives the UART what waits, as far as it takes it.
    fn pump_to_send(&self, queues: &mut Queues) {
        while self.uart.state.read() & TX_FULL == 0 {
            let Some(byte) = queues.to_send.pop_front() else { return };
            self.uart.data.write(u32::from(byte));
        }
    }

    pub(crate) fn on_receive(&self) {
        self.uart.interrupt.write(RX_FULL);
        self.with(|queues| self.pump_received(queues));
    }

    pub(crate) fn on_transmit(&self) {
        self.uart.interrupt.write(TX_FULL);
        self.with(|queues| self.pump_to_send(queues));
    }
}

/// A serial line of this board.
pub type SerialPort = serial::SerialPort<Buffered>;

impl Line for Buffered {
    fn take(&self, out: &mut [u8]) -> usize {
        self.with(|queues| {
            let mut taken = 0;
            for slot in out.iter_mut() {
                let Some(byte) = queues.received.pop_front() else { break };
                *slot = byte;
                taken += 1;
            }
            // A byte held back in the UART raises no second interrupt.
            self.pump_received(queues);
            taken
        })
    }

    fn give(&self, bytes: &[u8]) -> usize {
        self.with(|queues| {
            let mut given = 0;
            for &byte in bytes {
                if queues.to_send.push_back(byte).is_err() {
                    break;
                }
                given += 1;
            }
            self.pump_to_send(queues);
            given
        })
    }

    fn has_received(&self) -> bool {
        self.with(|queues| !queues.received.is_empty())
    }

    fn has_room(&self) -> bool {
        self.with(|queues| !queues.to_send.is_full())
    }

    fn has_sent(&self) -> bool {
        self.with(|queues| queues.to_send.is_empty())
    }
}
