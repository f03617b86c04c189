//! Collecting: complete, resumed after a kill, resumed after an interruption.

use crate::bench::{
    Ran, Swing, commission, commissioned, device_with_ring, document, on, run, run_for, strake,
};
use std::fs;
use std::path::{Path, PathBuf};
use std::process::{Child, Command, Stdio};
use std::thread::sleep;
use std::time::{Duration, Instant};
use strake::journal_file::JournalFile;
use strake::replay::replay;
use strake::sim::pty::PtyMachine;

const DAY_MS: u64 = 86_400_000;
/// Bytes that get through before the cable is pulled: some sectors of the journal.
const CUT_BYTES: u64 = 40_000;

/// A device with some tens of sectors in its journal.
fn with_a_journal() -> PtyMachine {
    let device = commissioned(Swing { low_m: 3.0, high_m: 6.0 });
    run_for(&device, 6 * DAY_MS);
    device
}

fn journal_in(folder: &Path) -> PathBuf {
    let files = fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().path());
    let mut journals: Vec<PathBuf> =
        files.filter(|path| path.extension().is_some_and(|end| end == "strake-journal")).collect();
    assert_eq!(journals.len(), 1, "{journals:?}");
    journals.remove(0)
}

fn is_the_device_s_own(device: &PtyMachine, journal: &Path) {
    let replay = replay(&mut JournalFile::open(journal).unwrap()).unwrap();
    assert!(replay.damage.is_empty() && replay.missing_plans.is_empty(), "{replay:?}");
    assert_eq!(replay.gaps, 0);
    assert!(replay.engine.verdict.identical(), "{:?}", replay.engine.verdict);
    let hash = device.with(|machine| machine.app().unwrap().device().state().hash).unwrap();
    assert_eq!(JournalFile::open(journal).unwrap().head().unwrap().running_hash, hash);
}

#[test]
fn a_journal_comes_home_complete_and_replays_identically() {
    let device = with_a_journal();
    let folder = tempfile::tempdir().unwrap();
    let into = folder.path().join("journals");
    let ran = on(&device, &["collect", "-o", into.to_str().unwrap()]);
    assert_eq!((ran.exit, ran.err.as_str()), (0, ""));
    let complete = "pump house 7: complete: everything that the device held is in the file\n";
    assert!(ran.out.starts_with(complete), "{}", ran.out);
    let journal = journal_in(&into);
    let name = journal.file_name().unwrap().to_str().unwrap();
    assert!(name.starts_with("pump-house-7-20") && name.ends_with("Z.strake-journal"), "{name}");
    assert!(ran.out.contains(&format!("  file     {}\n", journal.display())), "{}", ran.out);
    is_the_device_s_own(&device, &journal);
}

#[test]
fn the_document_counts_what_was_taken() {
    let device = with_a_journal();
    let folder = tempfile::tempdir().unwrap();
    let arguments = ["collect", "-o", folder.path().to_str().unwrap(), "--format", "json"];
    let ran = on(&device, &arguments);
    assert_eq!((ran.exit, ran.err.as_str()), (0, ""));
    let document = document(&ran);
    assert_eq!(document["schema"], "strake.collect/1");
    assert_eq!(document["complete"], true);
    assert_eq!(document["signed"], false);
    assert_eq!(document["gone_sectors"], 0);
    assert_eq!(document["damaged_sectors"], 0);
    assert_eq!(document["resumed_sectors"], 0);
    let (oldest, newest) = (&document["oldest_sector"], &document["newest_sector"]);
    let span = newest.as_u64().unwrap() - oldest.as_u64().unwrap() + 1;
    assert_eq!(document["sectors"], span);
    assert!(span > 12, "{document}");
    assert!(document["bytes"].as_u64().unwrap() > (span - 1) * 3_900);
    assert_eq!(document["running_hash"].as_str().unwrap().len(), 16);
}

/// Begins to collect over a cable that is pulled after some sectors, and waits for those.
fn stuck(device: &PtyMachine, folder: &Path) -> Child {
    device.unplug_after(CUT_BYTES).unwrap();
    let arguments = ["collect", "--port", device.port(), "-o", folder.to_str().unwrap()];
    let mut command = strake();
    let child = command.args(arguments).stdout(Stdio::piped()).stderr(Stdio::piped());
    let child = child.spawn().unwrap();
    let part = folder.join("pump-house-7.strake-journal.part");
    let deadline = Instant::now() + Duration::from_mins(2);
    while fs::metadata(&part).map_or(0, |part| part.len()) < 3 * 4096 {
        assert!(Instant::now() < deadline, "no part file grows");
        sleep(Duration::from_millis(5));
    }
    child
}

fn goes_on(device: &mut PtyMachine, folder: &Path) {
    device.plug_in().unwrap();
    let ran = on(device, &["collect", "-o", folder.to_str().unwrap()]);
    assert_eq!(ran.exit, 0, "{}", ran.err);
    assert!(ran.err.starts_with("going on with "), "{}", ran.err);
    assert!(ran.out.contains("complete: everything"), "{}", ran.out);
    assert!(ran.out.contains("sectors there from an interrupted run\n"), "{}", ran.out);
    is_the_device_s_own(device, &journal_in(folder));
}

#[test]
fn a_killed_collection_goes_on_where_it_was() {
    let mut device = with_a_journal();
    let folder = tempfile::tempdir().unwrap();
    let mut child = stuck(&device, folder.path());
    child.kill().unwrap();
    assert_eq!(child.wait().unwrap().code(), None, "killed");
    goes_on(&mut device, folder.path());
}

#[test]
fn an_interrupted_collection_says_how_to_go_on() {
    let mut device = with_a_journal();
    let folder = tempfile::tempdir().unwrap();
    let child = stuck(&device, folder.path());
    let sent = Command::new("kill").args(["-INT", &child.id().to_string()]).status().unwrap();
    assert!(sent.success());
    let ran = Ran::from(child.wait_with_output().unwrap());
    assert_eq!((ran.exit, ran.out.as_str()), (130, ""));
    assert_eq!(
        ran.err,
        "error: interrupted\n  \
         hint: what was collected is kept, the same command goes on from there\n"
    );
    goes_on(&mut device, folder.path());
}

#[test]
fn a_file_in_the_way_is_never_overwritten() {
    let device = commissioned(Swing::still(5.0));
    let folder = tempfile::tempdir().unwrap();
    let part = folder.path().join("pump-house-7.strake-journal.part");
    fs::write(&part, "somebody else's notes").unwrap();
    let mut command = strake();
    command.args(["collect", "--port", device.port(), "-o", folder.path().to_str().unwrap()]);
    let ran = run(&mut command);
    assert_eq!(ran.exit, 3, "{}", ran.err);
    assert!(ran.err.contains("is not a journal file"), "{}", ran.err);
    assert_eq!(fs::read_to_string(&part).unwrap(), "somebody else's notes");
}

#[test]
fn what_the_device_overwrote_in_between_is_counted_and_never_called_complete() {
    let mut device = device_with_ring(Swing { low_m: 3.0, high_m: 6.0 }, 20);
    commission(&device);
    run_for(&device, 4 * DAY_MS);
    let folder = tempfile::tempdir().unwrap();
    let mut child = stuck(&device, folder.path());
    child.kill().unwrap();
    child.wait().unwrap();
    // The ring goes round meanwhile.
    run_for(&device, 10 * DAY_MS);
    device.plug_in().unwrap();
    let arguments = ["collect", "-o", folder.path().to_str().unwrap(), "--format", "json"];
    let ran = on(&device, &arguments);
    assert_eq!(ran.exit, 6, "{}", ran.err);
    let document = document(&ran);
    assert_eq!(document["complete"], false);
    assert_eq!(document["missing_sectors"], 0);
    let [resumed, gone, sectors, newest] =
        ["resumed_sectors", "gone_sectors", "sectors", "newest_sector"]
            .map(|key| document[key].as_u64().unwrap());
    assert!(resumed >= 2 && gone > 10, "{document}");
    assert_eq!(gone + sectors, newest + 1, "every sector is taken or counted");
}

#[test]
fn damage_on_the_device_is_counted_beside_a_complete_file() {
    let device = with_a_journal();
    device
        .with(|machine| {
            let journal = machine.bench().journal.clone();
            // In the tenth sector, behind its header and checkpoint.
            journal.with(|flash| flash.corrupt(9 * 4096 + 2000, 2, |byte| byte ^ 0x55));
        })
        .unwrap();
    let folder = tempfile::tempdir().unwrap();
    let ran = on(&device, &["collect", "-o", folder.path().to_str().unwrap()]);
    assert_eq!((ran.exit, ran.err.as_str()), (6, ""));
    assert!(ran.out.contains("complete: everything that the device held"), "{}", ran.out);
    let damaged = "  - 1 sector with places that cannot be read, as on the device\n";
    assert!(ran.out.contains(damaged), "{}", ran.out);
}
