//! Collections over perfect, noisy and cut lines: the content is the device's.

use super::fake::{FakeDevice, Shared, in_process, shared};
use crate::journal_file::{JournalFile, PartFile};
use crate::link::{Client, Collected, LinkError, Noisy, Port, Progress, collect};
use std::ops::ControlFlow;
use std::path::Path;

/// One visit to the device.
fn visit(port: impl Port, path: &Path) -> Result<Collected, LinkError> {
    let mut client = Client::connect(port)?;
    let mut part = PartFile::open(path)?;
    let go_on = &mut |_: &Progress| ControlFlow::Continue(());
    let collected = collect(&mut client, &mut part, Some(1_800_000_000), go_on)?;
    part.finish(&collected.head, &path.with_extension("journal"), false)?;
    Ok(collected)
}

fn assert_same(path: &Path, device: &FakeDevice) {
    let mut file = JournalFile::open(&path.with_extension("journal")).unwrap();
    assert_eq!(file.damage(), []);
    assert_eq!(file.identity().unwrap().device_id, "tank-7");
    let head = *file.head().unwrap();
    assert_eq!((head.newest, head.running_hash), (device.newest(), 0x0123_4567_89AB_CDEF));
    assert_eq!(file.sectors().count(), device.sectors.len());
    for (sequence, bytes) in &device.sectors {
        assert_eq!(&file.sector(*sequence).unwrap().unwrap().bytes, bytes, "sector {sequence}");
    }
    for (serial, fingerprint, bytes) in &device.plans {
        let plan = file.plan(*fingerprint).unwrap().unwrap();
        assert_eq!((&plan.serial, &plan.bytes), (serial, bytes));
    }
}

fn fresh() -> (tempfile::TempDir, std::path::PathBuf, Shared) {
    let directory = tempfile::tempdir().unwrap();
    let path = directory.path().join("tank-7.part");
    (directory, path, shared(FakeDevice::new(40, 21)))
}

#[test]
fn a_perfect_line_brings_everything() {
    let (_directory, path, device) = fresh();
    let collected = visit(in_process(&device), &path).unwrap();
    assert_eq!((collected.sectors, collected.gone, collected.lost_frames), (22, 0, 0));
    assert_eq!(collected.bytes, device.borrow().bytes() as u64);
    assert_same(&path, &device.borrow());
    assert!(!path.exists());
}

#[test]
fn an_empty_journal_is_a_whole_file() {
    let directory = tempfile::tempdir().unwrap();
    let path = directory.path().join("new.part");
    let mut device = FakeDevice::new(0, 0);
    device.sectors.insert(0, Vec::new());
    let device = shared(device);
    visit(in_process(&device), &path).unwrap();
    assert_same(&path, &device.borrow());
}

#[test]
fn a_noisy_line_brings_the_same() {
    for seed in 0..3 {
        let (_directory, path, device) = fresh();
        let collected = visit(Noisy::new(in_process(&device), 2e-4, 1e-5, seed), &path).unwrap();
        assert!(collected.lost_frames > 0 && collected.damaged_frames > 0);
        assert_same(&path, &device.borrow());
    }
}

#[test]
fn a_line_cut_anywhere_goes_on_where_it_was() {
    let (_directory, path, device) = fresh();
    let mut cuts = 0;
    let mut bytes = 0;
    loop {
        // The cuts fall at ever other places of frames, units and sectors.
        let line = Noisy::new(in_process(&device), 5e-5, 0.0, cuts).cut_after(4000 + cuts * 611);
        match visit(line, &path) {
            Ok(collected) => {
                bytes += collected.bytes;
                break;
            }
            Err(LinkError::Silent { .. } | LinkError::Noisy { .. }) => cuts += 1,
            Err(other) => panic!("{other}"),
        }
        // The device goes on writing meanwhile.
        let mut device = device.borrow_mut();
        let newest = device.newest();
        device.sectors.get_mut(&newest).unwrap().extend([7; 40]);
    }
    assert!(cuts >= 5, "{cuts}");
    assert!(bytes < device.borrow().bytes() as u64, "the last visit brought only the rest");
    assert_same(&path, &device.borrow());
}

#[test]
fn an_interruption_keeps_what_came() {
    let (_directory, path, device) = fresh();
    let mut client = Client::connect(in_process(&device)).unwrap();
    let mut part = PartFile::open(&path).unwrap();
    let stop = &mut |progress: &Progress| match progress.sectors {
        0..6 => ControlFlow::Continue(()),
        _ => ControlFlow::Break(()),
    };
    let error = collect(&mut client, &mut part, None, stop).unwrap_err();
    assert!(matches!(error, LinkError::Interrupted));
    drop(part);
    let collected = visit(in_process(&device), &path).unwrap();
    assert!(collected.resumed >= 6 && collected.sectors <= 17, "{collected:?}");
    assert_same(&path, &device.borrow());
}

#[test]
fn a_torn_part_file_is_mended_by_the_next_visit() {
    let (_directory, path, device) = fresh();
    let line = Noisy::new(in_process(&device), 0.0, 0.0, 0).cut_after(60_000);
    visit(line, &path).unwrap_err();
    let mut bytes = std::fs::read(&path).unwrap();
    bytes[30_000] ^= 0x10;
    bytes.truncate(bytes.len() - 77);
    std::fs::write(&path, &bytes).unwrap();
    let collected = visit(in_process(&device), &path).unwrap();
    assert!(collected.resumed > 3, "{collected:?}");
    let file = JournalFile::open(&path.with_extension("journal")).unwrap();
    assert_eq!(file.damage().len(), 1, "the damaged place stays, its sector came again");
    assert_eq!(file.sectors().count(), 22);
}

#[test]
fn what_the_device_overwrote_is_counted() {
    let (_directory, path, device) = fresh();
    let line = Noisy::new(in_process(&device), 0.0, 0.0, 0).cut_after(40_000);
    visit(line, &path).unwrap_err();
    let kept = PartFile::open(&path).unwrap().sectors().len();
    device.borrow_mut().sectors.retain(|sequence, _| *sequence >= 55);
    let collected = visit(in_process(&device), &path).unwrap();
    assert!(kept > 2 && kept < 15);
    assert_eq!(collected.gone as usize + kept, 15);
    assert_eq!(collected.sectors, 7);
}

#[test]
fn a_sector_the_device_cannot_read_is_counted_and_does_not_hold_up_the_rest() {
    let (_directory, path, device) = fresh();
    device.borrow_mut().torn = Some((45, 1024));
    let collected = visit(in_process(&device), &path).unwrap();
    assert_eq!((collected.unreadable, collected.gone, collected.sectors), (1, 0, 22));
    let mut file = JournalFile::open(&path.with_extension("journal")).unwrap();
    let begun = file.sector(45).unwrap().unwrap().bytes;
    assert_eq!(begun, device.borrow().sectors[&45][..1024], "what could be read is kept");
    assert_eq!(file.sectors().count(), 22);
}

#[test]
fn another_device_does_not_go_on_with_the_file() {
    let (_directory, path, device) = fresh();
    visit(Noisy::new(in_process(&device), 0.0, 0.0, 0).cut_after(9_000), &path).unwrap_err();
    device.borrow_mut().identity.device_id = strake_core::wire::Text::new("tank-8").unwrap();
    let error = visit(in_process(&device), &path).unwrap_err().to_string();
    assert!(
        error.contains("was begun with device 'tank-7', but device 'tank-8' answers"),
        "{error}"
    );
}
