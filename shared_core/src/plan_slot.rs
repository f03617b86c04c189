//! How a plan stands in flash: a slot of one sector, outside the journal's ring.
//!
//! | offset | bytes | field |
//! | --- | --- | --- |
//! | 0 | 3 | magic `SKS` |
//! | 3 | 1 | version 1 |
//! | 4 | 4 | sequence u32: counts the plans a device has taken |
//! | 8 | 8 | serial u64: UTC seconds at sealing |
//! | 16 | 8 | fingerprint u64 |
//! | 24 | 2 | length of the plan u16 |
//! | 26 | 2 | zero |
//! | 28 | 64 | signature; all 0xFF while unsigned |
//! | 92 | 4 | CRC-32 (ISO-HDLC) over bytes 0 to 91: the commit, programmed last |
//! | 256 | up to 3,840 | the plan |
//!
//! The plan is programmed first and the header last, so a half-written slot has no header. A header
//! whose plan does not have its fingerprint is passed over, and the plan before it stays in force.

use crate::cursor::{Sink, Source};
use crate::journal::check::CRC32;
use crate::plan::PLAN_BYTES_MAX;
use sha2::{Digest, Sha512};

/// Bytes of a header.
pub const SLOT_HEADER_BYTES: usize = 96;
/// Where the plan begins in its slot.
pub const PLAN_OFFSET: u32 = 256;
const MAGIC: [u8; 3] = *b"SKS";
const VERSION: u8 = 1;
const UNSIGNED: [u8; 64] = [0xFF; 64];

const _: () = assert!(PLAN_OFFSET as usize + PLAN_BYTES_MAX <= crate::journal::SECTOR_BYTES);

/// A plan in a slot.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct SlotHeader {
    /// Counts the plans a device has taken; the highest is the newest.
    pub sequence: u32,
    /// UTC seconds at sealing.
    pub serial: u64,
    /// Fingerprint of the plan's bytes.
    pub fingerprint: u64,
    /// Bytes of the plan.
    pub length: u16,
}

impl SlotHeader {
    /// The header's bytes.
    #[must_use]
    pub fn encode(&self) -> [u8; SLOT_HEADER_BYTES] {
        let mut bytes = [0; SLOT_HEADER_BYTES];
        let mut sink = Sink::new(&mut bytes);
        sink.bytes(&MAGIC);
        sink.u8(VERSION);
        sink.u32(self.sequence);
        sink.u64(self.serial);
        sink.u64(self.fingerprint);
        sink.u16(self.length);
        sink.u16(0);
        sink.bytes(&UNSIGNED);
        let (fields, check) = bytes.split_at_mut(SLOT_HEADER_BYTES - 4);
        check
            .iter_mut()
            .zip(&CRC32.checksum(fields).to_le_bytes())
            .for_each(|(to, from)| *to = *from);
        bytes
    }

    /// The header in `bytes`; `None` when there is none.
    #[must_use]
    pub fn decode(bytes: &[u8; SLOT_HEADER_BYTES]) -> Option<Self> {
        let (fields, check) = bytes.split_at_checked(SLOT_HEADER_BYTES - 4)?;
        if Source(check).u32()? != CRC32.checksum(fields) {
            return None;
        }
        let mut source = Source(fields);
        let mut start = [0; 4];
        source.fill(&mut start)?;
        let [m0, m1, m2, version] = start;
        if [m0, m1, m2] != MAGIC || version != VERSION {
            return None;
        }
        let header = Self {
            sequence: source.u32()?,
            serial: source.u64()?,
            fingerprint: source.u64()?,
            length: source.u16()?,
        };
        (usize::from(header.length) <= PLAN_BYTES_MAX).then_some(header)
    }
}

/// The fingerprint of a plan, bytes taken in any pieces: the first eight bytes of SHA-512 (FIPS
/// 180-4), little endian.
#[derive(Clone, Debug, Default)]
pub struct Fingerprint(Sha512);

impl Fingerprint {
    /// Takes the next bytes.
    pub fn update(&mut self, bytes: &[u8]) {
        self.0.update(bytes);
    }

    /// The fingerprint of all bytes taken.
    #[must_use]
    pub fn finish(self) -> u64 {
        let digest = self.0.finalize();
        digest.iter().take(8).rev().fold(0, |value, &byte| value << 8 | u64::from(byte))
    }
}

/// The fingerprint of a plan's bytes.
#[must_use]
pub fn fingerprint(bytes: &[u8]) -> u64 {
    let mut fingerprint = Fingerprint::default();
    fingerprint.update(bytes);
    fingerprint.finish()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn fingerprint_is_the_start_of_sha_512() {
        // FIPS 180-4 example, message "abc": ddaf35a193617aba...
        assert_eq!(
            fingerprint(b"abc"),
            u64::from_le_bytes([0xdd, 0xaf, 0x35, 0xa1, 0x93, 0x61, 0x7a, 0xba])
        );
        let mut pieces = Fingerprint::default();
        pieces.update(b"a");
        pieces.update(b"bc");
        assert_eq!(pieces.finish(), fingerprint(b"abc"));
    }

    #[test]
    fn header_bytes_are_pinned_and_any_flipped_bit_is_seen() {
        let header =
            SlotHeader { sequence: 7, serial: 0x0102, fingerprint: 0xA1B2_C3D4, length: 300 };
        let bytes = header.encode();
        assert_eq!(
            &bytes[..28],
            b"SKS\x01\x07\0\0\0\x02\x01\0\0\0\0\0\0\xD4\xC3\xB2\xA1\0\0\0\0\x2C\x01\0\0"
        );
        assert_eq!(SlotHeader::decode(&bytes), Some(header));
        for bit in 0..bytes.len() * 8 {
            let mut damaged = bytes;
            damaged[bit / 8] ^= 1 << (bit % 8);
            assert_eq!(SlotHeader::decode(&damaged), None, "bit {bit}");
        }
        assert_eq!(SlotHeader::decode(&[0xFF; SLOT_HEADER_BYTES]), None);
    }
}
