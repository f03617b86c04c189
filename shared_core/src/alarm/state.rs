//! The states of one alarm, and the table of their transitions.

/// State of one alarm (ISA-18.2 / IEC 62682 alarm state diagram). The numbers stand in the journal
/// and never change. Shelving, suppression and out of service are known to the table; the device
/// offers none of them.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
#[repr(u8)]
pub enum AlarmState {
    /// No condition, nothing to acknowledge.
    #[default]
    Normal = 0,
    /// The condition stands and nobody has acknowledged: audible.
    Unacknowledged = 1,
    /// The condition stands and is acknowledged: silent, still shown.
    Acknowledged = 2,
    /// The condition is gone before anyone acknowledged.
    ReturnedUnacknowledged = 3,
    /// The condition is gone, the latch holds, nobody has acknowledged.
    LatchedUnacknowledged = 4,
    /// The condition is gone, acknowledged, the latch waits for its reset.
    LatchedAcknowledged = 5,
    /// Hidden by an operator for a limited time.
    Shelved = 6,
    /// Hidden by logic.
    SuppressedByDesign = 7,
    /// Taken out by maintenance.
    OutOfService = 8,
}

impl AlarmState {
    /// The state with this number.
    #[must_use]
    pub const fn from_number(number: u8) -> Option<Self> {
        Some(match number {
            0 => Self::Normal,
            1 => Self::Unacknowledged,
            2 => Self::Acknowledged,
            3 => Self::ReturnedUnacknowledged,
            4 => Self::LatchedUnacknowledged,
            5 => Self::LatchedAcknowledged,
            6 => Self::Shelved,
            7 => Self::SuppressedByDesign,
            8 => Self::OutOfService,
            _ => return None,
        })
    }

    /// The number that stands in the journal.
    #[must_use]
    pub const fn number(self) -> u8 {
        match self {
            Self::Normal => 0,
            Self::Unacknowledged => 1,
            Self::Acknowledged => 2,
            Self::ReturnedUnacknowledged => 3,
            Self::LatchedUnacknowledged => 4,
            Self::LatchedAcknowledged => 5,
            Self::Shelved => 6,
            Self::SuppressedByDesign => 7,
            Self::OutOfService => 8,
        }
    }

    /// The state after an event (alarm state diagram of ISA-18.2 / IEC 62682); `None` where the
    /// diagram has no such transition. `latch`: the alarm stays until it is reset.
    #[must_use]
    pub const fn after(self, event: AlarmEvent, latch: bool) -> Option<Self> {
        if self.is_hidden() {
            return match (self, event) {
                (Self::Shelved, AlarmEvent::Unshelve)
                | (Self::SuppressedByDesign, AlarmEvent::Unsuppress)
                | (Self::OutOfService, AlarmEvent::ReturnToService) => Some(Self::Normal),
                _ => None,
            };
        }
        match (event, self) {
            (AlarmEvent::Raise, Self::Unacknowledged | Self::Acknowledged) => None,
            (AlarmEvent::Raise, _) | (AlarmEvent::SoundAgain, Self::Acknowledged) => {
                Some(Self::Unacknowledged)
            }
            (AlarmEvent::Return, Self::Unacknowledged) if latch => {
                Some(Self::LatchedUnacknowledged)
            }
            (AlarmEvent::Return, Self::Unacknowledged) => Some(Self::ReturnedUnacknowledged),
            (AlarmEvent::Return, Self::Acknowledged) if latch => Some(Self::LatchedAcknowledged),
            (AlarmEvent::Return, Self::Acknowledged)
            | (AlarmEvent::Acknowledge, Self::ReturnedUnacknowledged)
            | (AlarmEvent::Reset, Self::LatchedAcknowledged) => Some(Self::Normal),
            (AlarmEvent::Acknowledge, Self::Unacknowledged) => Some(Self::Acknowledged),
            (AlarmEvent::Acknowledge, Self::LatchedUnacknowledged) => {
                Some(Self::LatchedAcknowledged)
            }
            (AlarmEvent::Shelve, _) => Some(Self::Shelved),
            (AlarmEvent::Suppress, _) => Some(Self::SuppressedByDesign),
            (AlarmEvent::RemoveFromService, _) => Some(Self::OutOfService),
            _ => None,
        }
    }

    /// Whether the condition counts as standing: raised and not yet returned.
    #[must_use]
    pub const fn is_active(self) -> bool {
        matches!(self, Self::Unacknowledged | Self::Acknowledged)
    }

    /// Whether the alarm is kept from people; samples do not move it then.
    #[must_use]
    pub const fn is_hidden(self) -> bool {
        matches!(self, Self::Shelved | Self::SuppressedByDesign | Self::OutOfService)
    }
}

/// What can happen to an alarm.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum AlarmEvent {
    /// The condition stood for the on-delay.
    Raise,
    /// The condition was gone for the off-delay.
    Return,
    /// A person acknowledges.
    Acknowledge,
    /// A person resets a latch.
    Reset,
    /// The acknowledged condition outlasted its time.
    SoundAgain,
    /// An operator hides the alarm for a limited time.
    Shelve,
    /// Shelving ends; the next sample raises the alarm again if the condition stands.
    Unshelve,
    /// Logic hides the alarm.
    Suppress,
    /// Logic shows it again.
    Unsuppress,
    /// Maintenance takes the alarm out.
    RemoveFromService,
    /// Maintenance puts it back.
    ReturnToService,
}

#[cfg(test)]
mod tests;
