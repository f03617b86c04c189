//! The journal's format: entries, blocks, sectors. Bytes only; no flash, no time of its own.
//!
//! The device appends, the host reads; both use this room. All integers are little endian.
//!
//! - **Word**: the bytes the flash programs at once, 4 or 1. Blocks begin and end on words.
//! - **Sector**: 4,096 bytes, erased together; a [`SectorHeader`], a checkpoint, then blocks.
//! - **Page**: 256 bytes, sixteen to a sector. A block never crosses a page.
//! - **Block**: entries under one check; see [`block`]. It is durable once its last word stands.
//! - **Checkpoint**: the caller's whole state at the sector's opening, in as many blocks as it
//!   needs, right behind the header; see [`checkpoint`]. So every sector can be replayed alone.
//! - **Anchor**: the first block of samples in a page, with absolute values; the later ones of that
//!   page continue it; see [`samples`].
//!
//! Rules of the writer on which every reader may lean:
//!
//! 1. Sequence numbers of sectors and numbers of entries run on; the sector with sequence s stands
//!    at place s mod n of a ring of n sectors.
//! 2. After each start-up, and after any torn or unreadable block, writing goes on at the next
//!    page that is blank up to the sector's end. Nothing is ever appended behind a torn block.
//! 3. No entry stands in a sector before its whole checkpoint does. A sector whose checkpoint is
//!    torn and that holds no entry is erased and opened again under the same sequence number.
//!
//! A reader takes a page block by block. At the first unreadable one it counts damage and goes on
//! with the next page; a block of an unknown form with a right check is counted and passed over.

mod bits;
pub mod block;
mod bytes;
pub mod check;
pub mod checkpoint;
pub mod entry;
pub mod events;
pub mod header;
pub mod samples;
pub mod sector;

pub use block::{Place, Word};
pub use entry::{Entry, Sample};
pub use header::{HeaderError, SectorHeader};
pub use sector::{Damage, DamageKind, Item, PageReader, SectorReader};

/// Bytes of a flash sector, the unit of erasing.
pub const SECTOR_BYTES: usize = 4096;
/// Bytes of a page; a block never crosses a page.
pub const PAGE_BYTES: usize = 256;
/// Most bytes a checkpoint may have.
pub const STATE_BYTES_MAX: usize = 1536;
/// Ticks are below this: 48 bits of milliseconds, 8,900 years.
pub const TICK_LIMIT_MS: u64 = 1 << 48;

/// Whether the flash holds nothing here: all bits set.
#[must_use]
pub fn is_blank(bytes: &[u8]) -> bool {
    bytes.iter().all(|&byte| byte == 0xFF)
}

#[cfg(test)]
mod tests;
