//! Alarm contact, lamp and button.
//!
//! The contact and the lamp are bits of the LED register of the FPGA block (Arm DAI 0386, FPGA
//! system control), which reads zero after every reset: the contact is open until the program
//! closes it. The emulator does not model that block's buttons, they always read released; the
//! button is the last word of PSRAM instead, which lies in a file that the emulator's owner writes.
//! It gives no interrupt; a sleeping program looks at it four times a second.

use core::convert::Infallible;
use core::sync::atomic::{AtomicBool, Ordering};

use embedded_hal::digital::{ErrorType, InputPin, OutputPin, StatefulOutputPin};

use strake_board_common::register::Register;

/// Bit of the contact in the LED register.
pub const CONTACT_BIT: u32 = 1 << 0;
/// Bit of the lamp in the LED register.
pub const LAMP_BIT: u32 = 1 << 1;
/// Address of the button's word.
pub const BUTTON_ADDRESS: usize = 0x21FF_FFFC;
/// Value of the button's word while pressed; any other means released.
pub const BUTTON_PRESSED: u32 = 0x5052_4553;

#[expect(unsafe_code, reason = "names two registers")]
mod registers {
    use super::{BUTTON_ADDRESS, Register};

    // SAFETY: the LED register of this machine.
    pub(super) const LEDS: Register = unsafe { Register::at(0x4002_8000) };
    // SAFETY: the last word of PSRAM, in no region that Rust knows of.
    pub(super) const BUTTON: Register = unsafe { Register::at(BUTTON_ADDRESS) };
}
use registers::{BUTTON, LEDS};

fn set(bit: u32, on: bool) {
    critical_section::with(|_| {
        let others = LEDS.read() & !bit;
        LEDS.write(if on { others | bit } else { others });
    });
}

#[expect(unsafe_code, reason = "the end of a run finds it by its name")]
mod ending {
    #[unsafe(no_mangle)]
    extern "Rust" fn _strake_open_contact() {
        super::set(super::CONTACT_BIT, false);
    }
}

/// What the application was last told about the button.
static TOLD_PRESSED: AtomicBool = AtomicBool::new(false);

fn button_is_pressed() -> bool {
    let pressed = BUTTON.read() == BUTTON_PRESSED;
    TOLD_PRESSED.store(pressed, Ordering::Relaxed);
    pressed
}

/// Whether the button differs from what the application was last told: a change just before a
/// sleep ends it as one during the sleep does.
pub(crate) fn button_has_changed() -> bool {
    (BUTTON.read() == BUTTON_PRESSED) != TOLD_PRESSED.load(Ordering::Relaxed)
}

/// One output: high lights the lamp, and lets the contact conduct.
#[derive(Debug)]
pub struct Output {
    bit: u32,
}

impl Output {
    pub(crate) fn new(bit: u32) -> Self {
        Self { bit }
    }
}

impl ErrorType for Output {
    type Error = Infallible;
}

impl OutputPin for Output {
    fn set_low(&mut self) -> Result<(), Infallible> {
        set(self.bit, false);
        Ok(())
    }

    fn set_high(&mut self) -> Result<(), Infallible> {
        set(self.bit, true);
        Ok(())
    }
}

impl StatefulOutputPin for Output {
    fn is_set_high(&mut self) -> Result<bool, Infallible> {
        Ok(LEDS.read() & self.bit != 0)
    }

    fn is_set_low(&mut self) -> Result<bool, Infallible> {
        Ok(LEDS.read() & self.bit == 0)
    }
}

/// The button: low while pressed, as a contact to ground under a pull-up would be.
#[derive(Debug)]
pub struct Button(());

impl Button {
    pub(crate) fn new() -> Self {
        Self(())
    }
}

impl ErrorType for Button {
    type Error = Infallible;
}

impl InputPin for Button {
    fn is_high(&mut self) -> Result<bool, Infallible> {
        Ok(!button_is_pressed())
    }

    fn is_low(&mut self) -> Result<bool, Infallible> {
        Ok(button_is_pressed())
    }
}
