//! Exceptions from lints and tests that do not run: each says why. No unsafe code where none is
//! needed.

use crate::files::{self, File};
use crate::{none, tell};

/// Roots of the crates that hold no unsafe code; a board names registers and may.
const SAFE: &[&str] =
    &["shared_core/src/lib.rs", "firmware/src/lib.rs", "host/src/lib.rs", "host/src/main.rs"];

/// The attributes of a name in a source text, whole, over several lines where need be.
fn attributes<'a>(text: &'a str, name: &str) -> Vec<&'a str> {
    let mut found = Vec::new();
    for opening in [format!("#[{name}"), format!("#![{name}")] {
        for (at, _) in text.match_indices(&opening) {
            // Only whole names, and only attributes: those stand first on their line.
            let whole = text[at + opening.len()..].starts_with('(');
            let line = text[..at].rsplit('\n').next().unwrap_or_default();
            if whole && line.trim().is_empty() {
                let end = text[at..].find(")]").map_or(text.len(), |end| at + end + 2);
                found.push(&text[at..end]);
            }
        }
    }
    found
}

fn without_reason(file: &File) -> Vec<String> {
    let mut findings = Vec::new();
    for name in ["expect", "allow"] {
        for attribute in attributes(&file.text, name) {
            if !attribute.contains("reason = \"") {
                findings.push(format!("{}: {attribute}", file.path));
            }
        }
    }
    for (number, line) in file.lines() {
        let line = line.trim();
        if line.starts_with("#[ignore") && !line.starts_with("#[ignore = \"") {
            findings.push(format!("{}:{number}: {line}", file.path));
        }
    }
    findings
}

#[test]
fn every_exception_has_a_reason() {
    let findings: Vec<_> = files::with("rs").flat_map(without_reason).collect();
    let count = |name: &str| -> usize {
        files::with("rs").map(|file| attributes(&file.text, name).len()).sum()
    };
    let ignored = files::with("rs")
        .flat_map(File::lines)
        .filter(|(_, line)| line.trim().starts_with("#[ignore"))
        .count();
    tell(&format!(
        "{} lints expected, {} allowed, {ignored} tests ignored, each with its reason",
        count("expect"),
        count("allow"),
    ));
    none("no reason given", &findings);
}

#[test]
fn unsafe_code_is_forbidden_where_none_is_needed() {
    for path in SAFE {
        let text = &files::named(path).text;
        assert!(text.lines().any(|line| line == "#![forbid(unsafe_code)]"), "{path}");
    }
}

#[test]
fn the_rules_find_what_they_should() {
    let file = |text: &str| File { path: "a.rs".into(), text: text.into() };
    let held =
        file("#[expect(clippy::a, reason = \"b\")]\n  #![allow(\n  c,\n  reason = \"d\"\n)]\n");
    assert_eq!(attributes(&held.text, "expect"), ["#[expect(clippy::a, reason = \"b\")]"]);
    assert_eq!(attributes(&held.text, "allow").len(), 1);
    assert!(without_reason(&held).is_empty());
    assert_eq!(without_reason(&file("#[allow(a)]\nfn f() {}\n")).len(), 1);
    assert_eq!(without_reason(&file("    #[ignore]\n")).len(), 1);
    assert!(without_reason(&file("    #[ignore = \"takes an hour\"]\n")).is_empty());
    assert!(attributes("// as in #[expect(a)]\n", "expect").is_empty());
}
