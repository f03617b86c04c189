//! What the box shows.

use super::State;
use crate::alarm::{AlarmState, MachineId};

/// The three states of the box, told by rhythm, never by colour.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
#[repr(u8)]
pub enum Rhythm {
    /// The device sees, and no load passes its margin. It says nothing of the tank.
    #[default]
    Healthy = 0,
    /// The device cannot see: as loud as "act now".
    CannotSee = 1,
    /// A load passed its margin.
    ActNow = 2,
}

/// What the contact, the lamp and the sounder do.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Output {
    /// The contact conducts; it opens on any alarm or fault, and by itself without power.
    pub contact_closed: bool,
    /// Rhythm of the lamp.
    pub rhythm: Rhythm,
    /// The sounder is on.
    pub sounding: bool,
}

impl Output {
    /// The output that follows from the machines: their OR, "act now" before "cannot see". Until a
    /// level is read for the first time the device cannot see, whatever the machines say.
    #[must_use]
    pub fn of(state: &State) -> Self {
        let mut output = if state.sight.last_level.is_some() {
            Self { contact_closed: true, rhythm: Rhythm::Healthy, sounding: false }
        } else {
            Self { contact_closed: false, rhythm: Rhythm::CannotSee, sounding: false }
        };
        for (number, machine) in (0_u8..).zip(state.machines()) {
            let (opens, shows, sounds) = match machine.state {
                AlarmState::Normal
                | AlarmState::Shelved
                | AlarmState::SuppressedByDesign
                | AlarmState::OutOfService => continue,
                AlarmState::Unacknowledged | AlarmState::LatchedUnacknowledged => {
                    (true, true, true)
                }
                AlarmState::Acknowledged | AlarmState::LatchedAcknowledged => (true, true, false),
                AlarmState::ReturnedUnacknowledged => (false, true, false),
            };
            output.contact_closed &= !opens;
            output.sounding |= sounds;
            if shows {
                let of_part = MachineId::from_number(number).is_some_and(MachineId::is_load);
                output.rhythm = match (of_part, output.rhythm) {
                    (true, _) | (false, Rhythm::ActNow) => Rhythm::ActNow,
                    (false, _) => Rhythm::CannotSee,
                };
            }
        }
        output
    }
}

#[cfg(test)]
mod tests;
