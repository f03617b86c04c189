//! The journal on NOR flash: an append-only ring of sectors that outlives any loss of power.
//!
//! The format stands in [`strake_core::journal`]; here it meets the flash. The writer programs a
//! block's body first and its check last, so a cut leaves a torn block that no reader takes for an
//! entry; it never programs a word twice between two erases and never appends behind a torn block.
//!
//! What a cut may cost: what waits in RAM. What a destroyed sector may cost: that sector. The
//! medium may program the words of one write in any order, but must finish one write before the
//! next.
//!
//! # Order of calls
//!
//! A sector opens with a checkpoint of the caller's state, which must contain exactly what the
//! entries before it did to it. Therefore **inputs are appended before they are applied** (a sample
//! is pushed before it is evaluated; the same for plan changes, acknowledgements, clock fixes and
//! start-ups) and **results after** (transitions, faults). What waits always fits in the rest of
//! the open sector, so no checkpoint ever overtakes a waiting sample.

mod append;
pub mod collect;
mod error;
mod find;
mod open;
mod restore;
mod ring;
mod waiting;

pub use error::{JournalError, OpenError, ReadError};
pub use restore::{Recovery, Restore};
pub use waiting::{WAITING_MAX, Waiting};

use crate::rooms::Within;
use ring::Ring;
use strake_core::journal::samples::Chain;

/// Fewest sectors of a ring: the open one, the erased one, and one to look back to.
pub const SECTORS_MIN: u32 = 3;

/// What the application knows at the moment in which a sector opens.
pub trait Snapshot {
    /// Fingerprint of the plan in force; 0 when there is none.
    fn plan_fingerprint(&self) -> u64;
    /// Number of this start.
    fn boot(&self) -> u16;
    /// Now, ms of this boot.
    fn tick_ms(&self) -> u64;
    /// Now, UTC seconds since 1970-01-01, when the time is known.
    fn utc_s(&self) -> Option<u64>;
    /// Writes the whole state into `out` and gives its length. `out` has
    /// [`STATE_BYTES_MAX`](strake_core::journal::STATE_BYTES_MAX) bytes.
    fn write_state(&mut self, out: &mut [u8]) -> usize;
    /// Signature of the sector with this sequence number, when there is one.
    fn signature(&mut self, sequence: u32) -> Option<[u8; 64]> {
        let _ = sequence;
        None
    }
}

/// What went wrong since the start, and what the flash was asked to do.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
pub struct Counters {
    /// Programs and erases that the flash refused.
    pub flash_errors: u32,
    /// Samples that could not be written and were given up.
    pub lost_samples: u32,
    /// Sectors that were erased although a collection held them back.
    pub released_holds: u32,
    /// Sectors erased.
    pub erases: u32,
    /// Sectors erased in the way of an append, because nobody had called
    /// [`housekeeping`](Journal::housekeeping) in time.
    pub erases_inline: u32,
}

/// The sector that takes entries.
#[derive(Clone, Copy, Debug)]
struct Open {
    sequence: u32,
    /// Where the next block goes; 4,096 when the sector is full.
    offset: u16,
    /// What the next block of samples goes on from.
    chain: Chain,
}

impl Open {
    /// At the end of a page the next block begins one.
    fn turn_full_page(&mut self) {
        if self.offset.is_multiple_of(256) {
            self.chain.turn_page();
        }
    }
}

/// What is known of the place that the next sector gets.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Ahead {
    /// Nothing: it was not erased since the start.
    AsItWas,
    /// It is erased.
    Erased,
    /// It refused while idle, and is left alone until it is due.
    Refused,
}

/// A sector that a collection is reading.
#[derive(Clone, Copy, Debug)]
struct Hold {
    sequence: u32,
    until_ms: u64,
}

/// The journal over a flash region of which every byte belongs to it. The waiting samples live in
/// the room `W`, within the journal unless said otherwise.
#[derive(Clone, Debug)]
pub struct Journal<F, W = Within<Waiting>> {
    ring: Ring<F>,
    open: Option<Open>,
    /// The sequence number that the next sector gets.
    next_sequence: u32,
    /// The lowest sequence number that may still stand in the ring.
    oldest_sequence: u32,
    next_entry: u32,
    /// The place of `next_sequence`.
    ahead: Ahead,
    /// Something was appended since the start.
    appended: bool,
    hold: Option<Hold>,
    waiting: W,
    /// Of the lost samples those that a gap states.
    told_lost: u32,
    counters: Counters,
}
