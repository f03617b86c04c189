//! The parts of the whole board, taken once.

use cortex_m::Peripherals;
use cortex_m::peripheral::SCB;
use strake_board_common::retained::{self, Failure, Mark, Retained};
use strake_firmware::board::ResetCause;

use crate::flash::{self, NorRegion};
use crate::pins::{Button, CONTACT_BIT, LAMP_BIT, Output};
use crate::timer::{self, MonotonicClock};
use crate::uart::{LINK, SENSOR_BUS, SerialPort};
use crate::watchdog::Stopped;
use crate::{interrupts, log, mpu};

const LINK_BAUD: u32 = 115_200;
const SENSOR_BAUD: u32 = 9_600;

/// Every part of the board, ready to use; the alarm contact is still open.
#[expect(missing_debug_implementations, reason = "the serial ports have none")]
pub struct Parts {
    /// Monotonic time.
    pub clock: MonotonicClock,
    /// Line to the host.
    pub link: SerialPort,
    /// Line to the sensors.
    pub sensor_bus: SerialPort,
    /// Flash of the journal ring.
    pub journal: NorRegion,
    /// Flash of the plan slots.
    pub plans: NorRegion,
    /// Alarm contact: high conducts, which means healthy.
    pub contact: Output,
    /// Lamp: high is lit.
    pub lamp: Output,
    /// Button: low while pressed.
    pub button: Button,
    /// Memory that survives a warm restart.
    pub retained: Retained,
    /// The watchdog, still to be started.
    pub watchdog: Stopped,
    /// The processor's identification register (Armv7-M, B3.2.3).
    pub processor_id: u32,
    /// Why the controller started.
    pub reset_cause: ResetCause,
    /// What ended the last run, where the program could say it.
    pub last_failure: Option<Failure>,
}

impl Parts {
    /// Starts every part, the first time it is called; later none is left to take.
    #[must_use]
    pub fn take() -> Option<Self> {
        let mut core = Peripherals::take()?;
        log::start();
        mpu::protect(&mut core.MPU, &mut core.SCB);
        let (reset_cause, last_failure) = retained::take_cause();
        timer::start();
        LINK.start(LINK_BAUD);
        SENSOR_BUS.start(SENSOR_BAUD);
        interrupts::enable();
        defmt::info!("start: {}, last failure: {}", reset_cause, last_failure);
        let (journal, plans) = flash::regions();
        Some(Self {
            clock: MonotonicClock::new(),
            link: SerialPort::new(&LINK),
            sensor_bus: SerialPort::new(&SENSOR_BUS),
            journal,
            plans,
            contact: Output::new(CONTACT_BIT),
            lamp: Output::new(LAMP_BIT),
            button: Button::new(),
            retained: Retained::new(),
            watchdog: Stopped::new(),
            processor_id: core.CPUID.base.read(),
            reset_cause,
            last_failure,
        })
    }
}

/// Restarts the program; retained memory stays.
pub fn restart() -> ! {
    retained::leave_mark(Mark::Software);
    SCB::sys_reset()
}
