//! The journal file: what was taken home from a device, as stored there.
//!
//! Eight bytes `STRAKEJ1`, then **records**: tag u8, length u32, payload, CRC-32 u32 over all three
//! (ISO-HDLC; all numbers little endian). Tag 1 is the device's identity, 2 a plan, 3 a sector, 4
//! the **head**: where the journal ended when it was collected. A file that grows is the **part
//! file**: the same format, still without a head. A sector may stand twice, once when it was open;
//! the longer one counts.
//!
//! Duty: writing such files so that nothing is lost or overwritten, and reading any bytes at all:
//! what is damaged is located and counted, the rest is used. What sectors and plans mean is not
//! known here.

mod error;
mod part;
mod read;
mod record;
mod scan;
#[cfg(test)]
mod tests;

pub use error::JournalFileError;
pub use part::PartFile;
pub use read::JournalFile;
pub use record::{DeviceIdentity, HeadRecord, Record, StoredPlan, StoredSector};
pub use scan::{Damage, DamageKind};

/// First bytes of every journal file.
pub const MAGIC: [u8; 8] = *b"STRAKEJ1";
/// Longest plan a record may hold, bytes.
pub const PLAN_BYTES_MAX: usize = 32 * 1024;
