//! Journals that earlier versions wrote. They must be readable for ever.
//!
//! When this breaks, the reader has lost a format that stands on devices: mend the reader. Never
//! record a file anew and never change a number below. A new codec gets a file and a line of its
//! own; `record_a_journal` writes one.

use crate::reader::{Own, counts_of, file_of, journal};
use std::path::{Path, PathBuf};
use strake::journal_file::JournalFile;

/// A recorded journal and what it holds.
struct Recorded {
    file: &'static str,
    samples: u64,
    /// Transitions, faults, start-ups, clock fixes, plan changes, acknowledgements, gaps.
    events: [u64; 7],
    /// Over all fields of all samples, see [`Own::samples_check`].
    check: &'static str,
}

const RECORDED: [Recorded; 2] = [
    Recorded {
        file: "codec_0.strake-journal",
        samples: 1303,
        events: [6, 326, 6, 5, 5, 6, 6],
        check: "d02779d4",
    },
    Recorded {
        file: "codec_1.strake-journal",
        samples: 940,
        events: [4, 197, 3, 3, 3, 3, 3],
        check: "e1f43565",
    },
];

pub(crate) fn path(file: &str) -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("../tests/journal/recorded").join(file)
}

/// The sectors of a recorded journal.
pub(crate) fn sectors(file: &str) -> Vec<Vec<u8>> {
    let mut journal = JournalFile::open(&path(file)).unwrap();
    let sequences: Vec<u32> = journal.sectors().map(|(sequence, _)| sequence).collect();
    let sector = |sequence| journal.sector(sequence).unwrap().unwrap().bytes;
    sequences.into_iter().map(sector).collect()
}

#[test]
fn every_codec_stays_readable() {
    for recorded in &RECORDED {
        let mut own = Own::default();
        for sector in sectors(recorded.file) {
            own.take(&sector);
        }
        let events = [2, 3, 4, 5, 6, 10, 11].map(|number: usize| own.events[number]);
        let found = (own.samples, events, own.samples_check());
        let expected = (recorded.samples, recorded.events, recorded.check.to_owned());
        assert_eq!(found, expected, "{}", recorded.file);

        let counts = counts_of(&std::fs::read(path(recorded.file)).unwrap());
        assert_eq!(counts["samples_check"], recorded.check, "{}", recorded.file);
        assert_eq!(counts["damaged"], 0, "{}", recorded.file);
    }
}

/// Writes a journal in the codec of now to the file that `STRAKE_RECORD` names.
#[test]
#[ignore = "writes a file; run it by name when a new codec is to be kept"]
fn record_a_journal() {
    let file = std::env::var_os("STRAKE_RECORD").expect("STRAKE_RECORD names the file to write");
    std::fs::write(file, file_of(&mut journal::<4>())).unwrap();
}
