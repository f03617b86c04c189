//! A channel inside this process: the device runs while the host waits.
//!
//! Nothing here takes real time. The port's own time moves by one millisecond for each turn given
//! to the device, and by the rest of a wait in which the device had nothing to say; the device's
//! time does not move at all.

use super::{Port, PortError};
use std::cell::RefCell;
use std::collections::VecDeque;
use std::convert::Infallible;
use std::rc::Rc;
use std::time::Duration;

const TURN: Duration = Duration::from_millis(1);
/// Turns without a byte from the device after which it is taken to have nothing to say.
const IDLE_TURNS: u32 = 8;

/// The two queues of a wire. Clones share them.
#[derive(Clone, Debug, Default)]
pub struct Wire {
    to_device: Rc<RefCell<VecDeque<u8>>>,
    to_host: Rc<RefCell<VecDeque<u8>>>,
}

impl Wire {
    /// A wire with nothing on it.
    #[must_use]
    pub fn new() -> Self {
        Self::default()
    }

    /// The end that the device's server polls.
    #[must_use]
    pub fn device_end(&self) -> DeviceEnd {
        DeviceEnd { wire: self.clone() }
    }
}

/// The device's end: never waits, takes everything.
#[derive(Clone, Debug)]
pub struct DeviceEnd {
    wire: Wire,
}

impl embedded_io::ErrorType for DeviceEnd {
    type Error = Infallible;
}

impl embedded_io::Read for DeviceEnd {
    fn read(&mut self, out: &mut [u8]) -> Result<usize, Infallible> {
        Ok(take(&self.wire.to_device, out))
    }
}

impl embedded_io::ReadReady for DeviceEnd {
    fn read_ready(&mut self) -> Result<bool, Infallible> {
        Ok(!self.wire.to_device.borrow().is_empty())
    }
}

impl embedded_io::Write for DeviceEnd {
    fn write(&mut self, bytes: &[u8]) -> Result<usize, Infallible> {
        self.wire.to_host.borrow_mut().extend(bytes);
        Ok(bytes.len())
    }

    fn flush(&mut self) -> Result<(), Infallible> {
        Ok(())
    }
}

impl embedded_io::WriteReady for DeviceEnd {
    fn write_ready(&mut self) -> Result<bool, Infallible> {
        Ok(true)
    }
}

fn take(queue: &RefCell<VecDeque<u8>>, out: &mut [u8]) -> usize {
    let mut queue = queue.borrow_mut();
    let count = out.len().min(queue.len());
    for (slot, byte) in out.iter_mut().zip(queue.drain(..count)) {
        *slot = byte;
    }
    count
}

/// The host's end of a wire. `turn` lets the device poll its link once.
pub struct InProcess<F> {
    wire: Wire,
    turn: F,
    now: Duration,
}

impl<F> std::fmt::Debug for InProcess<F> {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.debug_struct("InProcess")
            .field("wire", &self.wire)
            .field("now", &self.now)
            .finish_non_exhaustive()
    }
}

impl<F: FnMut()> InProcess<F> {
    /// The host's end of `wire`.
    pub fn new(wire: &Wire, turn: F) -> Self {
        Self { wire: wire.clone(), turn, now: Duration::ZERO }
    }
}

impl<F: FnMut()> Port for InProcess<F> {
    fn name(&self) -> &'static str {
        "the simulated device"
    }

    fn write(&mut self, bytes: &[u8]) -> Result<(), PortError> {
        self.wire.to_device.borrow_mut().extend(bytes);
        Ok(())
    }

    fn read(&mut self, out: &mut [u8], wait: Duration) -> Result<usize, PortError> {
        let until = self.now + wait;
        let mut idle = 0;
        loop {
            let count = take(&self.wire.to_host, out);
            if count > 0 {
                return Ok(count);
            }
            if idle == IDLE_TURNS || self.now >= until {
                self.now = self.now.max(until);
                return Ok(0);
            }
            let waiting = self.wire.to_device.borrow().len();
            (self.turn)();
            self.now += TURN;
            idle = if self.wire.to_device.borrow().len() < waiting { 0 } else { idle + 1 };
        }
    }

    fn now(&self) -> Duration {
        self.now
    }
}
