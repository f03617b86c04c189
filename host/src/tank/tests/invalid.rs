//! Each file in `configs/invalid` is named after the class of finding it shows, and the text that
//! a person gets stands beside it. `STRAKE_BLESS=1` writes these texts anew, for review.

use std::collections::BTreeSet;
use std::fs;

use super::{configs, tank_files};
use crate::tank::{Code, Findings, MAX_FILE_BYTES, parse, parse_in};

/// All findings of a file: those of reading it, or, for a sound one, those of sealing it.
fn findings(name: &str, bytes: &[u8]) -> Findings {
    match parse_in(&configs().join("invalid"), &format!("{name}.toml"), bytes) {
        Ok(file) => file.findings(file.missing_for_seal()),
        Err(findings) => findings,
    }
}

#[test]
fn every_broken_file_says_what_stands_beside_it() {
    let folder = configs().join("invalid");
    let mut differing = Vec::new();
    for (name, bytes) in tank_files(&folder) {
        let findings = findings(&name, &bytes);
        let codes: Vec<&str> = findings.list().iter().map(|f| f.code.as_str()).collect();
        assert!(codes.contains(&name.as_str()), "{name} shows {codes:?}");
        let beside = folder.join(format!("{name}.txt"));
        let text = findings.to_text(false);
        if std::env::var_os("STRAKE_BLESS").is_some() {
            fs::write(&beside, &text).unwrap();
        }
        if fs::read_to_string(&beside).unwrap_or_default() != text {
            differing.push(format!("{name}:\n{text}"));
        }
    }
    assert!(differing.is_empty(), "{}", differing.join("\n"));
}

#[test]
fn every_class_has_its_broken_file() {
    let names: BTreeSet<String> =
        tank_files(&configs().join("invalid")).into_iter().map(|(name, _)| name).collect();
    for code in Code::ALL {
        // A file of that size is made below.
        if *code != Code::FileTooLarge {
            assert!(names.contains(code.as_str()), "no file shows {}", code.as_str());
        }
    }
}

#[test]
fn a_file_too_large_is_not_read() {
    let findings = parse("large.toml", &vec![b'#'; MAX_FILE_BYTES + 1]).unwrap_err();
    assert_eq!(findings.list()[0].code, Code::FileTooLarge);
    assert!(findings.to_text(false).contains("262145 bytes, the limit is 262144"));
}

#[test]
fn findings_come_in_the_order_of_the_file() {
    for (name, bytes) in tank_files(&configs().join("invalid")) {
        let findings = findings(&name, &bytes);
        let starts: Vec<usize> = findings.list().iter().map(|f| f.span.start).collect();
        assert!(starts.is_sorted(), "{name}: {starts:?}");
    }
}

#[test]
fn json_says_code_place_message_and_hint() {
    let text = "[tank]\nname = \"t\"\ncylinder = { diameter = 8, height = \"9 m\" }\n";
    let findings = parse("t.toml", text.as_bytes()).unwrap_err();
    let json = findings.to_json();
    let first = &json[0];
    assert_eq!(first["code"], "bare-number");
    assert_eq!(first["file"], "t.toml");
    assert_eq!(first["line"], 3);
    assert_eq!(first["column"], 25);
    assert_eq!(first["message"], "`diameter` in `cylinder` of [tank] is a bare number");
    assert!(first["hint"].as_str().unwrap().contains("diameter = \"8.0 m\""));
    let codes: Vec<&str> =
        json.as_array().unwrap().iter().map(|row| row["code"].as_str().unwrap()).collect();
    assert_eq!(
        codes,
        ["bare-number", "missing-table", "missing-table", "no-part"],
        "all findings at once"
    );
}

#[test]
fn colour_is_added_only_when_asked_for() {
    let findings = parse("t.toml", b"colour = 1\n").unwrap_err();
    assert!(!findings.to_text(false).contains('\u{1b}'));
    assert!(findings.to_text(true).contains('\u{1b}'));
}
