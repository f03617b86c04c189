//! Imports go downwards: host to firmware to core, boards to firmware, the oracle to nothing.

use crate::dependencies::{dependencies, manifests};
use crate::files;
use crate::none;

/// What a package may use of the project's own, by the folder of its manifest.
const ALLOWED: &[(&str, &[&str])] = &[
    ("Cargo.toml", &[]),
    ("shared_core/Cargo.toml", &[]),
    ("firmware/Cargo.toml", &["strake-core"]),
    ("firmware/boards/common/", &["strake-firmware"]),
    ("firmware/boards/", &["strake-board-common", "strake-core", "strake-firmware"]),
    ("host/Cargo.toml", &["strake-core", "strake-firmware"]),
    ("tests/fuzz/engine/Cargo.toml", &["strake", "strake-core"]),
    ("tests/generate/Cargo.toml", &["strake-core", "strake-oracle"]),
    ("tests/oracle/Cargo.toml", &[]),
];

/// What only the tests of a package may use besides.
const FOR_TESTS: &[(&str, &str)] =
    &[("host/Cargo.toml", "strake-oracle"), ("host/Cargo.toml", "strake-generate")];

/// Crates of the project that a source file must not name.
const SOURCES: &[(&str, &[&str])] = &[
    ("shared_core/", &["strake_firmware", "strake::", "strake_oracle"]),
    ("firmware/", &["strake::", "strake_oracle"]),
    ("tests/oracle/", &["strake_core", "strake_firmware", "strake::"]),
    ("host/src/", &["strake_oracle", "strake_board"]),
];

fn upward(path: &str, used: impl IntoIterator<Item = String>) -> Vec<String> {
    let allowed = ALLOWED.iter().find(|(place, _)| path.starts_with(place));
    let (_, allowed) = allowed.unwrap_or_else(|| panic!("{path}: a package without a rule"));
    used.into_iter()
        .filter(|name| name.starts_with("strake") && !allowed.contains(&name.as_str()))
        .map(|name| format!("{path}: {name}"))
        .collect()
}

#[test]
fn packages_import_downwards() {
    let mut findings = Vec::new();
    for (file, manifest) in manifests() {
        let used = dependencies(&manifest, &["dependencies", "build-dependencies"]);
        findings.extend(upward(&file.path, used));
        let mut in_tests = dependencies(&manifest, &["dev-dependencies"]);
        in_tests.retain(|name| !FOR_TESTS.contains(&(file.path.as_str(), name.as_str())));
        findings.extend(upward(&file.path, in_tests));
    }
    none("an import upwards", &findings);
}

#[test]
fn sources_name_nothing_above_them() {
    let mut findings = Vec::new();
    for file in files::with("rs") {
        for (folder, banned) in SOURCES {
            for name in banned.iter().filter(|_| file.path.starts_with(folder)) {
                if file.text.contains(name) {
                    findings.push(format!("{}: {name}", file.path));
                }
            }
        }
    }
    none("an import upwards", &findings);
}

#[test]
fn the_rules_find_what_they_should() {
    let of = |names: &[&str]| names.iter().map(|&name| name.to_owned()).collect::<Vec<_>>();
    assert_eq!(upward("shared_core/Cargo.toml", of(&["strake-firmware", "libm"])).len(), 1);
    assert_eq!(upward("firmware/Cargo.toml", of(&["strake-core", "strake"])).len(), 1);
    assert!(upward("firmware/boards/a/Cargo.toml", of(&["strake-firmware"])).is_empty());
    assert!(upward("firmware/boards/a/Cargo.toml", of(&["strake-board-common"])).is_empty());
    assert_eq!(upward("firmware/Cargo.toml", of(&["strake-board-common"])).len(), 1);
    assert_eq!(upward("firmware/boards/common/Cargo.toml", of(&["strake-board-a"])).len(), 1);
}
