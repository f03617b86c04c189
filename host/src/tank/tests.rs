//! Tests of the whole reader: the example files, one broken file for each class of finding, and
//! damaged input.

mod broken;
mod damaged;
mod examples;
mod invalid;
mod schema;

use std::fs;
use std::path::{Path, PathBuf};

/// The folder of example tank files.
fn configs() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("../configs")
}

/// The tank files of a folder, by name.
fn tank_files(folder: &Path) -> Vec<(String, Vec<u8>)> {
    let mut found = Vec::new();
    for entry in fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.extension().is_some_and(|extension| extension == "toml") {
            let name = path.file_stem().unwrap().to_str().unwrap().to_owned();
            found.push((name, fs::read(&path).unwrap()));
        }
    }
    found.sort();
    found
}
