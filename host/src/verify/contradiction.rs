//! Statements of a journal that cannot both be true.

use std::fmt;

/// What the file says about itself and does not hold. Numbers are sequences of sectors unless named
/// otherwise.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Contradiction {
    /// A plan's bytes do not have the fingerprint they are stored under.
    PlanFingerprint {
        /// As stored.
        stated: u64,
        /// Of the bytes.
        computed: u64,
    },
    /// A plan's bytes are no plan, or hold another serial than the one stored beside them.
    PlanContent {
        /// Its fingerprint.
        fingerprint: u64,
    },
    /// A record holds a sector that says it is another one.
    SectorNumber {
        /// As the record says.
        stated: u32,
        /// As the header says.
        found: u32,
    },
    /// The word of the flash is another one in a header than in the device's identity.
    Word {
        /// The sector.
        sequence: u32,
    },
    /// A sector's plan is not the one that was in force before it.
    PlanInForce {
        /// The sector.
        sequence: u32,
        /// Fingerprint in force by the entries before.
        before: u64,
        /// Fingerprint in the header.
        stated: u64,
    },
    /// The next number says that entries are missing, but nothing is damaged.
    EntriesRemoved {
        /// Where the next number stands; `None` for the head.
        sequence: Option<u32>,
        /// How many.
        entries: u32,
    },
    /// More entries can be read than the next number leaves room for.
    EntriesAdded {
        /// Where the next number stands; `None` for the head.
        sequence: Option<u32>,
        /// How many.
        entries: u32,
    },
    /// The checkpoint counts more or fewer samples than the journal holds and states as lost.
    Samples {
        /// The sector.
        sequence: u32,
        /// By the checkpoint before and the samples since.
        counted: u32,
        /// By the checkpoint.
        stated: u32,
    },
    /// An alarm machine is in another state than its moves led to.
    Machine {
        /// The sector.
        sequence: u32,
        /// Its number.
        machine: u8,
    },
    /// The running hash changed without an entry that changes it.
    Hash {
        /// Where; `None` for the head.
        sequence: Option<u32>,
    },
    /// The number of a start does not rise.
    Boot {
        /// The sector.
        sequence: u32,
        /// Number of the start.
        boot: u16,
    },
    /// The file holds sectors behind the end that the head states.
    BehindHead {
        /// Newest of the file.
        newest: u32,
        /// Newest of the head.
        stated: u32,
    },
}

impl fmt::Display for Contradiction {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let at = |sequence: &Option<u32>| match sequence {
            Some(sequence) => format!("sector {sequence}"),
            None => "head".into(),
        };
        match self {
            Self::PlanFingerprint { stated, computed } => {
                write!(f, "plan {stated:016x}: its bytes have the fingerprint {computed:016x}")
            }
            Self::PlanContent { fingerprint } => {
                write!(f, "plan {fingerprint:016x}: its bytes are no plan of the stated serial")
            }
            Self::SectorNumber { stated, found } => {
                write!(f, "sector {stated}: its header says that it is sector {found}")
            }
            Self::Word { sequence } => {
                write!(
                    f,
                    "sector {sequence}: written with another word than the device's flash has"
                )
            }
            Self::PlanInForce { sequence, before, stated } => write!(
                f,
                "sector {sequence}: judged by plan {stated:016x}, but plan {before:016x} was in \
                 force"
            ),
            Self::EntriesRemoved { sequence, entries } => write!(
                f,
                "{}: {entries} entries before it are missing although nothing is damaged",
                at(sequence)
            ),
            Self::EntriesAdded { sequence, entries } => {
                write!(f, "{}: {entries} entries more before it than were numbered", at(sequence))
            }
            Self::Samples { sequence, counted, stated } => write!(
                f,
                "sector {sequence}: its checkpoint counts {stated} samples, the journal {counted}"
            ),
            Self::Machine { sequence, machine } => write!(
                f,
                "sector {sequence}: alarm machine {machine} is not in the state that its moves \
                 led to"
            ),
            Self::Hash { sequence } => {
                write!(f, "{}: another running hash than the last result left", at(sequence))
            }
            Self::Boot { sequence, boot } => {
                write!(f, "sector {sequence}: start number {boot} does not follow the one before")
            }
            Self::BehindHead { newest, stated } => {
                write!(f, "head: ends in sector {stated}, but the file goes on to sector {newest}")
            }
        }
    }
}
