//! Every direct dependency has its line in DEVELOPERS.md, and every line its dependency.

use std::collections::{BTreeMap, BTreeSet};

use toml::{Table, Value};

use crate::files::{self, File};
use crate::none;

const HEADING: &str = "## Dependencies";

/// The package's own crates need no reason.
const OWN: &str = "strake";

pub(crate) fn manifests() -> impl Iterator<Item = (&'static File, Table)> {
    files::ALL.iter().filter(|file| file.path.ends_with("Cargo.toml")).map(|file| {
        let table = file.text.parse().unwrap_or_else(|error| panic!("{}: {error}", file.path));
        (file, table)
    })
}

/// Names of the dependencies of one kind, for every target.
pub(crate) fn dependencies(manifest: &Table, kinds: &[&str]) -> BTreeSet<String> {
    let targets = manifest.get("target").and_then(Value::as_table).into_iter().flatten();
    let tables = targets.filter_map(|(_, target)| target.as_table()).chain([manifest]);
    tables
        .flat_map(|table| kinds.iter().filter_map(move |kind| table.get(*kind)))
        .filter_map(Value::as_table)
        .flat_map(|list| list.keys().cloned())
        .collect()
}

const ALL_KINDS: &[&str] = &["dependencies", "dev-dependencies", "build-dependencies"];

/// Where a package stands, as the guide calls it.
fn place(manifest: &str) -> &'static str {
    match manifest {
        "shared_core/Cargo.toml" => "core",
        "firmware/Cargo.toml" => "firmware",
        "host/Cargo.toml" => "host",
        _ if manifest.starts_with("firmware/boards/") => "boards",
        _ => "tests",
    }
}

/// A dependency and where it is used.
type Used = BTreeMap<String, BTreeSet<String>>;

/// Rows of the tables under the heading that have a name in back quotes, places and a reason.
fn explained(text: &str) -> Used {
    let section = text.split(HEADING).nth(1).unwrap_or_default();
    let section = section.split("\n## ").next().unwrap_or_default();
    let mut rows = Used::new();
    for line in section.lines() {
        let cells: Vec<_> = line.split('|').map(str::trim).collect();
        if let ["", name, places, reason, ""] = cells[..]
            && name.len() > 2
            && name.starts_with('`')
            && !reason.is_empty()
        {
            let places = places.split(", ").map(str::to_owned).collect();
            rows.insert(name.trim_matches('`').to_owned(), places);
        }
    }
    rows
}

fn used() -> Used {
    let mut used = Used::new();
    for (file, manifest) in manifests() {
        let place = place(&file.path);
        let shipped: &[&str] = &["dependencies", "build-dependencies"];
        for (kinds, place) in [(shipped, place), (&["dev-dependencies"], "tests")] {
            for name in dependencies(&manifest, kinds) {
                used.entry(name).or_default().insert(place.to_owned());
            }
        }
    }
    used.retain(|name, _| !name.starts_with(OWN));
    used
}

#[test]
fn every_dependency_has_its_reason() {
    let (used, explained) = (used(), explained(&files::named("DEVELOPERS.md").text));
    let differing = |here: &Used, there: &Used| -> Vec<_> {
        let missing = here.iter().filter(|(name, places)| there.get(*name) != Some(places));
        missing.map(|(name, places)| format!("{name}: {places:?}")).collect()
    };
    none("no such line in DEVELOPERS.md", &differing(&used, &explained));
    none("a line in DEVELOPERS.md, but no dependency", &differing(&explained, &used));
}

/// Folders whose sources belong to the package of a manifest.
fn sources(manifest: &str) -> Vec<String> {
    let folder = manifest.trim_end_matches("Cargo.toml").to_owned();
    // The tests across packages are built by the host's.
    let tests = (folder == "host/").then(|| "tests/".to_owned());
    [folder].into_iter().chain(tests).collect()
}

#[test]
fn every_dependency_is_used() {
    let mut findings = Vec::new();
    for (manifest, table) in manifests() {
        let sources = sources(&manifest.path);
        for name in dependencies(&table, ALL_KINDS) {
            let module = name.replace('-', "_");
            let mut files = files::with("rs")
                .filter(|file| sources.iter().any(|folder| file.path.starts_with(folder.as_str())));
            if !files.any(|file| file.text.contains(&module)) {
                findings.push(format!("{}: {name}", manifest.path));
            }
        }
    }
    none("a dependency that no source names", &findings);
}

#[test]
fn every_version_of_the_workspace_is_used() {
    let used: BTreeSet<_> =
        manifests().flat_map(|(_, manifest)| dependencies(&manifest, ALL_KINDS)).collect();
    let root: Table = files::named("Cargo.toml").text.parse().expect("a manifest");
    let offered = root["workspace"].as_table().expect("a table");
    let offered = dependencies(offered, &["dependencies"]);
    let surplus: Vec<_> = offered.difference(&used).cloned().collect();
    none("in the workspace, used by no package", &surplus);
}

#[test]
fn the_rules_find_what_they_should() {
    let text =
        "x\n## Dependencies\n| `a` | core | why |\n| b | c | d |\n| `e` | |\n## Next\n| `f` | g |";
    let core = BTreeSet::from(["core".to_owned()]);
    assert_eq!(explained(text), Used::from([("a".to_owned(), core)]));
    let manifest: Table = "[dependencies]\na = \"1\"\n[target.x.dev-dependencies]\nb = \"1\"\n"
        .parse()
        .expect("toml");
    assert_eq!(dependencies(&manifest, ALL_KINDS).len(), 2);
    assert_eq!(dependencies(&manifest, &["dependencies"]).len(), 1);
}
