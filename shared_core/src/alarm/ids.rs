//! Names of the alarm machines. Their numbers stand in the journal and never change.

use core::fmt;

/// Most parts a plan may hold.
pub const PARTS_MAX: usize = 32;
/// Thresholds per part.
const THRESHOLDS: usize = 3;
/// Fault causes a device can report.
pub const FAULT_CAUSES: usize = 16;
/// Number of the machine of the time to limit.
const TIME_TO_LIMIT: u8 = 112;
/// All machines: three per part, one per fault cause, one for the time to limit.
pub const MACHINES: usize = PARTS_MAX * THRESHOLDS + FAULT_CAUSES + 1;

/// What a part's machine watches.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
#[repr(u8)]
pub enum Threshold {
    /// Outward utilisation bound at or above the warn value.
    Warn = 0,
    /// Outward utilisation bound at or above the alarm value.
    Alarm = 1,
    /// Inward utilisation bound at or above the inward value.
    Inward = 2,
}

/// What is wrong with the device's sight. The numbers stand in the journal and never change.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
#[repr(u8)]
pub enum FaultCause {
    /// Loop current in the low failure band of NAMUR NE 43 (above a wire break).
    CurrentLow = 0,
    /// Loop current in the high failure band of NAMUR NE 43.
    CurrentHigh = 1,
    /// Loop current below 0.5 mA: the wire is broken or the supply is gone.
    WireBreak = 2,
    /// The bus sensor does not answer.
    Silent = 3,
    /// The bus sensor's answers are garbled.
    Garbled = 4,
    /// The bus sensor's answers are not what was asked for.
    Unexpected = 5,
    /// The bus sensor answers with an exception.
    Exception = 6,
    /// The converter failed.
    Converter = 7,
    /// The level stands at the roof of a closed tank, where a surface sensor ends.
    AtRoof = 8,
    /// No level was valid for longer than the plan's time.
    Stale = 9,
    /// The journal could not be written.
    Journal = 10,
    /// Sectors or blocks of the journal were found damaged at start-up.
    JournalDamaged = 11,
    /// There is no plan, or the stored one is damaged.
    Plan = 12,
    /// The reading is above what an open tank can hold.
    AboveShell = 13,
}

impl FaultCause {
    /// Every cause, in the order of the numbers.
    pub const ALL: [Self; 14] = [
        Self::CurrentLow,
        Self::CurrentHigh,
        Self::WireBreak,
        Self::Silent,
        Self::Garbled,
        Self::Unexpected,
        Self::Exception,
        Self::Converter,
        Self::AtRoof,
        Self::Stale,
        Self::Journal,
        Self::JournalDamaged,
        Self::Plan,
        Self::AboveShell,
    ];

    /// The number that stands in the journal; below [`FAULT_CAUSES`].
    #[must_use]
    pub fn number(self) -> u8 {
        self as u8
    }

    /// The cause with this number.
    #[must_use]
    pub fn from_number(number: u8) -> Option<Self> {
        Self::ALL.get(usize::from(number)).copied()
    }
}

impl fmt::Display for FaultCause {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Self::CurrentLow => "fault current, low",
            Self::CurrentHigh => "fault current, high",
            Self::WireBreak => "wire break",
            Self::Silent => "sensor does not answer",
            Self::Garbled => "garbled answers",
            Self::Unexpected => "unexpected answers",
            Self::Exception => "exception answers",
            Self::Converter => "converter failed",
            Self::AtRoof => "level at the roof of a closed tank",
            Self::Stale => "no valid level for too long",
            Self::Journal => "journal cannot be written",
            Self::JournalDamaged => "damaged places in the journal",
            Self::Plan => "no valid plan",
            Self::AboveShell => "reading above the shell of an open tank",
        })
    }
}

/// One alarm machine: a part's threshold, a fault cause, or the time to limit. Always below
/// [`MACHINES`].
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
pub struct MachineId(u8);

impl MachineId {
    /// The machine of a part's threshold; `None` when `part` is not below [`PARTS_MAX`].
    #[must_use]
    pub fn of_part(part: u8, threshold: Threshold) -> Option<Self> {
        (usize::from(part) < PARTS_MAX).then(|| Self(part * 3 + threshold as u8))
    }

    /// The machine of a fault cause.
    #[must_use]
    pub fn of_fault(cause: FaultCause) -> Self {
        // 96 + at most 15 fits a byte.
        Self(96 + cause.number())
    }

    /// The machine of the time to limit.
    pub const TIME_TO_LIMIT: Self = Self(TIME_TO_LIMIT);

    /// Whether it watches what the liquid does (a part, or the time to limit), not the device.
    #[must_use]
    pub const fn is_load(self) -> bool {
        self.0 < 96 || self.0 == TIME_TO_LIMIT
    }

    /// The machine with this number; `None` for a number no version has written.
    #[must_use]
    pub fn from_number(number: u8) -> Option<Self> {
        let id = Self(number);
        (id.is_load() || id.fault().is_some()).then_some(id)
    }

    /// The number that stands in the journal.
    #[must_use]
    pub const fn number(self) -> u8 {
        self.0
    }

    /// Part and threshold, for a part's machine.
    #[must_use]
    pub const fn part(self) -> Option<(u8, Threshold)> {
        if self.0 >= 96 {
            return None;
        }
        let threshold = match self.0 % 3 {
            0 => Threshold::Warn,
            1 => Threshold::Alarm,
            _ => Threshold::Inward,
        };
        Some((self.0 / 3, threshold))
    }

    /// The cause, for a fault machine.
    #[must_use]
    pub fn fault(self) -> Option<FaultCause> {
        self.0.checked_sub(96).and_then(FaultCause::from_number)
    }
}
