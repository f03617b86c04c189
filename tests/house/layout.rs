//! Sizes of files, width of lines, and what may lie at the top.

use crate::files::{self, File};
use crate::{none, tell};

const LINES_MAX: usize = 500;
const COLUMNS_MAX: usize = 100;

/// Everything at the top but files whose name begins with a dot.
const TOP: &[&str] = &[
    "Cargo.lock",
    "Cargo.toml",
    "DEVELOPERS.md",
    "LICENSE-APACHE",
    "LICENSE-MIT",
    "README.md",
    "configs",
    "firmware",
    "host",
    "shared_core",
    "tests",
];

/// Text that people write and read by the line; tables of data and expected output are not.
fn is_prose_or_code(file: &File) -> bool {
    ["rs", "md", "py", "x"].iter().any(|extension| file.has_extension(extension))
        || file.is_script()
}

/// Prose may be longer: it is read by its headings.
fn too_long(file: &File) -> Option<String> {
    let lines = file.text.lines().count();
    (lines > LINES_MAX && !file.has_extension("md"))
        .then(|| format!("{}: {lines} lines", file.path))
}

/// A line that is text in a string, or goes on as such.
fn is_string(line: &str) -> bool {
    line.trim_start().starts_with('"') || line.contains("\\\"") || line.ends_with(" \\")
}

/// A row of a table cannot be broken, nor can output that is shown as it came; text in a string is
/// left to whoever wrote it, as rustfmt does.
fn too_wide(file: &File) -> Vec<String> {
    let markdown = file.has_extension("md");
    let mut fenced = false;
    let mut findings = Vec::new();
    for (number, line) in file.lines() {
        fenced ^= markdown && line.starts_with("```");
        let columns = line.chars().count();
        let row = line.trim_start_matches("//!").trim_start().starts_with('|');
        let string = file.has_extension("rs") && is_string(line);
        let exempt = row || string || (markdown && fenced);
        if columns > COLUMNS_MAX && !exempt {
            findings.push(format!("{}:{number}: {columns} columns", file.path));
        }
    }
    findings
}

#[test]
fn files_are_short() {
    let files: Vec<_> = files::ALL.iter().filter(|file| is_prose_or_code(file)).collect();
    let findings: Vec<_> = files.iter().filter_map(|file| too_long(file)).collect();
    let lines: usize = files.iter().map(|file| file.text.lines().count()).sum();
    tell(&format!("{} files of code and prose, {lines} lines", files.len()));
    none(&format!("at most {LINES_MAX} lines in a file of code"), &findings);
}

#[test]
fn lines_fit_a_page() {
    let files = files::ALL.iter().filter(|file| is_prose_or_code(file));
    let findings: Vec<_> = files.flat_map(too_wide).collect();
    none(&format!("at most {COLUMNS_MAX} columns"), &findings);
}

#[test]
fn the_top_level_holds_what_is_named() {
    let mut findings = Vec::new();
    for file in files::ALL.iter() {
        let first = file.path.split('/').next().unwrap_or_default();
        if !first.starts_with('.') && !TOP.contains(&first) {
            findings.push(file.path.clone());
        }
    }
    none("not at the top level", &findings);
    for name in TOP {
        assert!(files::root().join(name).exists(), "{name} is missing");
    }
}

#[test]
fn the_rules_find_what_they_should() {
    let file = |path: &str, text: String| File { path: path.into(), text };
    assert!(too_long(&file("a.rs", "x\n".repeat(500))).is_none());
    assert!(too_long(&file("a.rs", "x\n".repeat(501))).is_some());
    assert!(too_long(&file("a.md", "x\n".repeat(501))).is_none());
    let wide = "é".repeat(101);
    assert_eq!(too_wide(&file("a.rs", wide.clone())), ["a.rs:1: 101 columns"]);
    assert!(too_wide(&file("a.rs", "é".repeat(100))).is_empty());
    assert!(too_wide(&file("a.rs", format!("    \"{wide}\","))).is_empty());
    assert!(too_wide(&file("a.md", format!("| {wide}\n```\n{wide}\n```\n"))).is_empty());
    assert_eq!(too_wide(&file("a.md", format!("```\n```\n{wide}"))).len(), 1);
}
