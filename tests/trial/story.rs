//! The story that the trial tells by itself.

use crate::bench::{journal, replay, trial};
use serde_json::Value;
use std::path::Path;
use std::process::Command;

#[test]
fn the_story_ends_collected_and_identical() {
    let (_directory, status, document) = trial(&[]);
    assert_eq!(status, 0, "{document}");
    assert_eq!(document["schema"], "strake.trial/1");
    assert_eq!(document["identical"], true);
    assert_eq!(document["collected"], true);
    assert!(document["hashes_compared"].as_u64() > Some(10));
    // Every cycle left its sample: ten seconds apart while the level moves or a part is near its
    // threshold, a minute apart in the hours of rest.
    let beats = document["virtual_time_s"].as_u64().unwrap() / 10;
    let samples = document["samples"].as_u64().unwrap();
    assert!(
        (beats * 7 / 10..beats * 8 / 10).contains(&samples),
        "{samples} samples, {beats} beats"
    );
    let kinds: Vec<_> = list(&document, "alarms").iter().map(|row| row["kind"].clone()).collect();
    for kind in ["warn", "alarm", "fault"] {
        assert!(kinds.contains(&kind.into()), "{kind} is missing in {kinds:?}");
    }
    // The journal really crossed the link.
    let sent = document["link_bytes_from_device"].as_u64();
    assert!(sent > document["journal_bytes"].as_u64(), "{sent:?}");
}

#[test]
fn the_same_seed_gives_the_same_journal_byte_for_byte() {
    let read = |seed: &str| {
        let (_directory, _, document) = trial(&["--seed", seed]);
        std::fs::read(journal(&document)).unwrap()
    };
    let first = read("5");
    assert_eq!(first, read("5"));
    assert_ne!(first, read("6"));
}

#[test]
fn a_second_reader_counts_the_same() {
    let (_directory, _, document) = trial(&[]);
    let (_, replayed) = replay(&journal(&document));
    let script =
        Path::new(env!("CARGO_MANIFEST_DIR")).join("../tests/journal_reader/read_journal.py");
    let output = Command::new("python3").arg(script).arg(journal(&document)).output().unwrap();
    assert!(output.status.success(), "{}", String::from_utf8_lossy(&output.stderr));
    let counted: Value = serde_json::from_slice(&output.stdout).unwrap();
    assert_eq!(counted["samples"], document["samples"], "{counted}");
    let entries: u64 =
        counted["entries"].as_object().unwrap().values().filter_map(Value::as_u64).sum();
    assert_eq!(Some(entries), replayed["records"].as_u64(), "{counted}");
    assert_eq!(replayed["damaged"], 0);
}

#[test]
fn an_existing_journal_is_not_overwritten() {
    let (directory, _, document) = trial(&[]);
    let before = std::fs::read(journal(&document)).unwrap();
    let out = directory.path().to_str().unwrap();
    let (status, _) = crate::bench::strake(&["trial", "--seed", "9", "-o", out]);
    assert_eq!(status, 8);
    assert_eq!(std::fs::read(journal(&document)).unwrap(), before);
}

#[test]
fn an_assumed_capacity_is_told_to_the_end() {
    let tank = crate::bench::root().join("configs/rinse_basin.toml");
    let (_directory, status, document) = trial(&[tank.to_str().unwrap()]);
    assert_eq!(status, 0, "{document}");
    assert_eq!(document["identical"], true);
    let cautions = list(&document, "cautions");
    assert!(cautions[0].as_str().unwrap().starts_with("PROVISIONAL"), "{cautions:?}");
    // The brine tank stands on surveys and drawings alone.
    let (_directory, _, document) = trial(&[]);
    assert_eq!(list(&document, "cautions").len(), 1);
}

fn list<'v>(document: &'v Value, key: &str) -> &'v Vec<Value> {
    document["replay"][key].as_array().unwrap()
}
