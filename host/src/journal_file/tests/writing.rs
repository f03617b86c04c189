//! Part files: grown, torn, gone on with, finished.

use super::{file, head, identity, plan, sector};
use crate::journal_file::{DeviceIdentity, JournalFile, MAGIC, PartFile, Record};
use std::fs;

#[test]
fn a_part_file_is_the_journal_file_without_its_head() {
    let directory = tempfile::tempdir().unwrap();
    let (path, target) = (directory.path().join("a.part"), directory.path().join("a.journal"));
    let mut part = PartFile::open(&path).unwrap();
    for record in [identity(), plan(), sector(1, &[1; 50])] {
        part.append(&record).unwrap();
    }
    assert_eq!(fs::read(&path).unwrap(), file(&[identity(), plan(), sector(1, &[1; 50])]));
    part.finish(&head(), &target, false).unwrap();
    assert!(!path.exists());
    let records = [identity(), plan(), sector(1, &[1; 50]), Record::Head(head())];
    assert_eq!(fs::read(&target).unwrap(), file(&records));
}

#[test]
fn a_torn_end_is_cut_off_and_the_file_goes_on() {
    let directory = tempfile::tempdir().unwrap();
    let path = directory.path().join("a.part");
    let sound = file(&[identity(), sector(1, &[1; 50])]);
    let last = sector(2, &[2; 60]).encode();
    for torn in 0..last.len() {
        let mut bytes = sound.clone();
        bytes.extend(&last[..torn]);
        fs::write(&path, &bytes).unwrap();
        let mut part = PartFile::open(&path).unwrap();
        assert_eq!(part.sectors().iter().collect::<Vec<_>>(), [(&1, &50)]);
        assert_eq!(part.unsure().unwrap().unwrap().sequence, 1);
        part.append(&sector(2, &[2; 60])).unwrap();
        let file = JournalFile::open(&path).unwrap();
        assert_eq!((file.damage(), file.sectors().count()), (&[][..], 2));
    }
    for torn in 0..MAGIC.len() {
        fs::write(&path, &MAGIC[..torn]).unwrap();
        PartFile::open(&path).unwrap();
        assert_eq!(fs::read(&path).unwrap(), MAGIC);
    }
}

#[test]
fn a_finished_file_is_replaced_only_when_told() {
    let directory = tempfile::tempdir().unwrap();
    let (path, target) = (directory.path().join("a.part"), directory.path().join("a.journal"));
    fs::write(&target, "old").unwrap();
    let error = PartFile::open(&path).unwrap().finish(&head(), &target, false).unwrap_err();
    assert_eq!(
        error.to_string(),
        format!(
            "{} exists and is kept; give --force to replace it, or another name",
            target.display()
        )
    );
    assert_eq!(fs::read(&target).unwrap(), b"old");
    assert!(path.exists(), "what was collected stays");
    PartFile::open(&path).unwrap().finish(&head(), &target, true).unwrap();
    assert!(JournalFile::open(&target).unwrap().head().is_some());
}

#[test]
fn another_file_is_not_written_into() {
    let directory = tempfile::tempdir().unwrap();
    let path = directory.path().join("notes.part");
    fs::write(&path, "do not touch").unwrap();
    let error = PartFile::open(&path).unwrap_err().to_string();
    assert!(error.contains("is not a journal file"), "{error}");
    assert_eq!(fs::read(&path).unwrap(), b"do not touch");
    let error = PartFile::open(&directory.path().join("no/such/a.part")).unwrap_err().to_string();
    assert!(error.starts_with("cannot write ") && error.contains("check the path"), "{error}");
}

#[test]
fn a_new_firmware_is_noted_and_another_device_refused() {
    let directory = tempfile::tempdir().unwrap();
    let path = directory.path().join("a.part");
    let mut device = DeviceIdentity {
        device_id: "tank-7".into(),
        firmware: "0.1.0".into(),
        word_bytes: 4,
        sectors: 2048,
    };
    let mut part = PartFile::open(&path).unwrap();
    part.identify(&device).unwrap();
    let before = fs::metadata(&path).unwrap().len();
    part.identify(&device).unwrap();
    assert_eq!(fs::metadata(&path).unwrap().len(), before);
    device.firmware = "0.2.0".into();
    part.identify(&device).unwrap();
    assert_eq!(JournalFile::open(&path).unwrap().identity(), Some(&device));
    device.device_id = "tank-8".into();
    assert!(part.identify(&device).is_err());
}
