//! A board made of memory: the traits that a real board implements, over virtual time.
//!
//! All handles are shared, so that the flash outlives a loss of power and the world outside can
//! move the level, press the button and read the contact while the application runs unchanged.

use super::nor::{Nor, NorError, SECTOR_BYTES};
use super::sensor::Sensor;
use crate::link::{DeviceEnd, Wire};
use embedded_hal::digital::{ErrorType as PinErrorType, InputPin, OutputPin};
use embedded_storage::nor_flash::{ErrorType, NorFlash, ReadNorFlash};
use std::cell::{Cell, RefCell};
use std::convert::Infallible;
use std::rc::Rc;
use strake_core::wire::Text;
use strake_firmware::board::{
    Board, Clock, CountSource, Hardware, ResetCause, RetainedMemory, SensorError, Watchdog,
};
use strake_firmware::device::RETAINED_BYTES;
use strake_firmware::rooms::Rooms;

/// Bytes of a program word: as on the emulated board and the chip's own flash.
pub const WORD_BYTES: usize = 4;
/// Plan slots, one sector each.
const PLAN_SECTORS: usize = 5;

/// The simulated board.
#[derive(Debug)]
pub struct SimBoard;

impl Board for SimBoard {
    type Room<T: 'static> = Box<T>;
    type Clock = SimClock;
    type Level = SimLevel;
    type Temperature = SimTemperature;
    type Journal = SharedNor;
    type Plans = SharedNor;
    type Link = DeviceEnd;
    type Contact = SimContact;
    type Button = SimButton;
    type Retained = SimRetained;
    type Watchdog = SimWatchdog;
}

/// What outlives a restart, and what the world outside can touch.
#[derive(Clone, Debug)]
pub struct Bench {
    /// Virtual time since the trial began, ms.
    pub now_ms: Rc<Cell<u64>>,
    /// Virtual time at which the controller started, ms.
    started_ms: Rc<Cell<u64>>,
    /// The level sensor and what it looks at.
    pub sensor: Rc<RefCell<Sensor>>,
    /// Flash of the journal.
    pub journal: SharedNor,
    /// Flash of the plans.
    pub plans: SharedNor,
    /// The line.
    pub wire: Wire,
    /// The contact conducts.
    pub contact: Rc<Cell<bool>>,
    /// The button is held down.
    pub button: Rc<Cell<bool>>,
    retained: Rc<RefCell<Vec<u8>>>,
}

impl Bench {
    /// A bench with blank flash of `journal_sectors` sectors.
    #[must_use]
    pub fn new(sensor: Sensor, journal_sectors: usize) -> Self {
        Self {
            now_ms: Rc::default(),
            started_ms: Rc::default(),
            sensor: Rc::new(RefCell::new(sensor)),
            journal: SharedNor::new(journal_sectors),
            plans: SharedNor::new(PLAN_SECTORS),
            wire: Wire::new(),
            contact: Rc::default(),
            button: Rc::default(),
            retained: Rc::new(RefCell::new(vec![0; RETAINED_BYTES])),
        }
    }

    /// Rooms for one start of the controller.
    #[must_use]
    pub fn rooms() -> Rooms<SimBoard> {
        Rooms { memory: Box::default(), server: Box::default(), waiting: Box::default() }
    }

    /// Virtual time at which the controller started, ms.
    #[must_use]
    pub fn started_ms(&self) -> u64 {
        self.started_ms.get()
    }

    /// The pieces for one start of the controller, which begins now. Without power the retained RAM
    /// is lost too.
    #[must_use]
    pub fn hardware(&self, reset_cause: ResetCause, device_id: Text) -> Hardware<SimBoard> {
        self.started_ms.set(self.now_ms.get());
        if reset_cause == ResetCause::PowerOn {
            self.retained.borrow_mut().fill(0);
        }
        let clock = SimClock { now_ms: self.now_ms.clone(), started_ms: self.started_ms.clone() };
        Hardware {
            clock,
            level: SimLevel { sensor: self.sensor.clone(), now_ms: self.now_ms.clone() },
            temperature: SimTemperature {
                sensor: self.sensor.clone(),
                now_ms: self.now_ms.clone(),
            },
            journal: self.journal.clone(),
            plans: self.plans.clone(),
            link: self.wire.device_end(),
            contact: SimContact(self.contact.clone()),
            button: SimButton(self.button.clone()),
            retained: SimRetained(self.retained.clone()),
            watchdog: SimWatchdog,
            device_id,
            reset_cause,
        }
    }
}

/// Virtual time since the start of the controller.
#[derive(Clone, Debug)]
pub struct SimClock {
    now_ms: Rc<Cell<u64>>,
    started_ms: Rc<Cell<u64>>,
}

impl Clock for SimClock {
    fn now_ms(&self) -> u64 {
        self.now_ms.get().saturating_sub(self.started_ms.get())
    }
}

/// The level channel.
#[derive(Clone, Debug)]
pub struct SimLevel {
    sensor: Rc<RefCell<Sensor>>,
    now_ms: Rc<Cell<u64>>,
}

impl CountSource for SimLevel {
    fn read_count(&mut self) -> Result<i32, SensorError> {
        self.sensor.borrow_mut().level_count(self.now_ms.get())
    }
}

/// The temperature channel.
#[derive(Clone, Debug)]
pub struct SimTemperature {
    sensor: Rc<RefCell<Sensor>>,
    now_ms: Rc<Cell<u64>>,
}

impl CountSource for SimTemperature {
    fn read_count(&mut self) -> Result<i32, SensorError> {
        self.sensor.borrow_mut().temperature_count(self.now_ms.get())
    }
}

/// A flash that outlives the application.
#[derive(Clone, Debug)]
pub struct SharedNor(Rc<RefCell<Nor<WORD_BYTES>>>);

impl SharedNor {
    fn new(sectors: usize) -> Self {
        Self(Rc::new(RefCell::new(Nor::new(sectors))))
    }

    /// Looks at or changes the flash itself.
    pub fn with<T>(&self, look: impl FnOnce(&mut Nor<WORD_BYTES>) -> T) -> T {
        look(&mut self.0.borrow_mut())
    }
}

impl ErrorType for SharedNor {
    type Error = NorError;
}

impl ReadNorFlash for SharedNor {
    const READ_SIZE: usize = 1;

    fn read(&mut self, offset: u32, bytes: &mut [u8]) -> Result<(), NorError> {
        self.0.borrow_mut().read(offset, bytes)
    }

    fn capacity(&self) -> usize {
        self.0.borrow().capacity()
    }
}

impl NorFlash for SharedNor {
    const WRITE_SIZE: usize = WORD_BYTES;
    const ERASE_SIZE: usize = SECTOR_BYTES;

    fn erase(&mut self, from: u32, to: u32) -> Result<(), NorError> {
        self.0.borrow_mut().erase(from, to)
    }

    fn write(&mut self, offset: u32, bytes: &[u8]) -> Result<(), NorError> {
        self.0.borrow_mut().write(offset, bytes)
    }
}

/// The contact.
#[derive(Clone, Debug)]
pub struct SimContact(Rc<Cell<bool>>);

impl PinErrorType for SimContact {
    type Error = Infallible;
}

impl OutputPin for SimContact {
    fn set_low(&mut self) -> Result<(), Infallible> {
        self.0.set(false);
        Ok(())
    }

    fn set_high(&mut self) -> Result<(), Infallible> {
        self.0.set(true);
        Ok(())
    }
}

/// The button: low while held.
#[derive(Clone, Debug)]
pub struct SimButton(Rc<Cell<bool>>);

impl PinErrorType for SimButton {
    type Error = Infallible;
}

impl InputPin for SimButton {
    fn is_high(&mut self) -> Result<bool, Infallible> {
        Ok(!self.0.get())
    }

    fn is_low(&mut self) -> Result<bool, Infallible> {
        Ok(self.0.get())
    }
}

/// Retained RAM.
#[derive(Clone, Debug)]
pub struct SimRetained(Rc<RefCell<Vec<u8>>>);

impl RetainedMemory for SimRetained {
    fn capacity(&self) -> usize {
        self.0.borrow().len()
    }

    fn read(&self, offset: usize, out: &mut [u8]) {
        let memory = self.0.borrow();
        for (index, byte) in out.iter_mut().enumerate() {
            *byte = memory.get(offset + index).copied().unwrap_or(0);
        }
    }

    fn write(&mut self, offset: usize, bytes: &[u8]) {
        let mut memory = self.0.borrow_mut();
        for (index, byte) in bytes.iter().enumerate() {
            if let Some(slot) = memory.get_mut(offset + index) {
                *slot = *byte;
            }
        }
    }
}

/// A watchdog that is satisfied: virtual time stands while the application works.
#[derive(Clone, Copy, Debug)]
pub struct SimWatchdog;

impl Watchdog for SimWatchdog {
    fn patience_ms(&self) -> u64 {
        u64::MAX
    }

    fn feed(&mut self) {}
}
