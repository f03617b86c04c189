//! A serial line through the embedded-io traits, over whatever moves its bytes.

use core::convert::Infallible;

use embedded_io::{ErrorType, Read, ReadReady, Write, WriteReady};

/// What moves a line's bytes, mostly in interrupts.
pub trait Line {
    /// Takes bytes that were received, as many as there are and fit; gives their number.
    fn take(&self, out: &mut [u8]) -> usize;
    /// Takes bytes over for sending, as many as there is room for; gives their number.
    fn give(&self, bytes: &[u8]) -> usize;
    /// Whether [`take`](Self::take) would give a byte.
    fn has_received(&self) -> bool;
    /// Whether [`give`](Self::give) would take a byte.
    fn has_room(&self) -> bool;
    /// Whether all that was given has gone.
    fn has_sent(&self) -> bool;
}

/// One serial line. It cannot fail: what goes wrong on the wire shows in the bytes.
#[derive(Debug)]
pub struct SerialPort<L: 'static> {
    line: &'static L,
}

impl<L> SerialPort<L> {
    /// The port of `line`; make one only, a second one would share its bytes.
    #[must_use]
    pub const fn new(line: &'static L) -> Self {
        Self { line }
    }
}

impl<L> ErrorType for SerialPort<L> {
    type Error = Infallible;
}

impl<L: Line> ReadReady for SerialPort<L> {
    fn read_ready(&mut self) -> Result<bool, Infallible> {
        Ok(self.line.has_received())
    }
}

impl<L: Line> Read for SerialPort<L> {
    /// Waits for the first byte, as embedded-io asks; ask `read_ready` first to avoid that.
    fn read(&mut self, out: &mut [u8]) -> Result<usize, Infallible> {
        if out.is_empty() {
            return Ok(0);
        }
        loop {
            let taken = self.line.take(out);
            if taken > 0 {
                return Ok(taken);
            }
        }
    }
}

impl<L: Line> WriteReady for SerialPort<L> {
    fn write_ready(&mut self) -> Result<bool, Infallible> {
        Ok(self.line.has_room())
    }
}

impl<L: Line> Write for SerialPort<L> {
    fn write(&mut self, bytes: &[u8]) -> Result<usize, Infallible> {
        if bytes.is_empty() {
            return Ok(0);
        }
        loop {
            let given = self.line.give(bytes);
            if given > 0 {
                return Ok(given);
            }
        }
    }

    fn flush(&mut self) -> Result<(), Infallible> {
        while !self.line.has_sent() {}
        Ok(())
    }
}
