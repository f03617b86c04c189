//! The SPI bus with the journal's flash: SPIM 2 (product specification, SPIM), with its select pin.

use core::sync::atomic::{Ordering, compiler_fence};

use embedded_hal::delay::DelayNs as _;
use embedded_hal::digital::OutputPin;
use embedded_hal::spi::{Error, ErrorKind, ErrorType, Operation, SpiDevice};
use nrf52840_hal::pac::SPIM2;

use crate::pins::{Listening, Switch};
use crate::timer::Delay;

/// Bytes that go in one transfer, at most; 0.1 ms at 8 MHz.
const STRETCH: usize = 64;
/// Asked this often whether a transfer is over: many times what it takes.
const POLLS: u32 = 100_000;

/// A transfer did not end.
#[derive(Clone, Copy, Debug, PartialEq, Eq, defmt::Format)]
pub struct Unfinished;

impl Error for Unfinished {
    fn kind(&self) -> ErrorKind {
        ErrorKind::Other
    }
}

/// The bus with the one chip on it.
pub struct Bus {
    spi: SPIM2,
    select: Switch,
}

#[expect(unsafe_code, reason = "numbers of pins and addresses of buffers into registers")]
impl Bus {
    #[expect(clippy::needless_pass_by_value, reason = "the pins are the bus's from here on")]
    pub(crate) fn new(
        spi: SPIM2,
        clock: Switch,
        sends: Switch,
        hears: Listening,
        select: Switch,
    ) -> Self {
        // SAFETY: numbers of pins, for as long as the bus lives.
        unsafe {
            spi.psel.sck.write(|w| w.bits(clock.psel_bits()));
            spi.psel.mosi.write(|w| w.bits(sends.psel_bits()));
            spi.psel.miso.write(|w| w.bits(hears.psel_bits()));
        }
        spi.frequency.write(|w| w.frequency().m8());
        // Mode 0, highest bit first.
        spi.config.reset();
        spi.enable.write(|w| w.enable().enabled());
        Self { spi, select }
    }

    /// Sends `sent`, then zeroes, and receives what comes at the same time, for as long as the
    /// longer of the two lasts. It goes over a buffer of its own: what the caller has may lie in
    /// flash, where the chip's transfers do not reach.
    fn exchange(&mut self, sent: &[u8], received: &mut [u8]) -> Result<(), Unfinished> {
        let mut to_send = sent.iter();
        let mut to_fill = received.iter_mut();
        loop {
            let mut buffer = [0_u8; STRETCH];
            let (sends, fills) = (to_send.len().min(STRETCH), to_fill.len().min(STRETCH));
            if sends == 0 && fills == 0 {
                return Ok(());
            }
            for (place, byte) in buffer.iter_mut().zip(to_send.by_ref().take(sends)) {
                *place = *byte;
            }
            self.transfer(&mut buffer, sends, fills)?;
            for (byte, place) in buffer.iter().zip(to_fill.by_ref().take(fills)) {
                *place = *byte;
            }
        }
    }

    /// Sends the first bytes of the buffer and receives into its first bytes.
    fn transfer(
        &mut self,
        buffer: &mut [u8; STRETCH],
        sends: usize,
        fills: usize,
    ) -> Result<(), Unfinished> {
        let number = |length: usize| u32::try_from(length.min(STRETCH)).map_err(|_| Unfinished);
        let (sends, fills) = (number(sends)?, number(fills)?);
        let address =
            u32::try_from(buffer.as_mut_ptr().expose_provenance()).map_err(|_| Unfinished)?;
        // SAFETY: the buffer lives until the transfer is over or stopped; no more than its length.
        unsafe {
            self.spi.txd.ptr.write(|w| w.bits(address));
            self.spi.txd.maxcnt.write(|w| w.bits(sends));
            self.spi.rxd.ptr.write(|w| w.bits(address));
            self.spi.rxd.maxcnt.write(|w| w.bits(fills));
        }
        self.spi.events_end.reset();
        compiler_fence(Ordering::SeqCst);
        self.spi.tasks_start.write(|w| w.tasks_start().set_bit());
        let over = self.wait();
        compiler_fence(Ordering::SeqCst);
        over
    }

    fn wait(&mut self) -> Result<(), Unfinished> {
        for _ in 0..POLLS {
            if self.spi.events_end.read().bits() != 0 {
                return Ok(());
            }
        }
        // Nothing may write to the buffer any more.
        self.spi.enable.write(|w| w.enable().disabled());
        self.spi.enable.write(|w| w.enable().enabled());
        Err(Unfinished)
    }

    fn step(&mut self, step: &mut Operation<'_, u8>) -> Result<(), Unfinished> {
        match step {
            Operation::Write(bytes) => self.exchange(bytes, &mut []),
            Operation::Read(bytes) => self.exchange(&[], bytes),
            Operation::Transfer(received, sent) => self.exchange(sent, received),
            // Each byte is sent before its place is filled.
            Operation::TransferInPlace(bytes) => bytes.iter_mut().try_for_each(|byte| {
                let sent = [*byte];
                self.exchange(&sent, core::slice::from_mut(byte))
            }),
            Operation::DelayNs(ns) => {
                Delay::new().delay_ns(*ns);
                Ok(())
            }
        }
    }
}

impl ErrorType for Bus {
    type Error = Unfinished;
}

impl SpiDevice for Bus {
    fn transaction(&mut self, steps: &mut [Operation<'_, u8>]) -> Result<(), Unfinished> {
        let Ok(()) = self.select.set_low();
        let result = steps.iter_mut().try_for_each(|step| self.step(step));
        let Ok(()) = self.select.set_high();
        result
    }
}
