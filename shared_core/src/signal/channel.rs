//! What one channel delivered in one cycle.

use core::fmt;

/// Why a sensor channel gave no count. The numbers stand in the journal and never change.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
#[repr(u8)]
pub enum SensorError {
    /// Nothing answered within the bounded wait.
    Silent = 3,
    /// Bytes came, but no frame with a right check sum.
    Garbled = 4,
    /// A valid frame that is not the answer asked for (unit, function or length).
    Unexpected = 5,
    /// The sensor answered with an exception code.
    Exception = 6,
    /// The converter or its bus failed.
    Converter = 7,
}

impl fmt::Display for SensorError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Self::Silent => "no answer",
            Self::Garbled => "garbled answer",
            Self::Unexpected => "unexpected answer",
            Self::Exception => "exception answer",
            Self::Converter => "converter failed",
        })
    }
}

/// How good the integer of a channel is. The numbers stand in the journal and never change.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
pub enum Quality {
    /// The plan has no such channel, or it was not read in this cycle.
    #[default]
    NotRead,
    /// The whole burst came.
    Good,
    /// Fewer counts came than the burst asks for, but enough for a middle value.
    Sparse,
    /// No count came.
    Failed(SensorError),
}

impl Quality {
    /// The number that stands in the journal.
    #[must_use]
    pub const fn number(self) -> u8 {
        match self {
            Self::NotRead => 0,
            Self::Good => 1,
            Self::Sparse => 2,
            Self::Failed(SensorError::Silent) => 3,
            Self::Failed(SensorError::Garbled) => 4,
            Self::Failed(SensorError::Unexpected) => 5,
            Self::Failed(SensorError::Exception) => 6,
            Self::Failed(SensorError::Converter) => 7,
        }
    }

    /// The quality with this journal number; `None` for a number no version has written.
    #[must_use]
    pub const fn from_number(number: u8) -> Option<Self> {
        Some(match number {
            0 => Self::NotRead,
            1 => Self::Good,
            2 => Self::Sparse,
            3 => Self::Failed(SensorError::Silent),
            4 => Self::Failed(SensorError::Garbled),
            5 => Self::Failed(SensorError::Unexpected),
            6 => Self::Failed(SensorError::Exception),
            7 => Self::Failed(SensorError::Converter),
            _ => return None,
        })
    }
}

/// One integer and its quality: all that a channel hands on.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
pub struct Channel {
    /// Sixteenths of a raw count; zero unless the quality is good or sparse.
    pub count_16: i32,
    /// How good the integer is.
    pub quality: Quality,
}

impl Channel {
    /// A channel that failed, with the cause.
    #[must_use]
    pub const fn failed(cause: SensorError) -> Self {
        Self { count_16: 0, quality: Quality::Failed(cause) }
    }

    /// A channel with a whole burst behind it.
    #[must_use]
    pub const fn good(count_16: i32) -> Self {
        Self { count_16, quality: Quality::Good }
    }
}
