//! Whatever the bytes, reading gives a file or findings, never a panic; and findings can be shown.

use proptest::prelude::*;

use super::{configs, tank_files};
use crate::tank::parse;

/// Reads the bytes and shows what comes of it.
fn survive(bytes: &[u8]) {
    match parse("damaged.toml", bytes) {
        Ok(file) => {
            let _ = file.findings(file.missing_for_seal()).to_text(true);
            let _ = file.uncovered_shell();
            let (low, high) = file.liquid.band_kg_m3();
            assert!(low.is_finite() && high.is_finite() && low <= high);
        }
        Err(findings) => {
            assert!(!findings.list().is_empty());
            let _ = findings.to_text(false);
            let _ = findings.to_json();
        }
    }
}

/// What a slip of the keyboard or a bad cable puts into a file.
const SCRAPS: [&str; 16] = [
    "\"", "'", "[", "]", "[[", "{", "}", "=", "\n", "#", "\u{feff}", "\u{e9}", "-", "1e999", "nan",
    "\t\u{b}",
];

proptest! {
    #![proptest_config(ProptestConfig::with_cases(512))]

    #[test]
    fn random_bytes(bytes in prop::collection::vec(any::<u8>(), 0..400)) {
        survive(&bytes);
    }

    #[test]
    fn random_text(text in "[\\PC\n]{0,200}") {
        survive(text.as_bytes());
    }

    #[test]
    fn mutated_examples(
        which in 0_usize..64,
        edits in prop::collection::vec((any::<u16>(), 0_u8..4, 0_usize..16, any::<u8>()), 1..6),
    ) {
        let mut files = tank_files(&configs());
        files.extend(tank_files(&configs().join("invalid")));
        let (_, mut bytes) = files.swap_remove(which % files.len());
        for (at, kind, scrap, byte) in edits {
            let at = usize::from(at) % (bytes.len() + 1);
            match kind {
                0 => drop(bytes.splice(at..at, SCRAPS[scrap].bytes())),
                1 => drop(bytes.drain(at..(at + usize::from(byte)).min(bytes.len()))),
                2 => bytes.truncate(at),
                _ => bytes.get_mut(at).into_iter().for_each(|old| *old = byte),
            }
        }
        survive(&bytes);
    }
}

#[test]
fn deep_nesting_and_many_findings_end() {
    survive("a = ".bytes().chain("[".bytes().cycle().take(100_000)).collect::<Vec<_>>().as_slice());
    survive(
        "[a]\n"
            .bytes()
            .chain("[a.a]\n".bytes().cycle().take(90_000))
            .collect::<Vec<_>>()
            .as_slice(),
    );
    let lines: Vec<String> = (0..15_000).map(|n| format!("key{n} = {n}")).collect();
    let many = lines.join("\n");
    let findings = parse("many.toml", many.as_bytes()).unwrap_err();
    assert_eq!(findings.list().len(), crate::tank::MAX_FINDINGS);
    assert!(findings.omitted() > 14_000);
    survive(many.as_bytes());
}
