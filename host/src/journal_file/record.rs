//! Records and their bytes.

use super::PLAN_BYTES_MAX;
use crc::{CRC_32_ISO_HDLC, Crc, Table};
use strake_core::journal::SECTOR_BYTES;

/// The check of a record, over tag, length and payload.
pub(super) static CHECK: Crc<u32, Table<16>> = Crc::<u32, Table<16>>::new(&CRC_32_ISO_HDLC);
/// Tag and length.
pub(super) const RECORD_HEAD_BYTES: usize = 5;
/// The check.
pub(super) const RECORD_CHECK_BYTES: usize = 4;

pub(super) const TAG_IDENTITY: u8 = 1;
pub(super) const TAG_PLAN: u8 = 2;
pub(super) const TAG_SECTOR: u8 = 3;
pub(super) const TAG_HEAD: u8 = 4;

/// Bytes before a plan in its payload: serial and fingerprint.
pub(super) const PLAN_HEAD_BYTES: usize = 16;
/// Bytes before a sector in its payload: sequence and used.
pub(super) const SECTOR_HEAD_BYTES: usize = 6;
/// Bytes of a head: numbers, then the signature.
const HEAD_BYTES: usize = 4 + 2 + 4 + 8 + 2 + 8 + 8 + SIGNATURE_BYTES;
const SIGNATURE_BYTES: usize = 64;

/// Tag 1: which device it was.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct DeviceIdentity {
    /// Its name; at most 255 bytes.
    pub device_id: String,
    /// Version text of its firmware; at most 255 bytes.
    pub firmware: String,
    /// Bytes its journal flash programs at once.
    pub word_bytes: u8,
    /// Sectors of its ring.
    pub sectors: u32,
}

/// Tag 2: a plan as the device keeps it.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct StoredPlan {
    /// UTC seconds at which it was sealed.
    pub serial: u64,
    /// Fingerprint of the bytes, as the device states it.
    pub fingerprint: u64,
    /// At most [`PLAN_BYTES_MAX`].
    pub bytes: Vec<u8>,
}

/// Tag 3: the used part of a sector as stored.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct StoredSector {
    /// Its sequence.
    pub sequence: u32,
    /// At most 4096 bytes.
    pub bytes: Vec<u8>,
}

/// Tag 4: where the journal ended.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct HeadRecord {
    /// Sequence of the newest sector.
    pub newest: u32,
    /// Bytes in use in it.
    pub used: u16,
    /// Number of the entry that would have been written next.
    pub next_entry: u32,
    /// Running hash of all results up to here.
    pub running_hash: u64,
    /// Number of the device's start.
    pub boot: u16,
    /// Milliseconds since that start.
    pub tick_ms: u64,
    /// UTC seconds on the laptop; `None` when no clock was at hand.
    pub collected_utc_s: Option<u64>,
    /// The device's signature; `None` while unsigned.
    pub signature: Option<[u8; SIGNATURE_BYTES]>,
}

/// One record.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Record {
    /// Tag 1.
    Identity(DeviceIdentity),
    /// Tag 2.
    Plan(StoredPlan),
    /// Tag 3.
    Sector(StoredSector),
    /// Tag 4.
    Head(HeadRecord),
}

impl Record {
    /// The record's bytes, from tag to check. Texts, plans and sectors beyond their limits are cut.
    #[must_use]
    pub fn encode(&self) -> Vec<u8> {
        let mut payload = Vec::new();
        let tag = match self {
            Self::Identity(identity) => {
                put_text(&mut payload, &identity.device_id);
                put_text(&mut payload, &identity.firmware);
                payload.push(identity.word_bytes);
                payload.extend(identity.sectors.to_le_bytes());
                TAG_IDENTITY
            }
            Self::Plan(plan) => {
                payload.extend(plan.serial.to_le_bytes());
                payload.extend(plan.fingerprint.to_le_bytes());
                payload.extend(plan.bytes.iter().take(PLAN_BYTES_MAX));
                TAG_PLAN
            }
            Self::Sector(sector) => {
                let used = sector.bytes.len().min(SECTOR_BYTES);
                payload.extend(sector.sequence.to_le_bytes());
                payload.extend(u16::try_from(used).unwrap_or(u16::MAX).to_le_bytes());
                payload.extend(&sector.bytes[..used]);
                TAG_SECTOR
            }
            Self::Head(head) => {
                put_head(&mut payload, head);
                TAG_HEAD
            }
        };
        frame(tag, &payload)
    }

    /// The record in a payload whose check was right; `None` when the payload is not one.
    pub(super) fn decode(tag: u8, payload: &[u8]) -> Option<Self> {
        let mut rest = Fields(payload);
        let record = match tag {
            TAG_IDENTITY => Self::Identity(DeviceIdentity {
                device_id: rest.text()?,
                firmware: rest.text()?,
                word_bytes: u8::from_le_bytes(rest.array()?),
                sectors: u32::from_le_bytes(rest.array()?),
            }),
            TAG_PLAN => Self::Plan(StoredPlan {
                serial: u64::from_le_bytes(rest.array()?),
                fingerprint: u64::from_le_bytes(rest.array()?),
                bytes: rest.take(rest.0.len())?.to_vec(),
            }),
            TAG_SECTOR => {
                let sequence = u32::from_le_bytes(rest.array()?);
                let used = usize::from(u16::from_le_bytes(rest.array()?));
                Self::Sector(StoredSector { sequence, bytes: rest.take(used)?.to_vec() })
            }
            TAG_HEAD => Self::Head(HeadRecord {
                newest: u32::from_le_bytes(rest.array()?),
                used: u16::from_le_bytes(rest.array()?),
                next_entry: u32::from_le_bytes(rest.array()?),
                running_hash: u64::from_le_bytes(rest.array()?),
                boot: u16::from_le_bytes(rest.array()?),
                tick_ms: u64::from_le_bytes(rest.array()?),
                collected_utc_s: Some(u64::from_le_bytes(rest.array()?)).filter(|s| *s != u64::MAX),
                signature: Some(rest.array()?).filter(|s| *s != [0xFF; SIGNATURE_BYTES]),
            }),
            _ => return None,
        };
        rest.0.is_empty().then_some(record)
    }
}

/// Whether a record of this tag can have a payload of this length.
pub(super) fn plausible(tag: u8, length: usize) -> bool {
    match tag {
        TAG_IDENTITY => (7..=7 + 2 * 255).contains(&length),
        TAG_PLAN => (PLAN_HEAD_BYTES..=PLAN_HEAD_BYTES + PLAN_BYTES_MAX).contains(&length),
        TAG_SECTOR => (SECTOR_HEAD_BYTES..=SECTOR_HEAD_BYTES + SECTOR_BYTES).contains(&length),
        TAG_HEAD => length == HEAD_BYTES,
        // A tag of a later version: short enough to be kept in memory.
        _ => length <= PLAN_HEAD_BYTES + PLAN_BYTES_MAX,
    }
}

/// A record around a payload.
pub(super) fn frame(tag: u8, payload: &[u8]) -> Vec<u8> {
    let length = u32::try_from(payload.len()).unwrap_or(u32::MAX);
    let mut bytes = vec![tag];
    bytes.extend(length.to_le_bytes());
    bytes.extend(payload);
    bytes.extend(CHECK.checksum(&bytes).to_le_bytes());
    bytes
}

fn put_text(out: &mut Vec<u8>, text: &str) {
    let text = &text[..text.floor_char_boundary(255)];
    out.push(u8::try_from(text.len()).unwrap_or(u8::MAX));
    out.extend(text.as_bytes());
}

fn put_head(out: &mut Vec<u8>, head: &HeadRecord) {
    out.extend(head.newest.to_le_bytes());
    out.extend(head.used.to_le_bytes());
    out.extend(head.next_entry.to_le_bytes());
    out.extend(head.running_hash.to_le_bytes());
    out.extend(head.boot.to_le_bytes());
    out.extend(head.tick_ms.to_le_bytes());
    out.extend(head.collected_utc_s.unwrap_or(u64::MAX).to_le_bytes());
    out.extend(head.signature.unwrap_or([0xFF; SIGNATURE_BYTES]));
}

/// Takes fields off the front of a payload.
struct Fields<'a>(&'a [u8]);

impl<'a> Fields<'a> {
    fn take(&mut self, length: usize) -> Option<&'a [u8]> {
        let (taken, rest) = self.0.split_at_checked(length)?;
        self.0 = rest;
        Some(taken)
    }

    fn array<const N: usize>(&mut self) -> Option<[u8; N]> {
        self.take(N)?.try_into().ok()
    }

    fn text(&mut self) -> Option<String> {
        let [length] = self.array()?;
        let text = std::str::from_utf8(self.take(usize::from(length))?).ok()?;
        Some(text.to_owned())
    }
}

/// Bytes of a whole record around a payload.
pub(super) fn frame_bytes(payload: usize) -> u64 {
    (RECORD_HEAD_BYTES + payload + RECORD_CHECK_BYTES) as u64
}
