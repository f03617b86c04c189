//! What a board must offer beyond the embedded-hal, embedded-io and embedded-storage traits.
//!
//! A board is a thin package: it wires pins, buses and memories to these traits and hands them to
//! the application. It holds no decision of its own; the application holds no register address.

use core::fmt;
use core::ops::DerefMut;

use embedded_hal::digital::{InputPin, OutputPin};
use embedded_io::{Read, ReadReady, Write, WriteReady};
use embedded_storage::nor_flash::NorFlash;
use strake_core::plan::SignalKind;
use strake_core::wire::Text;

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

/// The hardware watchdog, already started by the board. Only the application feeds it.
pub trait Watchdog {
    /// It bites this long after it was last fed, ms.
    fn patience_ms(&self) -> u64;
    /// Starts the count anew.
    fn feed(&mut self);
}

/// A channel that delivers raw counts. What a count means stands in the plan, never here.
pub trait CountSource {
    /// Told once a plan takes force: where it says that the count stands. A source whose wiring the
    /// board fixes has no use for it.
    fn read_from(&mut self, signal: SignalKind) {
        let _ = signal;
    }
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

/// The pieces that make a board: a list of types, so that the application has one parameter.
pub trait Board {
    /// Where a big member of the application lives: `&'static mut T` on a device, `Box<T>` on a
    /// host.
    type Room<T: 'static>: DerefMut<Target = T>;
    /// Monotonic time.
    type Clock: Clock;
    /// The level sensor.
    type Level: CountSource;
    /// The liquid's temperature sensor; [`NoSource`] where there is none.
    type Temperature: CountSource;
    /// Flash region of the journal's ring: whole erase blocks of 4,096 bytes, words of 1 or 4.
    type Journal: NorFlash;
    /// Flash region of the plan slots, the same kind.
    type Plans: NorFlash;
    /// The line to the laptop.
    type Link: Read + ReadReady + Write + WriteReady;
    /// Drives the contact: high conducts, which means healthy. It must open by itself without
    /// power.
    type Contact: OutputPin;
    /// The button: low while pressed.
    type Button: InputPin;
    /// RAM that survives a warm restart.
    type Retained: RetainedMemory;
    /// The watchdog.
    type Watchdog: Watchdog;
}

/// A board's pieces, handed to the application once.
pub struct Hardware<B: Board> {
    /// Monotonic time.
    pub clock: B::Clock,
    /// The level sensor.
    pub level: B::Level,
    /// The temperature sensor.
    pub temperature: B::Temperature,
    /// Flash of the journal.
    pub journal: B::Journal,
    /// Flash of the plans.
    pub plans: B::Plans,
    /// The line to the laptop.
    pub link: B::Link,
    /// The contact.
    pub contact: B::Contact,
    /// The button.
    pub button: B::Button,
    /// Retained RAM.
    pub retained: B::Retained,
    /// The watchdog.
    pub watchdog: B::Watchdog,
    /// The device's own name, unique among an owner's devices.
    pub device_id: Text,
    /// Why the controller started.
    pub reset_cause: ResetCause,
}

impl<B: Board> fmt::Debug for Hardware<B> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.debug_struct("Hardware").field("device_id", &self.device_id).finish_non_exhaustive()
    }
}

/// A channel that the board does not have.
#[derive(Clone, Copy, Debug, Default)]
pub struct NoSource;

impl CountSource for NoSource {
    fn read_count(&mut self) -> Result<i32, SensorError> {
        Err(SensorError::Silent)
    }
}
