//! `strake verify`: what it finds sound, damaged, contradictory, and that `strake replay` reports
//! the same damage.

use crate::bench::{journal, replay, strake, trial};
use crate::changed::{SAMPLES, TAG_PLAN, TAG_SECTOR, blocks, change_block, mend_record, payloads};
use serde_json::Value;
use std::path::Path;
use strake_core::journal::check::CRC32;
use tempfile::TempDir;

const TAG_HEAD: u8 = 4;

fn verify(journal: &Path) -> (i32, Value) {
    let (status, text) = strake(&["verify", "--format", "json", journal.to_str().unwrap()]);
    (status, serde_json::from_str(&text).unwrap())
}

/// The journal of the story.
fn story() -> (TempDir, Vec<u8>) {
    let (directory, _, document) = trial(&[]);
    let file = std::fs::read(journal(&document)).unwrap();
    (directory, file)
}

/// Verifies changed bytes; gives the document and the exit status, and the same of a replay.
fn both(directory: &TempDir, file: &[u8]) -> ((i32, Value), (i32, Value)) {
    let path = directory.path().join("changed.strake-journal");
    std::fs::write(&path, file).unwrap();
    (verify(&path), replay(&path))
}

/// The text of both commands tells the same damage.
fn damage_lines(directory: &TempDir, command: &str) -> Vec<String> {
    let path = directory.path().join("changed.strake-journal");
    let (_, text) = strake(&[command, path.to_str().unwrap()]);
    let lines = text.lines().skip_while(|line| !line.contains("passed over:"));
    lines.take_while(|line| line.starts_with("  ")).map(str::to_owned).collect()
}

#[test]
fn a_sound_journal_says_so_and_states_that_nobody_signed_it() {
    let (directory, file) = story();
    let ((status, document), _) = both(&directory, &file);
    assert_eq!(status, 0, "{document}");
    assert_eq!(document["schema"], "strake.verify/1");
    assert_eq!(document["sound"], true);
    assert_eq!(document["complete"], true);
    assert_eq!(document["signed"], false);
    assert_eq!(document["damage"].as_array().unwrap().len(), 0);
    // Every entry is numbered from 0, so the next number is their count.
    assert_eq!(document["head"]["next_entry"], document["entries"]);
    let path = directory.path().join("changed.strake-journal");
    let (_, text) = strake(&["verify", path.to_str().unwrap()]);
    assert!(text.contains("signature  none"), "{text}");
}

#[test]
fn a_torn_page_costs_as_many_samples_as_its_blocks_held() {
    let (directory, mut file) = story();
    let sector = payloads(&file, TAG_SECTOR)[0].clone();
    let bytes = sector.start + 6..sector.end;
    // The last block of samples of a page in which nothing else stands behind it.
    let found = blocks(&file[bytes.clone()], SAMPLES);
    let last = found.windows(2).find(|pair| pair[0].start / 256 != pair[1].start / 256).unwrap();
    let block = last[0].clone();
    let samples = u64::from(file[bytes.start + block.start + 1] & 0x1F) + 1;
    file[bytes.start + block.start + 4] ^= 0x40;
    mend_record(&mut file, &sector);

    let ((status, document), (replay_status, replayed)) = both(&directory, &file);
    assert_eq!(status, 6, "{document}");
    let damage = &document["damage"][0];
    assert_eq!(damage["place"], format!("sector 0, offset {}", block.start), "{document}");
    assert_eq!(damage["missing_entries"], samples, "{document}");
    assert_eq!(damage["missing_samples"], samples, "{document}");
    assert_eq!(document["missing_entries"], samples);
    assert_eq!(document["contradictions"].as_array().unwrap().len(), 0, "{document}");

    // What is left is identical; the hole is not compared.
    assert_eq!((replay_status, &replayed["identical"]), (6, &true.into()), "{replayed}");
    let told = format!(
        "sector 0, offset {}: a block without a right check; the rest of its page is passed over; \
         {samples} entries missing, {samples} of them samples",
        block.start
    );
    assert_eq!(replayed["damage"][0], told, "{replayed}");
    let lines = damage_lines(&directory, "verify");
    assert!(lines.len() > 1, "{lines:?}");
    assert_eq!(lines, damage_lines(&directory, "replay"));
}

#[test]
fn a_flipped_bit_of_the_file_is_a_missing_sector() {
    let (directory, mut file) = story();
    let sector = payloads(&file, TAG_SECTOR)[1].clone();
    file[sector.start + 1000] ^= 0x40;
    let ((status, document), (replay_status, _)) = both(&directory, &file);
    assert_eq!((status, replay_status), (6, 6), "{document}");
    assert_eq!(document["missing_sectors"], 1);
    let rows = document["damage"].as_array().unwrap();
    assert!(rows.iter().any(|row| row["place"] == "sector 1"), "{document}");
    assert!(document["missing_entries"].as_u64() > Some(100), "{document}");

    file.truncate(file.len() / 2);
    let ((status, document), _) = both(&directory, &file);
    assert_eq!(status, 6, "{document}");
    assert_eq!(document["head"], Value::Null);
    assert_eq!(document["complete"], false);
}

/// Changes with every check sum mended: what no damage makes.
#[test]
fn what_the_file_says_of_itself_must_hold() {
    type Change = (&'static str, fn(&mut Vec<u8>));
    let changes: [Change; 6] = [
        ("have the fingerprint", |file| {
            let plan = payloads(file, TAG_PLAN)[0].clone();
            file[plan.start + 16 + 40] ^= 1;
            mend_record(file, &plan);
        }),
        ("of the stated serial", |file| {
            let plan = payloads(file, TAG_PLAN)[0].clone();
            file[plan.start] ^= 1;
            mend_record(file, &plan);
        }),
        ("missing although nothing is damaged", |file| {
            let head = payloads(file, TAG_HEAD)[0].clone();
            file[head.start + 6] = file[head.start + 6].wrapping_add(1);
            mend_record(file, &head);
        }),
        ("more before it than were numbered", |file| {
            let second = payloads(file, TAG_SECTOR)[1].clone();
            let at = second.start + 6;
            file[at + 16] = file[at + 16].wrapping_sub(1);
            let check = CRC32.checksum(&file[at..at + 100]).to_le_bytes();
            file[at + 100..at + 104].copy_from_slice(&check);
            mend_record(file, &second);
        }),
        ("says that it is sector", |file| {
            let second = payloads(file, TAG_SECTOR)[1].clone();
            file[second.start] = 7;
            mend_record(file, &second);
        }),
        // The low nibble is the state before: the first move no more begins at the normal state.
        ("is not in the state that its moves led to", |file| {
            let is_move = |block: &[u8]| block[2] == 2;
            change_block(file, 2, is_move, |block| {
                let at = 3 + block[3..].iter().position(|&byte| byte < 0x80).unwrap() + 2;
                block[at] ^= 0x03;
            });
        }),
    ];
    let (directory, sound) = story();
    for (told, change) in changes {
        let mut file = sound.clone();
        change(&mut file);
        let ((status, document), _) = both(&directory, &file);
        assert_eq!(status, 7, "{told}: {document}");
        let contradictions = document["contradictions"].to_string();
        assert!(contradictions.contains(told), "{told}: {contradictions}");
    }
}

/// A page taken out without a trace: blank bytes are no damage, but the numbers remember.
#[test]
fn entries_taken_out_are_missed() {
    let (directory, mut file) = story();
    let sector = payloads(&file, TAG_SECTOR)[0].clone();
    file[sector.start + 6 + 512..sector.start + 6 + 768].fill(0xFF);
    mend_record(&mut file, &sector);
    let ((status, document), (replayed, _)) = both(&directory, &file);
    assert_eq!((status, replayed), (7, 7), "{document}");
}

#[test]
fn what_is_no_journal_is_an_invalid_input() {
    let directory = tempfile::tempdir().unwrap();
    let path = directory.path().join("none");
    for bytes in [&b"time_s,level_m"[..], b""] {
        std::fs::write(&path, bytes).unwrap();
        assert_eq!(strake(&["verify", path.to_str().unwrap()]).0, 3);
    }
    assert_eq!(strake(&["verify", "nowhere.strake-journal"]).0, 3);
}
