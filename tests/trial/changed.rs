//! One reading, one plan bit, one stored hash changed, check sums mended: the replay must name the
//! first difference and end with status 7. Damage that no check hides must be counted, the rest
//! used.

use crate::bench::{journal, replay, strake, trial};
use std::ops::Range;
use std::path::Path;
use strake_core::journal::check::{CRC32, block_check};
use strake_core::journal::header::HEADER_BYTES;

pub(crate) const TAG_PLAN: u8 = 2;
pub(crate) const TAG_SECTOR: u8 = 3;
/// Forms of blocks: samples in codec 1, events.
pub(crate) const SAMPLES: u8 = 1;
const EVENTS: u8 = 2;

/// Places of the payloads of all records with a tag.
pub(crate) fn payloads(file: &[u8], tag: u8) -> Vec<Range<usize>> {
    let mut found = Vec::new();
    let mut at = 8;
    while at < file.len() {
        let length = u32::from_le_bytes(file[at + 1..at + 5].try_into().unwrap()) as usize;
        if file[at] == tag {
            found.push(at + 5..at + 5 + length);
        }
        at += 5 + length + 4;
    }
    found
}

/// Puts the record's check right again.
pub(crate) fn mend_record(file: &mut [u8], payload: &Range<usize>) {
    let check = CRC32.checksum(&file[payload.start - 5..payload.end]);
    file[payload.end..payload.end + 4].copy_from_slice(&check.to_le_bytes());
}

/// Places of the blocks of a form in a sector (words of four bytes), behind the header.
pub(crate) fn blocks(sector: &[u8], form: u8) -> Vec<Range<usize>> {
    let mut found = Vec::new();
    let mut at = HEADER_BYTES;
    while at < sector.len() {
        match sector[at] {
            0xFF => at = (at / 256 + 1) * 256,
            words => {
                let end = at + usize::from(words) * 4;
                if sector[at + 1] >> 5 == form {
                    found.push(at..end);
                }
                at = end;
            }
        }
    }
    found
}

/// Changes the bytes of one block and mends block and record.
pub(crate) fn change_block(
    file: &mut [u8],
    form: u8,
    pick: impl Fn(&[u8]) -> bool,
    change: impl Fn(&mut [u8]),
) {
    for record in payloads(file, TAG_SECTOR) {
        let sequence = u32::from_le_bytes(file[record.start..record.start + 4].try_into().unwrap());
        let sector = record.start + 6..record.end;
        let found = blocks(&file[sector.clone()], form);
        let chosen = found.into_iter().find(|block| pick(&file[sector.clone()][block.clone()]));
        let Some(block) = chosen else { continue };
        let offset = u16::try_from(block.start).unwrap();
        let bytes = &mut file[sector][block];
        let check_at = bytes.len() - 4;
        change(&mut bytes[..check_at]);
        let check = block_check(sequence, offset, &bytes[..check_at]);
        bytes[check_at..].copy_from_slice(&check.to_le_bytes());
        mend_record(file, &record);
        return;
    }
    panic!("the journal has no such block");
}

/// Changes the level count that an anchor of codec 1 begins with by one step.
fn change_first_level(payload: &mut [u8]) {
    let mut at = 0;
    let take = |at: &mut usize, count: usize| {
        let bits = (*at..*at + count).rev();
        *at += count;
        bits.fold(0, |value, bit| value << 1 | usize::from(payload[bit / 8] >> (bit % 8) & 1))
    };
    let skip_number = |at: &mut usize| {
        let length = take(at, 6);
        *at += length.saturating_sub(1);
    };
    // Tick; interval behind its unit; qualities, of which the level's is good.
    skip_number(&mut at);
    at += 1;
    skip_number(&mut at);
    if take(&mut at, 1) == 0 {
        assert_eq!(take(&mut at, 3), 1, "the first level is good");
        let temperature = take(&mut at, 3);
        at += usize::from(![1, 2].contains(&temperature));
    }
    if take(&mut at, 1) == 0 {
        skip_number(&mut at);
    }
    // The count's length; its lowest bit is the sign.
    at += 6 + 1;
    payload[at / 8] ^= 1 << (at % 8);
}

fn replay_of(directory: &Path, file: &[u8]) -> (i32, serde_json::Value) {
    let path = directory.join("changed.strake-journal");
    std::fs::write(&path, file).unwrap();
    replay(&path)
}

#[test]
fn a_changed_reading_is_named() {
    let (directory, _, document) = trial(&[]);
    let mut file = std::fs::read(journal(&document)).unwrap();
    // The first block of samples begins a page with absolute values.
    change_block(&mut file, SAMPLES, |_| true, |block| change_first_level(&mut block[2..]));
    let (status, replayed) = replay_of(directory.path(), &file);
    assert_eq!(status, 7, "{replayed}");
    assert_eq!(replayed["identical"], false);
    assert!(replayed["first_difference"]["entry"].is_u64(), "{replayed}");
    assert_eq!(replayed["damaged"], 0);
}

#[test]
fn a_changed_plan_bit_is_named() {
    let (directory, _, document) = trial(&[]);
    let mut file = std::fs::read(journal(&document)).unwrap();
    let plan = payloads(&file, TAG_PLAN)[0].clone();
    file[plan.start + 16 + 40] ^= 1;
    mend_record(&mut file, &plan);
    let (status, replayed) = replay_of(directory.path(), &file);
    assert_eq!(status, 7, "{replayed}");
    assert_eq!(replayed["first_difference"]["what"], "fingerprint of a plan");
}

#[test]
fn a_changed_hash_is_named() {
    let (directory, _, document) = trial(&[]);
    let mut file = std::fs::read(journal(&document)).unwrap();
    // Entry number 2 is a move of an alarm machine; its hash is the last eight bytes before
    // padding.
    let is_move = |block: &[u8]| block[2] == 2;
    let hash = |block: &mut [u8]| {
        let end = block.iter().rposition(|&byte| byte != 0xFF).unwrap();
        block[end - 2] ^= 0x10;
    };
    change_block(&mut file, EVENTS, is_move, hash);
    let (status, replayed) = replay_of(directory.path(), &file);
    assert_eq!(status, 7, "{replayed}");
    assert_eq!(replayed["first_difference"]["what"], "running hash at an alarm");
}

#[test]
fn flipped_bits_are_located_and_the_rest_is_used() {
    let (directory, _, document) = trial(&[]);
    let mut file = std::fs::read(journal(&document)).unwrap();
    let sector = payloads(&file, TAG_SECTOR)[1].clone();
    file[sector.start + 1000] ^= 0x40;
    let (status, replayed) = replay_of(directory.path(), &file);
    assert!([6, 7].contains(&status), "{replayed}");
    assert!(replayed["damaged"].as_u64() >= Some(1));
    assert!(replayed["samples"].as_u64() > Some(1000), "{replayed}");

    file.truncate(file.len() / 2);
    let (status, replayed) = replay_of(directory.path(), &file);
    assert!([6, 7].contains(&status), "{replayed}");
    assert!(replayed["damaged"].as_u64() >= Some(1));
}

#[test]
fn foreign_and_empty_files_are_no_journals() {
    let directory = tempfile::tempdir().unwrap();
    for (name, bytes) in [("foreign", &b"PK\x03\x04 something else"[..]), ("empty", b"")] {
        let path = directory.path().join(name);
        std::fs::write(&path, bytes).unwrap();
        let (status, _) = strake(&["replay", path.to_str().unwrap()]);
        assert_eq!(status, 3, "{name}");
    }
    let missing = directory.path().join("missing");
    assert_eq!(strake(&["replay", missing.to_str().unwrap()]).0, 3);
}
