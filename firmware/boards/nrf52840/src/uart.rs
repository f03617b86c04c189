//! The serial lines: UARTE 0 to the host, UARTE 1 to the sensors (product specification, UARTE).
//!
//! Bytes come one transfer each, which the chip starts anew by itself; an interrupt takes the byte
//! into a queue before the next is whole (87 us at 115,200 baud). What is late or finds the queue
//! full is lost, and the frame's check sum tells. Bytes go in stretches of a buffer's length.
//!
//! A line that is off takes no power and loses what is sent: the host's while no cable is plugged
//! in, the sensors' while none is measured.

use core::cell::RefCell;
use core::sync::atomic::{AtomicBool, AtomicU8, Ordering};

use critical_section::Mutex;
use embedded_hal::digital::OutputPin;
use heapless::Deque;
use nrf52840_hal::pac::uarte0::{RegisterBlock, baudrate::BAUDRATE_A};
use nrf52840_hal::pac::{UARTE0, UARTE1};
use strake_board_common::serial::{self, Line};

use crate::pins::{Listening, Switch};
use crate::{crystal, timer};

/// Bytes that wait to be read, at most.
const QUEUE: usize = 256;
/// Bytes that go in one transfer, at most.
const STRETCH: usize = 64;
/// Asked this often whether the receiver has stopped: longer than four bytes at 9,600 baud.
const POLLS: u32 = 100_000;

#[derive(Clone, Copy, Debug)]
enum Unit {
    Link,
    Bus,
}

/// What a line holds. All zero at first, it takes no room in the image.
struct Buffers {
    received: Mutex<RefCell<Deque<u8, QUEUE>>>,
    /// Switches the line's driver on, where it has one.
    drive: Mutex<RefCell<Option<Switch>>>,
    // Atomic because the chip reads and writes them by itself.
    heard: AtomicU8,
    sent: [AtomicU8; STRETCH],
    on: AtomicBool,
    sending: AtomicBool,
}

impl Buffers {
    const fn new() -> Self {
        Self {
            received: Mutex::new(RefCell::new(Deque::new())),
            drive: Mutex::new(RefCell::new(None)),
            heard: AtomicU8::new(0),
            sent: [const { AtomicU8::new(0) }; STRETCH],
            on: AtomicBool::new(false),
            sending: AtomicBool::new(false),
        }
    }
}

static LINK_BUFFERS: Buffers = Buffers::new();
static SENSOR_BUS_BUFFERS: Buffers = Buffers::new();

/// A line with its buffers, shared between a [`SerialPort`] and its interrupt.
pub struct Uart {
    unit: Unit,
    baud: BAUDRATE_A,
    buffers: &'static Buffers,
}

/// Line to the host.
pub static LINK: Uart =
    Uart { unit: Unit::Link, baud: BAUDRATE_A::BAUD115200, buffers: &LINK_BUFFERS };
/// Line to the sensors.
pub static SENSOR_BUS: Uart =
    Uart { unit: Unit::Bus, baud: BAUDRATE_A::BAUD9600, buffers: &SENSOR_BUS_BUFFERS };

/// A serial line of this board.
pub type SerialPort = serial::SerialPort<Uart>;

#[expect(unsafe_code, reason = "addresses of buffers into registers, and a line off its pins")]
impl Uart {
    fn registers(&self) -> &'static RegisterBlock {
        let block = match self.unit {
            Unit::Link => UARTE0::PTR,
            Unit::Bus => UARTE1::PTR,
        };
        // SAFETY: a peripheral of this chip that only this file uses.
        unsafe { &*block }
    }

    /// Tells the line its pins; it stays off.
    #[expect(clippy::needless_pass_by_value, reason = "the pins are the line's from here on")]
    pub(crate) fn wire(&self, sends: Switch, hears: Listening, drive: Option<Switch>) {
        let uart = self.registers();
        // SAFETY: numbers of pins, for as long as the line lives.
        unsafe {
            uart.psel.txd.write(|w| w.bits(sends.psel_bits()));
            uart.psel.rxd.write(|w| w.bits(hears.psel_bits()));
        }
        uart.baudrate.write(|w| w.baudrate().variant(self.baud));
        uart.intenset.write(|w| w.endrx().set().endtx().set().txstopped().set());
        critical_section::with(|cs| {
            if let Ok(mut place) = self.buffers.drive.borrow(cs).try_borrow_mut() {
                *place = drive;
            }
        });
    }

    pub(crate) fn is_on(&self) -> bool {
        self.buffers.on.load(Ordering::Relaxed)
    }

    /// Switches the line on or off, if it is not so already.
    pub(crate) fn switch(&self, on: bool) {
        if self.buffers.on.swap(on, Ordering::Relaxed) == on {
            return;
        }
        if on {
            crystal::want();
            self.start();
        } else {
            self.stop();
            crystal::release();
        }
    }

    fn start(&self) {
        let uart = self.registers();
        self.with_received(Deque::clear);
        uart.events_endrx.reset();
        uart.events_endtx.reset();
        uart.events_txstopped.reset();
        uart.enable.write(|w| w.enable().enabled());
        // SAFETY: one byte of a static.
        unsafe { uart.rxd.ptr.write(|w| w.bits(address(&self.buffers.heard))) };
        // SAFETY: as above.
        unsafe { uart.rxd.maxcnt.write(|w| w.bits(1)) };
        uart.shorts.write(|w| w.endrx_startrx().set_bit());
        uart.tasks_startrx.write(|w| w.tasks_startrx().set_bit());
    }

    fn stop(&self) {
        let uart = self.registers();
        // Without this the receiver would start anew at its stop.
        uart.shorts.reset();
        uart.events_rxto.reset();
        uart.tasks_stoprx.write(|w| w.tasks_stoprx().set_bit());
        uart.tasks_stoptx.write(|w| w.tasks_stoptx().set_bit());
        for _ in 0..POLLS {
            if uart.events_rxto.read().bits() != 0 {
                break;
            }
        }
        uart.enable.write(|w| w.enable().disabled());
        self.buffers.sending.store(false, Ordering::Relaxed);
        self.set_drive(false);
    }

    /// Works on the queue, which nobody else does in a critical section.
    fn with_received<R: Default>(&self, f: impl FnOnce(&mut Deque<u8, QUEUE>) -> R) -> R {
        critical_section::with(|cs| {
            let queue = self.buffers.received.borrow(cs).try_borrow_mut();
            queue.map(|mut queue| f(&mut queue)).unwrap_or_default()
        })
    }

    fn set_drive(&self, on: bool) {
        critical_section::with(|cs| {
            if let Ok(mut drive) = self.buffers.drive.borrow(cs).try_borrow_mut()
                && let Some(pin) = drive.as_mut()
            {
                let Ok(()) = if on { pin.set_high() } else { pin.set_low() };
            }
        });
    }

    pub(crate) fn on_interrupt(&self) {
        let uart = self.registers();
        if uart.events_endrx.read().bits() != 0 {
            uart.events_endrx.reset();
            let byte = self.buffers.heard.load(Ordering::Relaxed);
            self.with_received(|queue| {
                // What finds no room is lost.
                let _ = queue.push_back(byte);
            });
        }
        if uart.events_endtx.read().bits() != 0 {
            uart.events_endtx.reset();
            // The transmitter says when the last stop bit has gone, and rests from then on.
            uart.tasks_stoptx.write(|w| w.tasks_stoptx().set_bit());
        }
        if uart.events_txstopped.read().bits() != 0 {
            uart.events_txstopped.reset();
            self.set_drive(false);
            self.buffers.sending.store(false, Ordering::Release);
        }
    }

    fn is_sending(&self) -> bool {
        self.buffers.sending.load(Ordering::Acquire)
    }

    /// Starts to send what stands in the buffer.
    fn send(&self, bytes: u32) {
        let uart = self.registers();
        self.buffers.sending.store(true, Ordering::Release);
        self.set_drive(true);
        let [first, ..] = &self.buffers.sent;
        // SAFETY: bytes of a static that nobody writes while `sending` stands.
        unsafe { uart.txd.ptr.write(|w| w.bits(address(first))) };
        // SAFETY: as above; no more than the buffer's length.
        unsafe { uart.txd.maxcnt.write(|w| w.bits(bytes)) };
        uart.tasks_starttx.write(|w| w.tasks_starttx().set_bit());
    }
}

/// Address of a byte that the chip is to read or write by itself.
fn address(byte: &'static AtomicU8) -> u32 {
    // An address has 32 bits here.
    u32::try_from(byte.as_ptr().expose_provenance()).unwrap_or(0)
}

impl Line for Uart {
    fn take(&self, out: &mut [u8]) -> usize {
        self.with_received(|queue| {
            let mut taken = 0;
            for slot in out.iter_mut() {
                let Some(byte) = queue.pop_front() else { break };
                *slot = byte;
                taken += 1;
            }
            taken
        })
    }

    fn give(&self, bytes: &[u8]) -> usize {
        if !self.is_on() {
            return bytes.len();
        }
        if self.is_sending() {
            return 0;
        }
        let mut given = 0;
        for (place, byte) in self.buffers.sent.iter().zip(bytes) {
            place.store(*byte, Ordering::Relaxed);
            given += 1;
        }
        if given > 0 {
            self.send(u32::try_from(given).unwrap_or(0));
        }
        given
    }

    /// An empty sensor bus is asked again and again while an answer is awaited: it dozes before it
    /// says no.
    fn has_received(&self) -> bool {
        let has = || self.with_received(|queue| !queue.is_empty());
        if matches!(self.unit, Unit::Bus) {
            timer::doze(has);
        }
        has()
    }

    fn has_room(&self) -> bool {
        !self.is_sending()
    }

    fn has_sent(&self) -> bool {
        !self.is_sending()
    }
}
