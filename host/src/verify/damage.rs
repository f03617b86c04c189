//! Damage in words: where, what, how many entries, what it means.

use crate::journal_file;
use std::fmt;
use strake_core::journal::DamageKind;

/// Where something cannot be read.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Place {
    /// Bytes of the file outside of any record.
    File {
        /// Where they begin, bytes from the start of the file.
        offset: u64,
    },
    /// A whole sector.
    Sector {
        /// Its sequence.
        sequence: u32,
    },
    /// A block.
    Block {
        /// Sequence of its sector.
        sequence: u32,
        /// Offset in the sector.
        offset: u16,
    },
    /// Sectors in a row.
    Sectors {
        /// Sequence of the first.
        first: u32,
        /// Sequence of the last.
        last: u32,
    },
}

/// What is wrong there.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum What {
    /// The file itself is damaged.
    File(journal_file::Damage),
    /// The sector's header cannot be read.
    Header,
    /// The place still holds a sector of an earlier lap: the flash refused the new one.
    EarlierLap {
        /// Sequence of what stands there.
        found: u32,
    },
    /// The checkpoint cannot be read.
    Checkpoint,
    /// A block cannot be read.
    Block(DamageKind),
    /// A block cannot be read that was whole when later ones were written.
    Decayed,
    /// The sector is shorter in the file than the device had it.
    CutShort,
    /// The sectors are not in the file.
    Absent,
}

/// What the damage took along, as far as the numbers around it tell.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Missing {
    /// Entries; `None` when no number behind it is stated.
    pub entries: Option<u32>,
    /// Samples among them; `None` when a checkpoint around it cannot be read.
    pub samples: Option<u32>,
    /// Damaged places that share these numbers, this one included.
    pub places: u32,
}

/// A damaged place with what it took along.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Damage {
    /// Where.
    pub place: Place,
    /// What.
    pub what: What,
    /// How many.
    pub missing: Missing,
}

impl Damage {
    /// What it means for conclusions, in one sentence.
    #[must_use]
    pub const fn meaning(&self) -> &'static str {
        match (self.what, self.missing.entries) {
            (What::File(_), _) => {
                "what stood there is missing, as far as it stands nowhere else; sectors that are \
                 missing for it are named below"
            }
            (What::Checkpoint, Some(0)) => {
                "no entry is missing, but the state at this point cannot be compared"
            }
            (What::EarlierLap { .. }, Some(0)) => {
                "nothing is missing: the device passed the worn place over"
            }
            (What::Decayed, None) => {
                "readings and events are missing there, and how many cannot be told: a device that \
                 starts again counts on from what it can read; loads and alarms there are unknown"
            }
            (_, Some(0)) => {
                "no numbered entry is missing: a loss of power tore a write that was not durable yet"
            }
            (_, Some(_)) => {
                "readings and events are missing there: loads and alarms of that stretch may have \
                 been higher than the rest shows"
            }
            (_, None) => {
                "how many entries are missing cannot be told, for no later number is stated; loads \
                 and alarms there are unknown"
            }
        }
    }
}

impl fmt::Display for Place {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::File { offset } => write!(f, "byte {offset} of the file"),
            Self::Sector { sequence } => write!(f, "sector {sequence}"),
            Self::Block { sequence, offset } => write!(f, "sector {sequence}, offset {offset}"),
            Self::Sectors { first, last } if first == last => write!(f, "sector {first}"),
            Self::Sectors { first, last } => write!(f, "sectors {first} to {last}"),
        }
    }
}

impl fmt::Display for What {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::File(damage) => match damage.kind {
                journal_file::DamageKind::NoRecord => {
                    write!(f, "{} bytes that are no record", damage.length)
                }
                journal_file::DamageKind::Truncated => {
                    write!(f, "the file ends inside a record, {} bytes unused", damage.length)
                }
                journal_file::DamageKind::Unknown { tag } => {
                    write!(f, "a record with tag {tag} that this version does not know")
                }
            },
            Self::Header => f.write_str("its header cannot be read"),
            Self::EarlierLap { found } => {
                write!(f, "sector {found} of an earlier lap stands there")
            }
            Self::Checkpoint => f.write_str("its checkpoint cannot be read"),
            Self::Block(DamageKind::Torn) => {
                f.write_str("a block without a right check; the rest of its page is passed over")
            }
            Self::Decayed => f.write_str(
                "a block without a right check that was whole when later ones were written; the \
                 rest of its page is passed over",
            ),
            Self::Block(DamageKind::UnknownForm) => {
                f.write_str("a block of a form that this version does not know")
            }
            Self::Block(DamageKind::UnknownEntry) => {
                f.write_str("an entry that this version does not know")
            }
            Self::CutShort => f.write_str("the device overwrote its end before it was collected"),
            Self::Absent => f.write_str("not in the file"),
        }
    }
}

impl fmt::Display for Missing {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self.entries {
            None => return f.write_str("an unknown number of entries missing"),
            Some(0) => return f.write_str("no entry missing"),
            Some(1) => f.write_str("1 entry missing")?,
            Some(entries) => write!(f, "{entries} entries missing")?,
        }
        if let Some(samples) = self.samples {
            write!(f, ", {samples} of them samples")?;
        }
        if self.places > 1 {
            write!(f, ", over {} places together", self.places)?;
        }
        Ok(())
    }
}

impl fmt::Display for Damage {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{}: {}", self.place, self.what)?;
        if matches!(self.what, What::File(_)) {
            return Ok(());
        }
        write!(f, "; {}", self.missing)
    }
}
