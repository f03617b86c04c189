//! What a board must offer beyond the embedded-hal, embedded-io and embedded-storage traits.
//!
//! A board is a thin package: it wires pins, buses and memories to these traits and hands them to
//! the application. It holds no decision of its own; the application holds no register address.

pub use strake_core::journal::entry::ResetCause;
pub use strake_core::signal::SensorError;

/// Monotonic time.
pub trait Clock {
    /// Milliseconds since this start of the controller; never goes back, never jumps.
    fn now_ms(&self) -> u64;
}

/// A few hundred bytes of RAM that survive a warm restart (watchdog, panic, software reset) but not
/// a loss of power. Content after a cold start is arbitrary; the reader must check it.
pub trait RetainedMemory {
    /// Bytes offered.
    fn capacity(&self) -> usize;
    /// Fills `out` from `offset`. Bytes beyond the capacity read as zero.
    fn read(&self, offset: usize, out: &mut [u8]);
    /// Stores `bytes` at `offset`. Bytes beyond the capacity are dropped.
    fn write(&mut self, offset: usize, bytes: &[u8]);
}

/// The hardware watchdog, already started by the board. Only a completed cycle may feed it.
pub trait Watchdog {
    /// Starts the count anew.
    fn feed(&mut self);
}

/// A channel that delivers raw counts. What a count means stands in the plan, never here.
pub trait CountSource {
    /// Switches the sensor on. Called before a burst; the board waits the warm-up it knows of.
    fn wake(&mut self) {}
    /// One raw count: microamperes of a current loop, or the register value of a bus sensor.
    ///
    /// # Errors
    /// The cause, when no count could be had within the bounded wait.
    fn read_count(&mut self) -> Result<i32, SensorError>;
    /// Switches the sensor off again.
    fn rest(&mut self) {}
}
