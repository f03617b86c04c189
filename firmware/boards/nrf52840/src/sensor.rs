//! The supply of the sensor: on while it is measured, together with its bus.

use embedded_hal::delay::DelayNs as _;
use embedded_hal::digital::OutputPin;
use strake_core::plan::SignalKind;
use strake_firmware::board::{CountSource, SensorError};

use crate::pins::Switch;
use crate::timer::Delay;
use crate::uart::SENSOR_BUS;

/// From its supply to a settled reading, milliseconds. README.md of this board says whose it is.
const WARM_UP_MS: u32 = 300;

/// A source on the sensor bus whose supply is switched.
pub struct Switched<S> {
    source: S,
    supply: Switch,
}

impl<S> Switched<S> {
    /// `source`, fed through `supply`.
    pub const fn new(source: S, supply: Switch) -> Self {
        Self { source, supply }
    }
}

impl<S: CountSource> CountSource for Switched<S> {
    fn read_from(&mut self, signal: SignalKind) {
        self.source.read_from(signal);
    }

    fn wake(&mut self) {
        let Ok(()) = self.supply.set_high();
        SENSOR_BUS.switch(true);
        Delay::new().delay_ms(WARM_UP_MS);
        self.source.wake();
    }

    fn read_count(&mut self) -> Result<i32, SensorError> {
        self.source.read_count()
    }

    fn rest(&mut self) {
        self.source.rest();
        SENSOR_BUS.switch(false);
        let Ok(()) = self.supply.set_low();
    }
}
