//! Every example parses and is used by a test.

use strake::tank;

use crate::files::{self, File};
use crate::{none, tell};

fn is_example(file: &File) -> bool {
    file.path.starts_with("configs/") && file.has_extension("toml") && !is_broken(file)
}

/// Broken on purpose, with what the tool says about it in a file beside it.
fn is_broken(file: &File) -> bool {
    file.path.starts_with("configs/invalid/")
}

/// Tests: files in a folder or of a name that says so, but not this one.
fn is_test(file: &File) -> bool {
    file.path.contains("tests") && !file.path.starts_with("tests/house/")
}

#[test]
fn every_example_parses() {
    let mut findings = Vec::new();
    let mut count = 0;
    for file in files::ALL.iter().filter(|file| is_example(file)) {
        count += 1;
        let folder = files::root().join("configs");
        if let Err(wrong) = tank::parse_in(&folder, &file.path, file.text.as_bytes()) {
            findings.push(format!("{}:\n{}", file.path, wrong.to_text(false)));
        }
    }
    tell(&format!("{count} example tank files"));
    none("not a tank file", &findings);
    assert!(count >= 3, "only {count} examples");
}

#[test]
fn every_example_is_used_by_a_test() {
    let mut findings = Vec::new();
    for example in files::ALL.iter().filter(|file| is_example(file)) {
        let name = example.path.rsplit('/').next().unwrap_or_default();
        let stem = name.trim_end_matches(".toml");
        let mut tests = files::with("rs").filter(|file| is_test(file));
        if !tests.any(|file| file.text.contains(name) || file.text.contains(&format!("\"{stem}\"")))
        {
            findings.push(example.path.clone());
        }
    }
    none("used by no test", &findings);
}

#[test]
fn every_broken_file_has_its_finding_beside_it() {
    let broken: Vec<_> = files::ALL.iter().filter(|file| is_broken(file)).collect();
    let mut findings = Vec::new();
    for file in &broken {
        let (stem, extension) = file.path.rsplit_once('.').unwrap_or_default();
        let other = if extension == "toml" { "txt" } else { "toml" };
        if !broken.iter().any(|found| found.path == format!("{stem}.{other}")) {
            findings.push(file.path.clone());
        }
    }
    none("without its other half", &findings);
    assert!(broken.len() >= 20, "only {} files", broken.len());
    let used = files::with("rs").any(|file| is_test(file) && file.text.contains("invalid/"));
    let listed = files::with("rs").any(|file| is_test(file) && file.text.contains("\"invalid\""));
    assert!(used || listed, "no test reads configs/invalid");
}
