//! The sector header: 104 bytes at offset 0, programmed in one go.
//!
//! | offset | bytes | field | content |
//! | ---: | ---: | --- | --- |
//! | 0 | 3 | magic | "SKJ" |
//! | 3 | 1 | version | 1 |
//! | 4 | 4 | sequence | counts sectors from 0 |
//! | 8 | 8 | plan | fingerprint of the plan that judges the samples; 0 = none |
//! | 16 | 4 | first entry | number of the sector's first entry |
//! | 20 | 2 | boot | number of the start in which it was opened |
//! | 22 | 2 | flags | bits 0 to 3 log2 of the word; bit 4: the sector before was closed by a start-up; others 0 |
//! | 24 | 6 | tick | when it was opened, ms of that boot |
//! | 30 | 6 | UTC | the same in seconds since 1970-01-01; all 0xFF = not known |
//! | 36 | 64 | signature | of the sector before; all 0xFF = not signed |
//! | 100 | 4 | check | CRC-32 of the 100 bytes before |

use super::block::Word;
use super::bytes::Source;
use super::check::CRC32;
use super::is_blank;

/// Bytes of the header.
pub const HEADER_BYTES: usize = 104;
/// Bytes before the check.
const CHECKED_BYTES: usize = HEADER_BYTES - 4;
const MAGIC: [u8; 3] = *b"SKJ";
/// Version of the journal format.
pub const VERSION: u8 = 1;
/// Bytes that [`peek_sequence`] wants.
pub const PEEK_BYTES: usize = 8;
const CLOSED_BY_RESTART: u16 = 1 << 4;

/// What stands at the beginning of a sector.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct SectorHeader {
    /// Counts sectors from 0.
    pub sequence: u32,
    /// Fingerprint of the plan that judges the samples; 0 when there is none.
    pub plan_fingerprint: u64,
    /// Number of the sector's first entry.
    pub first_entry: u32,
    /// Number of the start in which the sector was opened.
    pub boot: u16,
    /// Word of the flash.
    pub word: Word,
    /// A start-up closed the sector before: nothing was appended to it since.
    pub closed_by_restart: bool,
    /// When the sector was opened, ms of that boot; below 2^48.
    pub tick_ms: u64,
    /// The same in UTC seconds since 1970-01-01, when known; below 2^48 - 1.
    pub utc_s: Option<u64>,
    /// Signature of the sector before, when it is signed.
    pub previous_signature: Option<[u8; 64]>,
}

/// Why bytes are no header.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[cfg_attr(feature = "defmt", derive(defmt::Format))]
pub enum HeaderError {
    /// All bits are set: nothing was written here.
    Blank,
    /// The bytes are too few, or magic, check or a field is wrong.
    Damaged,
    /// A right check, but another version of the format.
    Version(u8),
}

impl SectorHeader {
    /// The bytes of the header. Tick and UTC are cut to 48 bits.
    #[must_use]
    pub fn encode(&self) -> [u8; HEADER_BYTES] {
        let flags = match self.word {
            Word::One => 0,
            Word::Four => 2,
        } | if self.closed_by_restart { CLOSED_BY_RESTART } else { 0 };
        let [t0, t1, t2, t3, t4, t5, ..] = self.tick_ms.to_le_bytes();
        let [u0, u1, u2, u3, u4, u5, ..] = self.utc_s.unwrap_or(u64::MAX).to_le_bytes();
        let fields: [&[u8]; 9] = [
            &MAGIC,
            &[VERSION],
            &self.sequence.to_le_bytes(),
            &self.plan_fingerprint.to_le_bytes(),
            &self.first_entry.to_le_bytes(),
            &self.boot.to_le_bytes(),
            &u16::to_le_bytes(flags),
            &[t0, t1, t2, t3, t4, t5, u0, u1, u2, u3, u4, u5],
            self.previous_signature.as_ref().unwrap_or(&[0xFF; 64]),
        ];
        let mut out = [0xFF; HEADER_BYTES];
        let mut bytes = out.iter_mut();
        for (place, &byte) in bytes.by_ref().zip(fields.into_iter().flatten()) {
            *place = byte;
        }
        let check = out.first_chunk::<CHECKED_BYTES>().map_or(0, |checked| CRC32.checksum(checked));
        if let Some(place) = out.last_chunk_mut() {
            *place = check.to_le_bytes();
        }
        out
    }

    /// The header at the beginning of `bytes`.
    ///
    /// # Errors
    /// When no version of this format can have written it.
    pub fn decode(bytes: &[u8]) -> Result<Self, HeaderError> {
        let bytes = bytes.first_chunk::<HEADER_BYTES>().ok_or(HeaderError::Damaged)?;
        if is_blank(bytes) {
            return Err(HeaderError::Blank);
        }
        let (checked, check) = bytes.split_at(CHECKED_BYTES);
        if CRC32.checksum(checked).to_le_bytes() != check {
            return Err(HeaderError::Damaged);
        }
        let mut source = Source::new(checked);
        let (magic, version) = (source.array(), source.byte());
        if magic != Some(MAGIC) {
            return Err(HeaderError::Damaged);
        }
        if version != Some(VERSION) {
            return Err(version.map_or(HeaderError::Damaged, HeaderError::Version));
        }
        Self::fields(&mut source).ok_or(HeaderError::Damaged)
    }

    fn fields(source: &mut Source<'_>) -> Option<Self> {
        let sequence = u32::from_le_bytes(source.array()?);
        let plan_fingerprint = u64::from_le_bytes(source.array()?);
        let first_entry = u32::from_le_bytes(source.array()?);
        let boot = u16::from_le_bytes(source.array()?);
        let flags = u16::from_le_bytes(source.array()?);
        let tick_ms = from_48_bits(source.array()?);
        let utc_s = source.array().map(|utc| (utc != [0xFF; 6]).then_some(from_48_bits(utc)))?;
        let signature: [u8; 64] = source.array()?;
        Some(Self {
            sequence,
            plan_fingerprint,
            first_entry,
            boot,
            word: Word::of_bytes(1 << (flags & 0x0F))?,
            closed_by_restart: flags & CLOSED_BY_RESTART != 0,
            tick_ms,
            utc_s,
            previous_signature: (!is_blank(&signature)).then_some(signature),
        })
    }
}

/// The sequence number of a header of which only the first [`PEEK_BYTES`] are at hand: a hint, not
/// checked.
///
/// # Errors
/// As [`SectorHeader::decode`].
pub fn peek_sequence(bytes: &[u8; PEEK_BYTES]) -> Result<u32, HeaderError> {
    let [m0, m1, m2, version, sequence @ ..] = *bytes;
    if is_blank(bytes) {
        Err(HeaderError::Blank)
    } else if [m0, m1, m2] != MAGIC || version != VERSION {
        Err(HeaderError::Damaged)
    } else {
        Ok(u32::from_le_bytes(sequence))
    }
}

fn from_48_bits(bytes: [u8; 6]) -> u64 {
    let [b0, b1, b2, b3, b4, b5] = bytes;
    u64::from_le_bytes([b0, b1, b2, b3, b4, b5, 0, 0])
}
