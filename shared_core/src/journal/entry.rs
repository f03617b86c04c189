//! What a journal can say. Entries are applied by the replay in the order in which they stand.

use crate::alarm::{AlarmState, FaultCause, MachineId};
use crate::signal::Channel;

/// One cycle's readings: with the plan and the events before it, all that `evaluate` needs.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
pub struct Sample {
    /// Milliseconds since the start of the controller that the boot number names; below 2^48.
    pub tick_ms: u64,
    /// The level sensor.
    pub level: Channel,
    /// The liquid's temperature sensor.
    pub temperature: Channel,
    /// Supply voltage, millivolts; zero when the board cannot tell.
    pub battery_mv: u16,
}

/// Why the controller started. The numbers stand in the journal and never change.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
#[repr(u8)]
pub enum ResetCause {
    /// Power came (back); RAM was lost.
    PowerOn = 1,
    /// The watchdog was not fed in time.
    Watchdog = 2,
    /// The program reset itself after a panic.
    Panic = 3,
    /// The program asked for a restart.
    Software = 4,
    /// A reset pin, a debugger, or a cause the hardware does not name.
    Other = 5,
}

impl ResetCause {
    /// The cause with this number.
    #[must_use]
    pub const fn from_number(number: u8) -> Option<Self> {
        Some(match number {
            1 => Self::PowerOn,
            2 => Self::Watchdog,
            3 => Self::Panic,
            4 => Self::Software,
            5 => Self::Other,
            _ => return None,
        })
    }
}

/// What made an alarm machine move. The numbers stand in the journal and never change.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
#[repr(u8)]
pub enum TransitionCause {
    /// The condition stood for the on-delay.
    Raised = 1,
    /// The condition was gone for the off-delay.
    Returned = 2,
    /// A person acknowledged.
    Acknowledged = 3,
    /// A person reset a latch.
    Reset = 4,
    /// The acknowledged condition outlasted the plan's time and sounds again.
    SoundsAgain = 5,
}

impl TransitionCause {
    /// The cause with this number.
    #[must_use]
    pub const fn from_number(number: u8) -> Option<Self> {
        Some(match number {
            1 => Self::Raised,
            2 => Self::Returned,
            3 => Self::Acknowledged,
            4 => Self::Reset,
            5 => Self::SoundsAgain,
            _ => return None,
        })
    }
}

/// An alarm machine moved; with the input that decided it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Transition {
    /// Tick of the sample or press that moved it, ms.
    pub tick_ms: u64,
    /// Which machine.
    pub machine: MachineId,
    /// State before.
    pub from: AlarmState,
    /// State after.
    pub to: AlarmState,
    /// What moved it.
    pub cause: TransitionCause,
    /// Utilisation bound that was judged (dimensionless); zero for fault machines.
    pub utilisation: f32,
    /// Running hash of all results up to and with this sample or press.
    pub hash: u64,
}

/// Who pressed.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
#[repr(u8)]
pub enum Presser {
    /// The button on the box.
    Button = 1,
    /// A command over the link.
    Link = 2,
}

impl Presser {
    /// The presser with this number.
    #[must_use]
    pub const fn from_number(number: u8) -> Option<Self> {
        Some(match number {
            1 => Self::Button,
            2 => Self::Link,
            _ => return None,
        })
    }
}

/// One entry of the journal. The numbers (see [`Entry::number`]) are never reused.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Entry {
    /// Readings of one cycle.
    Sample(Sample),
    /// An alarm machine moved.
    Transition(Transition),
    /// A fault was seen; repeated causes are counted and written at most once a minute.
    Fault {
        /// Tick of the last occurrence, ms.
        tick_ms: u64,
        /// What is wrong.
        cause: FaultCause,
        /// Occurrences since the last entry of this cause, at least one.
        count: u16,
        /// A number that helps to find it: the raw count, a length, an address.
        detail: i32,
    },
    /// The controller started.
    StartUp {
        /// Tick at which the entry was made, ms of this boot.
        tick_ms: u64,
        /// Number of this start.
        boot: u16,
        /// Why it started.
        cause: ResetCause,
        /// Samples that waited in RAM were carried over (warm restart).
        carried: u8,
        /// At most this many milliseconds of samples may be missing before this start;
        /// `u32::MAX` when unknown.
        missing_ms_max: u32,
        /// Starts without a sample between them that share this entry, at least one.
        count: u16,
    },
    /// The host told the time.
    ClockFix {
        /// Tick at which the host's time held, ms.
        tick_ms: u64,
        /// UTC, seconds since 1970-01-01.
        utc_s: u64,
    },
    /// Another plan took over. Samples after this entry are judged by it.
    PlanChange {
        /// Tick, ms.
        tick_ms: u64,
        /// Fingerprint of the plan that took over.
        fingerprint: u64,
        /// UTC seconds at which it was sealed.
        serial: u64,
    },
    /// A person acknowledged: sounding alarms fall silent, returned ones clear, latches whose
    /// condition is gone reset.
    Acknowledge {
        /// Tick, ms.
        tick_ms: u64,
        /// Who pressed.
        by: Presser,
    },
    /// Samples are known to be missing here.
    Gap {
        /// Tick at the end of the gap, ms.
        tick_ms: u64,
        /// Samples that were due and are not here.
        missing: u32,
    },
}

impl Entry {
    /// The kind's number in the journal.
    #[must_use]
    pub const fn number(&self) -> u8 {
        match self {
            Self::Sample(_) => 1,
            Self::Transition(_) => 2,
            Self::Fault { .. } => 3,
            Self::StartUp { .. } => 4,
            Self::ClockFix { .. } => 5,
            Self::PlanChange { .. } => 6,
            // 7 product change, 8 dip, 9 proof test: kept free for these.
            Self::Acknowledge { .. } => 10,
            Self::Gap { .. } => 11,
        }
    }

    /// Tick of the entry, ms.
    #[must_use]
    pub const fn tick_ms(&self) -> u64 {
        match self {
            Self::Sample(sample) => sample.tick_ms,
            Self::Transition(transition) => transition.tick_ms,
            Self::Fault { tick_ms, .. }
            | Self::StartUp { tick_ms, .. }
            | Self::ClockFix { tick_ms, .. }
            | Self::PlanChange { tick_ms, .. }
            | Self::Acknowledge { tick_ms, .. }
            | Self::Gap { tick_ms, .. } => *tick_ms,
        }
    }
}
