//! The pins: contact, lamp, sounder, button, and whether a host is plugged in.

use core::convert::Infallible;
use core::sync::atomic::{AtomicBool, Ordering};

use embedded_hal::digital::{ErrorType, InputPin, OutputPin};
use nrf52840_hal::gpio::{self, Input, OpenDrain, Output, Pin, PullUp, PushPull};
use nrf52840_hal::gpio::{Level, OpenDrainConfig};
use nrf52840_hal::pac::{GPIOTE, P0, gpiote, p0};

/// Number of the contact's pin, which the end of a run needs by itself.
const CONTACT: usize = 13;
/// Number of the host's pin: high while a host's cable is plugged in.
const HOST: usize = 5;
/// Number of the button's pin.
const BUTTON: usize = 25;

#[expect(unsafe_code, reason = "read by whoever sleeps, written at the end of a run")]
fn port() -> &'static p0::RegisterBlock {
    // SAFETY: a peripheral of this chip; outputs change by registers that set or clear single pins.
    unsafe { &*P0::PTR }
}

#[expect(unsafe_code, reason = "shared with its interrupt")]
fn events() -> &'static gpiote::RegisterBlock {
    // SAFETY: a peripheral of this chip that only this file uses.
    unsafe { &*GPIOTE::PTR }
}

fn is_high(pin: usize) -> bool {
    port().in_.read().bits() & (1 << pin) != 0
}

/// Whether a host's cable is plugged in.
pub(crate) fn host_is_there() -> bool {
    is_high(HOST)
}

/// What the application was last told about the button.
static TOLD_PRESSED: AtomicBool = AtomicBool::new(false);

/// Whether the button differs from what the application was last told: a change just before a
/// sleep ends it as one during the sleep does.
pub(crate) fn button_has_changed() -> bool {
    is_high(BUTTON) == TOLD_PRESSED.load(Ordering::Relaxed)
}

/// Lets any change of the button or of the host's cable interrupt. Each pin is watched for the
/// level that it does not have, so one that is held hides no other.
pub(crate) fn wake_by_change() {
    for (number, config) in port().pin_cnf.iter().enumerate() {
        if number == HOST || number == BUTTON {
            config.modify(|_, w| if is_high(number) { w.sense().low() } else { w.sense().high() });
        }
    }
}

pub(crate) fn on_change() {
    events().events_port.reset();
    // Until the next sleep, or a level that stays would interrupt again.
    for (number, config) in port().pin_cnf.iter().enumerate() {
        if number == HOST || number == BUTTON {
            config.modify(|_, w| w.sense().disabled());
        }
    }
}

#[expect(unsafe_code, reason = "the end of a run finds it by its name")]
mod ending {
    use super::{CONTACT, port};

    /// A pin that never was an output is open by itself.
    #[unsafe(no_mangle)]
    extern "Rust" fn _strake_open_contact() {
        // SAFETY: sets the one pin; high is disconnected, in its drive.
        port().outset.write(|w| unsafe { w.bits(1 << CONTACT) });
    }
}

/// The alarm contact. The pin pulls to ground, which closes the loop behind it, or is disconnected:
/// so it is after a reset and without power.
pub struct Contact(Pin<Output<OpenDrain>>);

impl ErrorType for Contact {
    type Error = Infallible;
}

impl OutputPin for Contact {
    fn set_low(&mut self) -> Result<(), Infallible> {
        let Ok(()) = self.0.set_high();
        Ok(())
    }

    fn set_high(&mut self) -> Result<(), Infallible> {
        let Ok(()) = self.0.set_low();
        Ok(())
    }
}

/// The button: low while pressed, a contact to ground under the chip's pull-up.
pub struct Button(Pin<Input<PullUp>>);

impl ErrorType for Button {
    type Error = Infallible;
}

impl InputPin for Button {
    fn is_high(&mut self) -> Result<bool, Infallible> {
        self.is_low().map(|low| !low)
    }

    fn is_low(&mut self) -> Result<bool, Infallible> {
        let pressed = self.0.is_low()?;
        TOLD_PRESSED.store(pressed, Ordering::Relaxed);
        Ok(pressed)
    }
}

/// An output that switches something on when high.
pub type Switch = Pin<Output<PushPull>>;
/// An input under the chip's pull-up.
pub type Listening = Pin<Input<PullUp>>;

/// All pins in use, each as its part needs it; outputs at rest.
pub(crate) struct Pins {
    pub(crate) contact: Contact,
    pub(crate) lamp: Switch,
    pub(crate) sounder: Switch,
    pub(crate) button: Button,
    pub(crate) sensor_supply: Switch,
    pub(crate) link_sends: Switch,
    pub(crate) link_hears: Listening,
    pub(crate) bus_sends: Switch,
    pub(crate) bus_hears: Listening,
    pub(crate) bus_drives: Switch,
    pub(crate) flash_clock: Switch,
    pub(crate) flash_sends: Switch,
    pub(crate) flash_hears: Listening,
    pub(crate) flash_select: Switch,
    pub(crate) i2c: nrf52840_hal::twim::Pins,
}

impl Pins {
    /// The wiring; README.md of this board has it as a table.
    pub(crate) fn take(port: P0) -> Self {
        let pins = gpio::p0::Parts::new(port);
        let open = OpenDrainConfig::Standard0Disconnect1;
        pins.p0_05.into_pulldown_input();
        let taken = Self {
            contact: Contact(pins.p0_13.into_open_drain_output(open, Level::High).degrade()),
            lamp: pins.p0_11.into_push_pull_output(Level::Low).degrade(),
            sounder: pins.p0_12.into_push_pull_output(Level::Low).degrade(),
            button: Button(pins.p0_25.into_pullup_input().degrade()),
            sensor_supply: pins.p0_14.into_push_pull_output(Level::Low).degrade(),
            link_sends: pins.p0_06.into_push_pull_output(Level::High).degrade(),
            link_hears: pins.p0_08.into_pullup_input().degrade(),
            bus_sends: pins.p0_15.into_push_pull_output(Level::High).degrade(),
            bus_hears: pins.p0_16.into_pullup_input().degrade(),
            bus_drives: pins.p0_17.into_push_pull_output(Level::Low).degrade(),
            flash_clock: pins.p0_19.into_push_pull_output(Level::Low).degrade(),
            flash_sends: pins.p0_20.into_push_pull_output(Level::Low).degrade(),
            flash_hears: pins.p0_21.into_pullup_input().degrade(),
            flash_select: pins.p0_22.into_push_pull_output(Level::High).degrade(),
            i2c: nrf52840_hal::twim::Pins {
                sda: pins.p0_26.into_floating_input().degrade(),
                scl: pins.p0_27.into_floating_input().degrade(),
            },
        };
        events().intenset.write(|w| w.port().set());
        taken
    }
}
