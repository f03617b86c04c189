//! The format of a plan slot: one sector of flash that holds one sealed plan.
//!
//! | offset | bytes | field | content |
//! | ---: | ---: | --- | --- |
//! | 0 | 3 | magic | "SKP" |
//! | 3 | 1 | version | 1 |
//! | 4 | 4 | sequence | counts the plans this device took, from 1 |
//! | 8 | 8 | serial | UTC seconds at which the plan was sealed |
//! | 16 | 8 | fingerprint | of the plan's bytes, see [`fingerprint`] |
//! | 24 | 2 | length | bytes of the plan, 1 to 3,840 |
//! | 26 | 2 | reserved | 0xFF |
//! | 28 | 64 | signature | of the plan; all 0xFF = none |
//! | 92 | 4 | check | CRC-32/ISO-HDLC of the 92 bytes before |
//! | 96 | 4 | commit | all zero, written last of all; a torn one has bits left |
//! | 100 | 156 | reserved | 0xFF |
//! | 256 | length | plan | its bytes, then 0xFF |
//!
//! All integers are little endian. A slot counts only when check and commit are right and the
//! plan's bytes have the fingerprint.

use crate::journal::check::CRC32;
use crate::journal::is_blank;
use sha2::{Digest, Sha512};

/// Bytes of the header that [`SlotHeader::encode`] gives; the commit follows.
pub const HEADER_BYTES: usize = 96;
/// Offset of the commit word.
pub const COMMIT_OFFSET: usize = HEADER_BYTES;
/// The commit word.
pub const COMMIT: [u8; 4] = [0; 4];
/// Offset of the plan's bytes.
pub const BODY_OFFSET: usize = 256;
/// Most bytes of a plan.
pub const BODY_MAX: usize = 4096 - BODY_OFFSET;
const CHECKED_BYTES: usize = HEADER_BYTES - 4;
const START: [u8; 4] = *b"SKP\x01";

/// What a slot says about its plan.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct SlotHeader {
    /// Counts the plans this device took, from 1.
    pub sequence: u32,
    /// UTC seconds at which the plan was sealed.
    pub serial: u64,
    /// Fingerprint of the plan's bytes.
    pub fingerprint: u64,
    /// Bytes of the plan, 1 to [`BODY_MAX`].
    pub body_len: u16,
    /// Signature of the plan, when there is one.
    pub signature: Option<[u8; 64]>,
}

impl SlotHeader {
    /// The bytes of the header, without the commit.
    #[must_use]
    pub fn encode(&self) -> [u8; HEADER_BYTES] {
        let fields: [&[u8]; 7] = [
            &START,
            &self.sequence.to_le_bytes(),
            &self.serial.to_le_bytes(),
            &self.fingerprint.to_le_bytes(),
            &self.body_len.to_le_bytes(),
            &[0xFF; 2],
            self.signature.as_ref().unwrap_or(&[0xFF; 64]),
        ];
        let mut out = [0xFF; HEADER_BYTES];
        for (place, &byte) in out.iter_mut().zip(fields.into_iter().flatten()) {
            *place = byte;
        }
        let check = out.first_chunk::<CHECKED_BYTES>().map_or(0, |checked| CRC32.checksum(checked));
        if let Some(place) = out.last_chunk_mut() {
            *place = check.to_le_bytes();
        }
        out
    }

    /// The header of a committed slot, from its first 100 bytes; `None` when it is not committed,
    /// or no version of this format can have written it.
    #[must_use]
    pub fn decode(bytes: &[u8]) -> Option<Self> {
        let (header, rest) = bytes.split_first_chunk::<HEADER_BYTES>()?;
        let (checked, check) = header.split_first_chunk::<CHECKED_BYTES>()?;
        if CRC32.checksum(checked).to_le_bytes() != check || !rest.starts_with(&COMMIT) {
            return None;
        }
        let (start, rest) = checked.split_first_chunk()?;
        let (sequence, rest) = rest.split_first_chunk()?;
        let (serial, rest) = rest.split_first_chunk()?;
        let (fingerprint, rest) = rest.split_first_chunk()?;
        let (body_len, rest) = rest.split_first_chunk()?;
        let signature: &[u8; 64] = rest.last_chunk()?;
        let body_len = u16::from_le_bytes(*body_len);
        (*start == START && (1..=BODY_MAX).contains(&body_len.into())).then(|| Self {
            sequence: u32::from_le_bytes(*sequence),
            serial: u64::from_le_bytes(*serial),
            fingerprint: u64::from_le_bytes(*fingerprint),
            body_len,
            signature: (!is_blank(signature)).then_some(*signature),
        })
    }
}

/// Fingerprint of a plan: the first eight bytes of its SHA-512 (FIPS 180-4), little endian.
#[must_use]
pub fn fingerprint(plan: &[u8]) -> u64 {
    let mut fingerprint = Fingerprint::default();
    fingerprint.update(plan);
    fingerprint.finish()
}

/// [`fingerprint`] of bytes that come piece by piece.
#[derive(Clone, Debug, Default)]
pub struct Fingerprint {
    hash: Sha512,
}

impl Fingerprint {
    /// Takes the next bytes.
    pub fn update(&mut self, bytes: &[u8]) {
        self.hash.update(bytes);
    }

    /// The fingerprint of all that came.
    #[must_use]
    pub fn finish(self) -> u64 {
        let digest: [u8; 64] = self.hash.finalize().into();
        digest.first_chunk().map_or(0, |first| u64::from_le_bytes(*first))
    }
}

#[cfg(test)]
mod tests {
    use super::{Fingerprint, SlotHeader, fingerprint};
    use proptest::prelude::*;

    /// FIPS 180-4 example: SHA-512 of "abc" begins DD AF 35 A1 93 61 7A BA.
    #[test]
    fn fingerprint_of_the_standards_example() {
        assert_eq!(fingerprint(b"abc"), u64::from_le_bytes(*b"\xDD\xAF\x35\xA1\x93\x61\x7A\xBA"));
        let mut pieces = Fingerprint::default();
        pieces.update(b"a");
        pieces.update(b"bc");
        assert_eq!(pieces.finish(), fingerprint(b"abc"));
    }

    fn header() -> SlotHeader {
        SlotHeader {
            sequence: 5,
            serial: 1_754_000_000,
            fingerprint: 0x0102_0304_0506_0708,
            body_len: 1234,
            signature: None,
        }
    }

    fn committed(header: &SlotHeader) -> Vec<u8> {
        [&header.encode()[..], &[0; 4]].concat()
    }

    /// Written down from the table above; the check by another implementation of CRC-32.
    #[test]
    fn pinned_bytes() {
        let mut expected = b"SKP\x01\x05\x00\x00\x00\x80\xEA\x8B\x68\x00\x00\x00\x00".to_vec();
        expected.extend(b"\x08\x07\x06\x05\x04\x03\x02\x01\xD2\x04\xFF\xFF");
        expected.extend([0xFF; 64]);
        expected.extend(b"\xF1\x23\x80\xD2");
        assert_eq!(header().encode()[..], expected);
    }

    #[test]
    fn a_torn_commit_is_no_commit() {
        let whole = committed(&header());
        assert_eq!(SlotHeader::decode(&whole), Some(header()));
        for bit in 0..32 {
            let mut torn = whole.clone();
            torn[96 + bit / 8] |= 1 << (bit % 8);
            assert_eq!(SlotHeader::decode(&torn), None);
        }
        assert_eq!(SlotHeader::decode(&whole[..99]), None);
    }

    proptest! {
        #[test]
        fn headers_come_back(
            sequence: u32, serial: u64, fingerprint: u64, body_len in 1_u16..=3840,
            signature in prop::option::of(prop::array::uniform32(0_u8..255))
        ) {
            let signature = signature.map(|half| {
                let mut whole = [0; 64];
                whole[..32].copy_from_slice(&half);
                whole
            });
            let header = SlotHeader { sequence, serial, fingerprint, body_len, signature };
            prop_assert_eq!(SlotHeader::decode(&committed(&header)), Some(header));
        }

        #[test]
        fn no_flipped_bit_passes(bit in 0_usize..96 * 8) {
            let mut bytes = committed(&header());
            bytes[bit / 8] ^= 1 << (bit % 8);
            prop_assert_eq!(SlotHeader::decode(&bytes), None);
        }

        #[test]
        fn any_bytes_decode(bytes: Vec<u8>) {
            let _ = SlotHeader::decode(&bytes);
        }
    }
}
