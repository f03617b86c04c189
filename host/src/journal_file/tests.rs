//! The file's bytes, pinned; and what a reader makes of damaged ones.

mod damage;
mod writing;

use super::{
    DeviceIdentity, HeadRecord, JournalFile, JournalFileError, MAGIC, Record, StoredPlan,
    StoredSector,
};
use std::io::Cursor;
use std::path::Path;

fn identity() -> Record {
    Record::Identity(DeviceIdentity {
        device_id: "tank-7".into(),
        firmware: "0.1.0".into(),
        word_bytes: 4,
        sectors: 2048,
    })
}

fn plan() -> Record {
    Record::Plan(StoredPlan { serial: 1, fingerprint: 0xAB, bytes: vec![9, 8, 7] })
}

fn sector(sequence: u32, bytes: &[u8]) -> Record {
    Record::Sector(StoredSector { sequence, bytes: bytes.to_vec() })
}

fn head() -> HeadRecord {
    HeadRecord {
        newest: 2,
        used: 3,
        next_entry: 4,
        running_hash: 5,
        boot: 6,
        tick_ms: 7,
        collected_utc_s: None,
        signature: None,
    }
}

/// A file of these records.
fn file(records: &[Record]) -> Vec<u8> {
    let mut bytes = MAGIC.to_vec();
    bytes.extend(records.iter().flat_map(Record::encode));
    bytes
}

fn read(bytes: &[u8]) -> Result<JournalFile<Cursor<Vec<u8>>>, JournalFileError> {
    JournalFile::read(Cursor::new(bytes.to_vec()), Path::new("tank.journal"))
}

/// Bytes written out by hand from the format; the checks by a CRC-32 of another make.
#[test]
fn a_small_file_is_pinned() {
    let bytes = file(&[identity(), plan(), sector(2, &[1, 2, 3]), Record::Head(head())]);
    let digits: Vec<String> = bytes
        .chunks(16)
        .map(|row| row.iter().map(|byte| format!("{byte:02x}")).collect::<Vec<_>>().join(" "))
        .collect();
    assert_eq!(digits.join("\n"), include_str!("tests/small_file.txt").trim_end());
}

#[test]
fn everything_comes_back() {
    let mut signed = head();
    signed.collected_utc_s = Some(1_800_000_000);
    signed.signature = Some([0x5A; 64]);
    let records = [identity(), plan(), sector(1, &[7; 4096]), sector(2, &[]), Record::Head(signed)];
    let mut file = read(&file(&records)).unwrap();
    assert_eq!(file.damage(), []);
    assert_eq!(file.identity().cloned().map(Record::Identity), Some(identity()));
    assert_eq!(file.plans().collect::<Vec<_>>(), [(1, 0xAB)]);
    assert_eq!(file.plan(0xAB).unwrap().map(Record::Plan), Some(plan()));
    assert_eq!(file.plan(0xAC).unwrap(), None);
    assert_eq!(file.head(), Some(&signed));
    assert_eq!(file.sectors().collect::<Vec<_>>(), [(1, 4096), (2, 0)]);
    let first = file.sector_after(None).unwrap().unwrap();
    assert_eq!((first.sequence, first.bytes), (1, vec![7; 4096]));
    assert_eq!(file.sector_after(Some(1)).unwrap().unwrap().sequence, 2);
    assert_eq!(file.sector_after(Some(2)).unwrap(), None);
    assert_eq!(file.sector_after(Some(u32::MAX)).unwrap(), None);
    assert_eq!(file.sector(3).unwrap(), None);
}

#[test]
fn of_a_sector_that_stands_twice_the_longer_counts() {
    let records =
        [sector(5, &[1; 200]), sector(4, &[2; 30]), sector(5, &[3; 100]), sector(4, &[4; 31])];
    let mut file = read(&file(&records)).unwrap();
    assert_eq!(file.sector(5).unwrap().unwrap().bytes, [1; 200]);
    assert_eq!(file.sector(4).unwrap().unwrap().bytes, [4; 31]);
    assert_eq!(file.sectors().count(), 2);
}

#[test]
fn empty_and_foreign_files_are_told_apart() {
    for bytes in [&b""[..], b"STRAKE"] {
        let error = read(bytes).unwrap_err();
        assert_eq!(error.to_string(), "tank.journal is empty; collect the journal again");
    }
    for bytes in [&b"STRAKEJ2 and more"[..], b"name,level", b"\0"] {
        let error = read(bytes).unwrap_err();
        assert_eq!(
            error.to_string(),
            "tank.journal is not a journal file: it does not begin with STRAKEJ1; give a file that \
             'strake collect' or 'strake trial' wrote"
        );
    }
    let bare = read(&MAGIC).unwrap();
    assert!(bare.identity().is_none() && bare.head().is_none() && bare.damage().is_empty());
}
