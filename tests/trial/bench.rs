//! Runs of the binary, and its documents.

use assert_cmd::Command;
use serde_json::Value;
use std::path::{Path, PathBuf};
use tempfile::TempDir;

pub(crate) fn root() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("..")
}

/// The binary with these words; gives its exit status and standard output.
pub(crate) fn strake(words: &[&str]) -> (i32, String) {
    let output = Command::cargo_bin("strake").unwrap().args(words).output().unwrap();
    let status = output.status.code().unwrap();
    (status, String::from_utf8(output.stdout).unwrap())
}

/// A trial into a directory of its own; gives the directory, the exit status and the document.
pub(crate) fn trial(words: &[&str]) -> (TempDir, i32, Value) {
    let directory = tempfile::tempdir().unwrap();
    let out = directory.path().to_str().unwrap();
    let all = [&["trial", "--format", "json", "-o", out], words].concat();
    let (status, text) = strake(&all);
    let document = serde_json::from_str(&text).unwrap();
    (directory, status, document)
}

/// The journal that a trial wrote.
pub(crate) fn journal(document: &Value) -> PathBuf {
    PathBuf::from(document["journal"].as_str().unwrap())
}

/// A replay of a journal; gives the exit status and the document.
pub(crate) fn replay(journal: &Path) -> (i32, Value) {
    let (status, text) = strake(&["replay", "--format", "json", journal.to_str().unwrap()]);
    (status, serde_json::from_str(&text).unwrap())
}
