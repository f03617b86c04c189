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
