//! What carries the bytes.

use super::PortError;
use std::time::Duration;

/// A two-way stream of bytes with its own time, so that nothing above it waits on the real clock.
pub trait Port {
    /// What to call it in a message.
    fn name(&self) -> &str;

    /// Sends all of `bytes`.
    ///
    /// # Errors
    /// Why the port can no longer be used.
    fn write(&mut self, bytes: &[u8]) -> Result<(), PortError>;

    /// Waits for bytes, at most `wait` of the port's own time. Returns how many came; zero when
    /// none did.
    ///
    /// # Errors
    /// Why the port can no longer be used.
    fn read(&mut self, out: &mut [u8], wait: Duration) -> Result<usize, PortError>;

    /// The port's own time since some start of its own.
    fn now(&self) -> Duration;
}

impl<P: Port + ?Sized> Port for &mut P {
    fn name(&self) -> &str {
        (**self).name()
    }

    fn write(&mut self, bytes: &[u8]) -> Result<(), PortError> {
        (**self).write(bytes)
    }

    fn read(&mut self, out: &mut [u8], wait: Duration) -> Result<usize, PortError> {
        (**self).read(out, wait)
    }

    fn now(&self) -> Duration {
        (**self).now()
    }
}

impl<P: Port + ?Sized> Port for Box<P> {
    fn name(&self) -> &str {
        (**self).name()
    }

    fn write(&mut self, bytes: &[u8]) -> Result<(), PortError> {
        (**self).write(bytes)
    }

    fn read(&mut self, out: &mut [u8], wait: Duration) -> Result<usize, PortError> {
        (**self).read(out, wait)
    }

    fn now(&self) -> Duration {
        (**self).now()
    }
}
