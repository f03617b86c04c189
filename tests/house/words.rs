//! Words that have no place in any file.

use crate::files::{self, File};
use crate::none;

/// What is looked for, and why it has no place. A bar in a word keeps this list from finding
/// itself. Letters are looked for as a word, small ones in either case; anything else as it stands.
const BANNED: &[(&str, &str)] = &[
    ("TO|DO", "do it, or leave it out"),
    ("FIX|ME", "mend it"),
    ("XX|X", "mend it"),
    ("todo|!", "what is not in is absent"),
    ("unimpl|emented!", "what is not in is absent"),
    ("db|g!", "left over"),
    ("help|er", "say what it does"),
    ("help|ers", "say what they do"),
    ("sess|ion", "say what it is: a connection, a visit"),
    ("iss|ue", "about the making, not the product"),
    ("iss|ues", "about the making, not the product"),
    ("ta|sk", "about the making, not the product"),
    ("ta|sks", "about the making, not the product"),
    ("htt|p://", "addresses go stale: name the standard or book"),
    ("htt|ps://", "addresses go stale: name the standard or book"),
    ("crates|.io", "no registry is named"),
    ("/ho|me/", "a path of one machine"),
    ("/ro|ot/", "a path of one machine"),
    ("/Us|ers/", "a path of one machine"),
    ("/wo|rk/", "a path of one machine"),
    ("/tm|p/", "a path of one machine"),
];

/// A module of the standard library that has such a name.
const STANDARD: &str = "std::ta|sk::";

/// The name of the dialect of JSON Schema, which is an address by its specification.
const DIALECT: &str = "\"htt|ps://json-schema.org/draft/2020-12/schema\"";

/// Texts of others, kept as they are.
const FOREIGN: &[&str] =
    &["Cargo.lock", "LICENSE-APACHE", "LICENSE-MIT", "tests/fuzz/engine/Cargo.lock"];

/// What a machine wrote, byte by byte.
const RANDOM: &str = "tests/fuzz/corpus/";

fn is_letter(byte: Option<&u8>) -> bool {
    byte.is_some_and(|byte| byte.is_ascii_alphanumeric() || *byte == b'_')
}

/// Does `line` hold `word`, by the rule of [`BANNED`]?
fn holds(line: &str, word: &str) -> bool {
    if !word.bytes().all(|byte| byte.is_ascii_alphabetic()) {
        return line.contains(word);
    }
    let small = word.bytes().all(|byte| byte.is_ascii_lowercase());
    let line = if small { line.to_ascii_lowercase() } else { line.to_owned() };
    line.match_indices(word).any(|(at, _)| {
        let before = at.checked_sub(1).and_then(|before| line.as_bytes().get(before));
        !is_letter(before) && !is_letter(line.as_bytes().get(at + word.len()))
    })
}

/// A number sign with digits behind it, as it stands for an entry of some list elsewhere.
fn names_a_number(line: &str) -> bool {
    line.match_indices('#').any(|(at, _)| {
        let before = line[..at].chars().next_back();
        let digits = line[at + 1..].chars().take_while(char::is_ascii_digit).count();
        let after = line[at + 1 + digits..].chars().next();
        matches!(before, None | Some(' ' | '('))
            && (1..=5).contains(&digits)
            && !after.is_some_and(char::is_alphanumeric)
    })
}

fn findings(file: &File) -> Vec<String> {
    let mut findings = Vec::new();
    let [standard, dialect] = [STANDARD, DIALECT].map(|word| word.replace('|', ""));
    for (number, line) in file.lines() {
        let line = line.replace(&standard, "").replace(&dialect, "");
        let line = line.as_str();
        for (barred, why) in BANNED {
            let word = barred.replace('|', "");
            if holds(line, &word) {
                findings.push(format!("{}:{number}: {word}: {why}", file.path));
            }
        }
        // In code such a sign means something else; there only remarks are looked at.
        let remark = if file.has_extension("rs") {
            line.split_once("//").map_or("", |(_, remark)| remark)
        } else {
            line
        };
        if names_a_number(remark) {
            findings.push(format!("{}:{number}: a number of another list", file.path));
        }
    }
    findings
}

#[test]
fn no_banned_word_is_in_any_file() {
    let files = files::ALL.iter().filter(|file| !FOREIGN.contains(&file.path.as_str()));
    let files = files.filter(|file| !file.path.starts_with(RANDOM));
    let findings: Vec<_> = files.flat_map(findings).collect();
    none("banned words", &findings);
}

#[test]
fn no_banned_word_is_in_a_path() {
    let paths = files::ALL.iter().map(|file| File { path: "path".into(), text: file.path.clone() });
    let findings: Vec<_> = paths.flat_map(|path| findings(&path)).collect();
    none("banned words", &findings);
}

#[test]
fn the_rules_find_what_they_should() {
    for (barred, _) in BANNED {
        let word = barred.replace('|', "");
        let line = format!("a {word} b");
        assert!(holds(&line, &word), "{line}");
        assert!(holds(&word, &word), "{word}");
    }
    assert!(holds("One Is|sue. ".replace('|', "").as_str(), &"iss|ue".replace('|', "")));
    assert!(!holds("what it iss|ued".replace('|', "").as_str(), &"iss|ue".replace('|', "")));
    assert!(names_a_number(&format!("see {}12", '#')));
    assert!(names_a_number(&format!("({}3)", '#')));
    assert!(!names_a_number("{:#06x} #[test] #!/bin #a1b2c3"));
}
