//! What can fail.

use core::fmt;

/// Why the journal could not be opened.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
pub enum OpenError<E> {
    /// The region has fewer than [`SECTORS_MIN`](super::SECTORS_MIN) sectors.
    TooSmall {
        /// Sectors of the region.
        sectors: u32,
    },
    /// The flash could not be read. Nothing was changed.
    Flash(E),
}

impl<E> From<E> for OpenError<E> {
    fn from(error: E) -> Self {
        Self::Flash(error)
    }
}

/// Why something could not be written. The journal stays usable; the next call tries elsewhere.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
pub enum JournalError<E> {
    /// The flash refused at every place that was tried; the last refusal.
    Flash(E),
    /// After refusals there was no room for what waited; it is counted as lost.
    GivenUp,
    /// The sequence numbers are used up: the ring was filled with a forged one.
    SequenceExhausted,
    /// The entry has no place among events, or the state is too long: an error of the caller.
    Unencodable,
}

/// Why a stored sector could not be read.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
pub enum ReadError<E> {
    /// The ring no longer holds the sector, or not yet.
    Gone,
    /// The bytes asked for end behind the sector.
    OutOfRange,
    /// The flash could not be read.
    Flash(E),
}

impl<E> fmt::Display for OpenError<E> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::TooSmall { sectors } => {
                write!(f, "journal region has {sectors} sectors, needs {}", super::SECTORS_MIN)
            }
            Self::Flash(_) => f.write_str("flash cannot be read"),
        }
    }
}

impl<E> fmt::Display for JournalError<E> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Self::Flash(_) => "flash refused to program or erase",
            Self::GivenUp => "no room is left for the samples that waited",
            Self::SequenceExhausted => "sequence numbers of sectors are used up",
            Self::Unencodable => "entry or state has no place in a block",
        })
    }
}

impl<E> fmt::Display for ReadError<E> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Self::Gone => "sector is gone",
            Self::OutOfRange => "offset lies behind the sector",
            Self::Flash(_) => "flash cannot be read",
        })
    }
}

impl<E: fmt::Debug> core::error::Error for OpenError<E> {}
impl<E: fmt::Debug> core::error::Error for JournalError<E> {}
impl<E: fmt::Debug> core::error::Error for ReadError<E> {}
