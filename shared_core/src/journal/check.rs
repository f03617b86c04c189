//! The check of headers and blocks: CRC-32/ISO-HDLC.

use crc::{CRC_32_ISO_HDLC, Crc};

/// A host takes a table and speed, a board no table and 1 KiB of flash less: checks are rare there.
#[cfg(not(target_os = "none"))]
type Width = crc::Table<1>;
#[cfg(target_os = "none")]
type Width = crc::NoTable;

/// The one instance of this check.
pub static CRC32: Crc<u32, Width> = Crc::<u32, Width>::new(&CRC_32_ISO_HDLC);

/// Negative control of the power cuts on the emulated board: with the private feature
/// `_careless_check` a build for a board takes every block for whole. Never shipped, and without
/// effect on a host.
pub const CARELESS: bool = cfg!(all(feature = "_careless_check", target_os = "none"));

/// Check of one block: over the sector's sequence (u32), the block's offset in the sector (u16) and
/// the block's bytes before the check. So no block of an earlier lap and none that was moved
/// passes.
#[must_use]
pub fn block_check(sequence: u32, offset: u16, bytes: &[u8]) -> u32 {
    let mut digest = CRC32.digest();
    digest.update(&sequence.to_le_bytes());
    digest.update(&offset.to_le_bytes());
    digest.update(bytes);
    digest.finalize()
}

#[cfg(test)]
mod tests {
    use super::CRC32;

    /// Check value of the catalogue of parametrised CRC algorithms for CRC-32/ISO-HDLC.
    #[test]
    fn catalogue_check_value() {
        assert_eq!(CRC32.checksum(b"123456789"), 0xCBF4_3926);
    }
}
