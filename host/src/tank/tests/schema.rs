//! The description of the file, held against the readers and the example files.

mod validate;

use std::collections::{BTreeMap, BTreeSet};

use self::validate::Validator;
use super::{configs, tank_files};
use crate::tank::read::offered;
use crate::tank::read::section::asked;
use crate::tank::schema::{ROOT, Table, document};
use crate::tank::{Code, parse};
use crate::units::{Quantity, format_si, format_us};
use serde_json::Value;

fn toml_value(bytes: &[u8]) -> Option<toml::Value> {
    toml::from_str(std::str::from_utf8(bytes).ok()?).ok()
}

/// A file as the validator sees it.
fn as_json(value: &toml::Value) -> Value {
    match value {
        toml::Value::String(text) => text.as_str().into(),
        toml::Value::Integer(number) => (*number).into(),
        toml::Value::Float(number) => (*number).into(),
        toml::Value::Boolean(truth) => (*truth).into(),
        toml::Value::Datetime(date) => date.to_string().into(),
        toml::Value::Array(items) => items.iter().map(as_json).collect(),
        toml::Value::Table(table) => {
            table.iter().map(|(key, value)| (key.clone(), as_json(value))).collect()
        }
    }
}

fn examples() -> Vec<(String, toml::Value)> {
    let files = tank_files(&configs()).into_iter();
    let more = ("petroleum".to_owned(), PETROLEUM.to_vec());
    files.chain([more]).map(|(name, bytes)| (name, toml_value(&bytes).unwrap())).collect()
}

/// What no example shows.
const PETROLEUM: &[u8] = include_bytes!("../../../../tests/cli/petroleum.toml");

/// Every table of the description, by its name.
fn tables() -> BTreeMap<&'static str, &'static Table> {
    fn gather(table: &'static Table, found: &mut BTreeMap<&'static str, &'static Table>) {
        if let Some(other) = found.insert(table.name, table) {
            assert!(std::ptr::eq(other, table), "two tables are called {}", table.name);
            return;
        }
        for below in table.all().filter_map(|key| key.holds.table()) {
            gather(below, found);
        }
    }
    let mut found = BTreeMap::new();
    gather(&ROOT, &mut found);
    found
}

#[test]
fn every_example_fits() {
    let schema = Validator::new(document());
    for (name, file) in examples() {
        assert_eq!(schema.broken(&as_json(&file)), None, "{name}");
    }
}

/// That no key is read that is not described, every reader asserts by itself.
#[test]
fn every_key_described_is_read() {
    for folder in [configs(), configs().join("invalid")] {
        for (name, bytes) in tank_files(&folder) {
            let _ = parse(&name, &bytes);
        }
    }
    let _ = parse("petroleum", PETROLEUM);
    let asked = asked::all();
    let tables = tables();
    let described: BTreeSet<(&str, &str)> = tables
        .values()
        .flat_map(|table| table.all().map(move |key| (table.name, key.name)))
        .collect();
    let unread: Vec<_> = described.difference(&asked).collect();
    assert!(unread.is_empty(), "described and never read: {unread:?}");
    assert!(described.len() > 200, "{}", described.len());
    let unknown: Vec<_> = asked.iter().filter(|(table, key)| !tables[*table].knows(key)).collect();
    assert!(unknown.is_empty(), "read and not described: {unknown:?}");
}

#[test]
fn keys_stand_once_in_a_table() {
    for table in tables().values() {
        let mut names: Vec<&str> = table.all().map(|key| key.name).collect();
        names.sort_unstable();
        assert!(names.windows(2).all(|pair| pair[0] != pair[1]), "{}: {names:?}", table.name);
        assert!(!table.about.is_empty());
        assert!(table.all().all(|key| key.about.ends_with('.')), "{}", table.name);
    }
}

/// Broken files of which the schema knows nothing: they break what needs arithmetic, two tables, or
/// the device.
const NEEDS_THE_READERS: &[&str] = &[
    "above-shell",
    "alarm-order",
    "below-floor",
    "bolt-circle",
    "course-gap",
    "course-overlap",
    "density-order",
    "density-table",
    "design-point",
    "dry-design",
    "duplicate-name",
    "fill-order",
    "gasket-inside",
    "interval",
    "layer-order",
    "name-too-long",
    "needed-for-seal",
    "no-strength",
    "outside-range",
    "plastics",
    "reversed-range",
    "slope",
    "strapping-table",
    "too-many",
    "unknown-part",
    "unknown-unit",
    "vessel-kind",
    "wider-than-tank",
    "wrong-dimension",
];

#[test]
fn broken_files_break_the_schema_where_it_can_tell() {
    let schema = Validator::new(document());
    let mut passed = Vec::new();
    for (name, bytes) in tank_files(&configs().join("invalid")) {
        let Some(file) = toml_value(&bytes) else { continue };
        if schema.broken(&as_json(&file)).is_none() {
            passed.push(name);
        }
    }
    assert_eq!(passed, NEEDS_THE_READERS);
}

/// What the schema and the readers must agree on.
const SHAPE: &[Code] = &[
    Code::UnknownKey,
    Code::UnknownTable,
    Code::MissingKey,
    Code::MissingTable,
    Code::MissingCapacity,
    Code::MissingUnit,
    Code::WrongType,
    Code::BareNumber,
    Code::BadChoice,
    Code::EmptyText,
];

/// Keys whose value the readers alone can judge: a metal among other words, and what holds a cover
/// whose capacity names it.
const ALONE: &[&str] = &["material", "secured"];

/// Every way to a key below a value.
fn ways(value: &toml::Value, above: &[String]) -> Vec<Vec<String>> {
    let inner: Vec<(String, &toml::Value)> = match value {
        toml::Value::Table(table) => {
            table.iter().map(|(key, value)| (key.clone(), value)).collect()
        }
        toml::Value::Array(items) => {
            items.iter().enumerate().map(|(n, item)| (n.to_string(), item)).collect()
        }
        _ => Vec::new(),
    };
    let below = inner.into_iter().flat_map(|(key, value)| {
        let way = [above, &[key]].concat();
        let mut found = ways(value, &way);
        found.push(way);
        found
    });
    below.collect()
}

fn at<'a>(value: &'a mut toml::Value, way: &[String]) -> &'a mut toml::Value {
    way.iter().fold(value, |value, key| match value {
        toml::Value::Array(items) => &mut items[key.parse::<usize>().unwrap()],
        other => &mut other[key.as_str()],
    })
}

/// What makes two places alike: the keys on the way, and those that stand beside the last.
fn likeness(file: &toml::Value, way: &[String]) -> String {
    let mut file = file.clone();
    let (last, above) = way.split_last().unwrap();
    let beside = at(&mut file, above).as_table().map(|table| table.keys().collect::<Vec<_>>());
    let number = |key: &String| key.parse::<usize>().is_ok();
    let keys: Vec<&String> = above.iter().filter(|key| !number(key)).collect();
    format!("{keys:?} {beside:?} {}", if number(last) { "in a list" } else { last })
}

/// The file changed at one place, with what was done.
fn changes(file: &toml::Value, way: &[String]) -> Vec<(&'static str, toml::Value)> {
    let (last, above) = way.split_last().unwrap();
    let others: [(&str, toml::Value); 6] = [
        ("a number", 7.into()),
        ("a truth value", true.into()),
        ("a word", "grey".into()),
        ("nothing but spaces", " ".into()),
        ("an empty table", toml::Table::new().into()),
        ("an empty list", Vec::<toml::Value>::new().into()),
    ];
    let mut changed: Vec<_> = others
        .into_iter()
        .map(|(what, other)| {
            let mut file = file.clone();
            *at(&mut file, way) = other;
            (what, file)
        })
        .collect();
    let mut renamed = file.clone();
    if let toml::Value::Table(table) = at(&mut renamed, above) {
        let value = table.remove(last).unwrap();
        changed.push(("left out", renamed.clone()));
        at(&mut renamed, above).as_table_mut().unwrap().insert(format!("{last}_x"), value);
        changed.push(("renamed", renamed));
    }
    changed
}

/// Each key of each example in turn is left out, renamed and given something else: what the schema
/// refuses the readers refuse, and what they refuse for its shape the schema refuses.
#[test]
fn schema_and_readers_agree_on_every_key_of_every_example() {
    let schema = Validator::new(document());
    let (mut done, mut differ) = (BTreeSet::new(), Vec::new());
    for (name, file) in examples() {
        for way in ways(&file, &[]) {
            if !done.insert(likeness(&file, &way)) {
                continue;
            }
            for (what, changed) in changes(&file, &way) {
                let text = toml::to_string(&changed).unwrap();
                let found = match parse(&name, text.as_bytes()) {
                    Ok(_) => Vec::new(),
                    Err(findings) => findings.list().to_vec(),
                };
                let shape = found.iter().find(|finding| SHAPE.contains(&finding.code));
                let refused = schema.broken(&as_json(&changed));
                let alone = ALONE.contains(&way.last().unwrap().as_str());
                if (refused.is_some() && found.is_empty())
                    || (refused.is_none() && shape.is_some() && !alone)
                {
                    let shape = shape.map(|finding| &finding.message);
                    differ
                        .push(format!("{name} {}, {what}: {refused:?}, {shape:?}", way.join("/")));
                }
            }
        }
    }
    assert!(differ.is_empty(), "{}:\n{}", differ.len(), differ.join("\n"));
    assert!(done.len() > 400, "{}", done.len());
}

/// The capacities that a part may have, as the readers' messages list them.
#[test]
fn capacities_described_are_those_offered() {
    let tables = tables();
    for (kind, inward, offered) in offered::all() {
        let below = if inward { "capacity_inward" } else { "capacity" };
        let table = tables[kind].below(below);
        let described: BTreeSet<&str> = table.all().map(|key| key.name).collect();
        let others = ["basis", "material", "remaining"];
        let described: BTreeSet<&str> =
            described.into_iter().filter(|key| !others.contains(key)).collect();
        assert_eq!(described, offered, "{below} of {kind}");
    }
}

#[test]
fn what_is_read_as_a_quantity_fits_the_pattern() {
    let document = document();
    let property = &document["$defs"]["cylinder"]["properties"]["diameter"];
    let schema = Validator::new(document.clone());
    let fits = |text: &str| !schema.breaks(property, &Value::from(text));
    for text in ["26 ft 3 in", "26' 3\"", "1/8 in", "SG 1.2", "-0.6 kPa", ".5 m", "5e-3 m", "2 m³"]
    {
        assert!(fits(text), "{text}");
    }
    for quantity in [Quantity::Length, Quantity::Ratio, Quantity::PerKelvin, Quantity::Density] {
        assert!(fits(&format_si(0.02, quantity)) && fits(&format_us(0.02, quantity)));
    }
    for text in ["8", "grey", "", "1.5 "] {
        assert!(!fits(text), "{text}");
    }
}
