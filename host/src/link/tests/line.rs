//! A serial line in virtual time: full duplex, ten bits to a byte, seeded bit errors, a small FIFO
//! on the device's side and the polling delay of a USB bridge on the host's.

use super::fake::{Shared, random_bytes};
use crate::link::{BAUD, Port, PortError};
use std::collections::VecDeque;
use std::convert::Infallible;
use std::time::Duration;
use strake_firmware::serve::Server;

const BITS: u32 = 10;
const FIFO_BYTES: usize = 16;

/// The device's serial port: what has arrived, and the FIFO that the line empties.
#[derive(Debug, Default)]
struct Uart {
    arrived: VecDeque<u8>,
    leaving: VecDeque<u8>,
}

impl embedded_io::ErrorType for Uart {
    type Error = Infallible;
}

impl embedded_io::Read for Uart {
    fn read(&mut self, out: &mut [u8]) -> Result<usize, Infallible> {
        let count = out.len().min(self.arrived.len());
        out.iter_mut().zip(self.arrived.drain(..count)).for_each(|(slot, byte)| *slot = byte);
        Ok(count)
    }
}

impl embedded_io::ReadReady for Uart {
    fn read_ready(&mut self) -> Result<bool, Infallible> {
        Ok(!self.arrived.is_empty())
    }
}

impl embedded_io::Write for Uart {
    fn write(&mut self, bytes: &[u8]) -> Result<usize, Infallible> {
        let count = bytes.len().min(FIFO_BYTES - self.leaving.len());
        self.leaving.extend(&bytes[..count]);
        Ok(count)
    }

    fn flush(&mut self) -> Result<(), Infallible> {
        Ok(())
    }
}

impl embedded_io::WriteReady for Uart {
    fn write_ready(&mut self) -> Result<bool, Infallible> {
        Ok(self.leaving.len() < FIFO_BYTES)
    }
}

/// Errors of one direction, by the distance to the next one.
#[derive(Debug)]
struct Errors {
    rate: f64,
    seed: u64,
    bits_left: u64,
    flipped: u64,
}

impl Errors {
    fn new(rate: f64, seed: u64) -> Self {
        let mut errors = Self { rate, seed, bits_left: 0, flipped: 0 };
        errors.draw();
        errors
    }

    #[expect(
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "a distance in bits"
    )]
    fn draw(&mut self) {
        self.seed += 1;
        let bytes = random_bytes(self.seed.wrapping_mul(0x9E37_79B9), 12);
        let number = bytes.iter().fold(0_u64, |sum, byte| sum.wrapping_mul(257) + u64::from(*byte));
        let uniform = f64::from((number % 1_000_003) as u32 + 1) / 1_000_004.0;
        self.bits_left =
            if self.rate > 0.0 { (uniform.ln() / (-self.rate).ln_1p()) as u64 } else { u64::MAX };
    }

    /// A byte as it arrives. A hit start or stop bit loses it.
    fn pass(&mut self, byte: u8) -> Option<u8> {
        let (mut byte, mut lost) = (byte, false);
        for bit in 0..BITS {
            if self.bits_left == 0 {
                self.flipped += 1;
                self.draw();
                match bit {
                    0 | 9 => lost = true,
                    _ => byte ^= 1 << (bit - 1),
                }
            } else {
                self.bits_left -= 1;
            }
        }
        (!lost).then_some(byte)
    }
}

/// The host's end of the line, with the device behind it.
#[derive(Debug)]
pub(super) struct Line {
    device: Shared,
    server: Server,
    uart: Uart,
    outgoing: VecDeque<u8>,
    incoming: VecDeque<u8>,
    up: Errors,
    down: Errors,
    byte_times: u64,
    /// Byte times that pass until the host learns of bytes that came.
    delay: u64,
}

impl Line {
    pub(super) fn new(device: &Shared, rate: f64, delay: Duration, seed: u64) -> Self {
        Self {
            device: device.clone(),
            server: Server::new(),
            uart: Uart::default(),
            outgoing: VecDeque::new(),
            incoming: VecDeque::new(),
            up: Errors::new(rate, seed),
            down: Errors::new(rate, seed + 1_000_000),
            byte_times: 0,
            delay: byte_times(delay),
        }
    }

    pub(super) fn byte_times(&self) -> u64 {
        self.byte_times
    }

    pub(super) fn flipped(&self) -> u64 {
        self.up.flipped + self.down.flipped
    }

    fn tick(&mut self) {
        let up = self.outgoing.pop_front().and_then(|byte| self.up.pass(byte));
        self.uart.arrived.extend(up);
        self.server.poll(&mut self.uart, &mut *self.device.borrow_mut()).unwrap();
        let down = self.uart.leaving.pop_front().and_then(|byte| self.down.pass(byte));
        self.incoming.extend(down);
        self.byte_times += 1;
    }
}

fn byte_times(time: Duration) -> u64 {
    u64::try_from(time.as_micros()).unwrap() * u64::from(BAUD / BITS) / 1_000_000
}

impl Port for Line {
    fn name(&self) -> &'static str {
        "the line"
    }

    fn write(&mut self, bytes: &[u8]) -> Result<(), PortError> {
        self.outgoing.extend(bytes);
        Ok(())
    }

    fn read(&mut self, out: &mut [u8], wait: Duration) -> Result<usize, PortError> {
        let until = self.byte_times + byte_times(wait) + 1;
        while self.incoming.is_empty() && self.byte_times < until {
            self.tick();
        }
        let until = self.byte_times + if self.incoming.is_empty() { 0 } else { self.delay };
        while self.byte_times < until && self.incoming.len() < out.len() {
            self.tick();
        }
        let count = out.len().min(self.incoming.len());
        out.iter_mut().zip(self.incoming.drain(..count)).for_each(|(slot, byte)| *slot = byte);
        Ok(count)
    }

    fn now(&self) -> Duration {
        Duration::from_micros(self.byte_times * 1_000_000 / u64::from(BAUD / BITS))
    }
}
