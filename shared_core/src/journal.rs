//! The journal's format: entries, blocks, sectors. Bytes only; no flash, no time of its own.
//!
//! The device appends, the host reads; both use this room. DEVELOPERS.md holds the byte tables.

pub mod entry;

/// Bytes of a flash sector, the unit of erasing.
pub const SECTOR_BYTES: usize = 4096;
/// Bytes of a page; a block never crosses a page.
pub const PAGE_BYTES: usize = 256;
