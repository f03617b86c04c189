//! The states of one alarm.

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
}
