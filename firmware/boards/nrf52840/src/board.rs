//! The parts of the whole board, taken once.

use core::fmt::Write as _;

use cortex_m::peripheral::SCB;
use heapless::String;
use nrf52840_hal::clocks::{Clocks, LfOscConfiguration};
use nrf52840_hal::pac::{FICR, POWER, Peripherals, TWIM0, twim0::frequency::FREQUENCY_A};
use nrf52840_hal::twim::Twim;
use strake_board_common::retained::{self, Failure, Mark, Retained};
use strake_core::wire::Text;
use strake_firmware::board::ResetCause;
use strake_firmware::spi_nor::SpiNor;

use crate::nvmc::PlanFlash;
use crate::pins::{Button, Contact, Pins, Switch};
use crate::reset::Reason;
use crate::timer::{self, Delay, MonotonicClock};
use crate::uart::{LINK, SENSOR_BUS, SerialPort};
use crate::{interrupts, mpu, spi, watchdog};

/// Flash of the journal: 8 MiB, words of one byte.
pub type Flash = SpiNor<spi::Bus, Delay, { 8 << 20 }>;

/// Every part of the board, ready to use; the alarm contact is still open.
pub struct Parts {
    /// Monotonic time.
    pub clock: MonotonicClock,
    /// Line to the host.
    pub link: SerialPort,
    /// Line to the sensors.
    pub sensor_bus: SerialPort,
    /// Supply of the sensors: high is on.
    pub sensor_supply: Switch,
    /// Flash of the journal ring.
    pub journal: Flash,
    /// Flash of the plan slots.
    pub plans: PlanFlash,
    /// Alarm contact: high conducts, which means healthy.
    pub contact: Contact,
    /// Lamp: high is lit.
    pub lamp: Switch,
    /// Sounder: high sounds.
    pub sounder: Switch,
    /// Button: low while pressed.
    pub button: Button,
    /// The I2C bus, for sensors that the application has no driver for yet.
    pub i2c: Twim<TWIM0>,
    /// Memory that survives a warm restart.
    pub retained: Retained,
    /// The watchdog, counting.
    pub watchdog: watchdog::Running,
    /// The chip's own name.
    pub device_id: Text,
    /// Why the controller started.
    pub reset_cause: ResetCause,
    /// What ended the last run, where the program could say it.
    pub last_failure: Option<Failure>,
}

impl Parts {
    /// Starts every part, the first time it is called; later none is left to take.
    #[must_use]
    pub fn take() -> Option<Self> {
        let mut core = cortex_m::Peripherals::take()?;
        let chip = Peripherals::take()?;
        mpu::protect(&mut core.MPU, &mut core.SCB);
        // The source of the slow clock can be chosen only while nothing runs on it.
        let clocks =
            Clocks::new(chip.CLOCK).set_lfclk_src_external(LfOscConfiguration::NoExternalNoBypass);
        // As early as can be: whatever hangs from here on ends in a restart.
        let watchdog = watchdog::start(chip.WDT)?;
        let (reset_cause, last_failure) = cause(&chip.POWER);
        // A quarter of a second; the watchdog makes do with the oscillator inside until then. After
        // a restart it still runs, and the clock with it, but without this no time would count.
        clocks.start_lfclk();
        timer::start();
        let pins = Pins::take(chip.P0);
        LINK.wire(pins.link_sends, pins.link_hears, None);
        SENSOR_BUS.wire(pins.bus_sends, pins.bus_hears, Some(pins.bus_drives));
        interrupts::enable();
        defmt::info!("start: {}, last failure: {}", reset_cause, last_failure);
        let bus = spi::Bus::new(
            chip.SPIM2,
            pins.flash_clock,
            pins.flash_sends,
            pins.flash_hears,
            pins.flash_select,
        );
        let mut i2c = Twim::new(chip.TWIM0, pins.i2c, FREQUENCY_A::K100);
        i2c.disable();
        Some(Self {
            clock: MonotonicClock::new(),
            link: SerialPort::new(&LINK),
            sensor_bus: SerialPort::new(&SENSOR_BUS),
            sensor_supply: pins.sensor_supply,
            journal: SpiNor::new(bus, Delay::new()),
            plans: PlanFlash::new(chip.NVMC),
            contact: pins.contact,
            lamp: pins.lamp,
            sounder: pins.sounder,
            button: pins.button,
            i2c,
            retained: Retained::new(),
            watchdog,
            device_id: device_id(&chip.FICR),
            reset_cause,
            last_failure,
        })
    }
}

/// Why the controller started: what the chip says, and where the program asked for it, why.
fn cause(power: &POWER) -> (ResetCause, Option<Failure>) {
    let register = power.resetreas.read().bits();
    // What is written back is cleared.
    power.resetreas.modify(|_, w| w);
    let (marked, failure) = retained::take_cause();
    let cause = match (Reason::of(register), marked) {
        (Reason::Power, _) => return (ResetCause::PowerOn, None),
        (Reason::Watchdog, _) => ResetCause::Watchdog,
        (Reason::LockUp, _) | (Reason::Request, ResetCause::Panic) => ResetCause::Panic,
        (Reason::Request, ResetCause::Software) => ResetCause::Software,
        (Reason::Request | Reason::Other, _) => ResetCause::Other,
    };
    (cause, failure)
}

/// The number that the chip got when it was made, in hexadecimal.
fn device_id(factory: &FICR) -> Text {
    let mut name = String::<{ Text::MAX_BYTES }>::new();
    for word in &factory.deviceid {
        // Sixteen digits fit.
        let _ = write!(name, "{:08X}", word.read().bits());
    }
    Text::new(&name).unwrap_or_default()
}

/// Restarts the program; retained memory stays.
pub fn restart() -> ! {
    retained::leave_mark(Mark::Software);
    SCB::sys_reset()
}
