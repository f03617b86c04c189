//! The description as JSON Schema, draft 2020-12.

use serde_json::{Map, Value, json};

use super::{Holds, Is, Key, ROOT, Rule, Table, When};
use crate::units::Quantity;

/// The dialect that the document is written in.
const DIALECT: &str = "https://json-schema.org/draft/2020-12/schema";
/// A number, and behind it something that may be a unit; or a scale in front, as `SG 1.2`.
const QUANTITY: &str = r#"[0-9.][^A-Za-z%'"°/]*[A-Za-z%'"°/]|^\s*[A-Za-z]+\s*[0-9.]"#;

/// The JSON Schema of a tank file.
#[must_use]
pub fn document() -> Value {
    let mut definitions = Map::new();
    define(&ROOT, &mut definitions);
    let mut document = table(&ROOT);
    document.insert("$schema".to_owned(), DIALECT.into());
    document.insert("title".to_owned(), "Tank file of strake, version 1".into());
    definitions.remove(ROOT.name);
    document.insert("$defs".to_owned(), definitions.into());
    document.into()
}

/// A table and all below it.
fn define(one: &'static Table, definitions: &mut Map<String, Value>) {
    if definitions.contains_key(one.name) {
        return;
    }
    definitions.insert(one.name.to_owned(), table(one).into());
    for below in one.all().filter_map(|key| key.holds.table()) {
        define(below, definitions);
    }
}

fn table(table: &Table) -> Map<String, Value> {
    let properties: Map<String, Value> =
        table.all().map(|key| (key.name.to_owned(), property(key))).collect();
    let needed: Vec<&str> = table.all().filter(|key| key.needed).map(|key| key.name).collect();
    let rules: Vec<Value> = table.rules.iter().flat_map(|rule| rules(*rule)).collect();
    let mut schema = Map::new();
    schema.insert("description".to_owned(), table.about.into());
    schema.insert("type".to_owned(), "object".into());
    schema.insert("properties".to_owned(), properties.into());
    schema.insert("additionalProperties".to_owned(), false.into());
    if !needed.is_empty() {
        schema.insert("required".to_owned(), needed.into());
    }
    if !rules.is_empty() {
        schema.insert("allOf".to_owned(), rules.into());
    }
    schema
}

fn property(key: &Key) -> Value {
    let mut schema = holds(key.holds);
    let units = key.holds.units();
    let about =
        if units.is_empty() { key.about.to_owned() } else { format!("{} In {units}.", key.about) };
    if let Value::Object(schema) = &mut schema {
        if key.needed && matches!(key.holds, Holds::Tables(_)) {
            schema.insert("minItems".to_owned(), 1.into());
        }
        schema.insert("description".to_owned(), about.into());
    }
    schema
}

fn holds(holds: Holds) -> Value {
    let quantity = || json!({ "type": "string", "pattern": QUANTITY });
    let text = || json!({ "type": "string", "pattern": "\\S" });
    let two = || json!({ "type": "array", "items": quantity(), "minItems": 2, "maxItems": 2 });
    match holds {
        Holds::Quantity(_) => quantity(),
        Holds::QuantityWordOrTable(_, word, table) => {
            json!({ "anyOf": [quantity(), { "const": word }, reference(table)] })
        }
        Holds::Several(_) => json!({
            "anyOf": [quantity(), { "type": "array", "items": quantity(), "minItems": 1 }]
        }),
        Holds::Pair(_) => two(),
        Holds::Rows(..) => json!({ "type": "array", "items": two(), "minItems": 2 }),
        Holds::Ratio => json!({ "anyOf": [{ "type": "number" }, quantity()] }),
        Holds::Integer(low, high) => {
            json!({ "type": "integer", "minimum": low, "maximum": high })
        }
        Holds::Flag => json!({ "type": "boolean" }),
        Holds::Text => text(),
        Holds::Texts(least) => json!({ "type": "array", "items": text(), "minItems": least }),
        Holds::Words(words) => json!({ "enum": words }),
        Holds::Table(table) => reference(table),
        Holds::Tables(table) => {
            json!({ "type": "array", "items": reference(table) })
        }
        Holds::QuantityOrTable(_, table) => json!({ "anyOf": [quantity(), reference(table)] }),
    }
}

fn reference(table: &Table) -> Value {
    json!({ "$ref": format!("#/$defs/{}", table.name) })
}

fn rules(rule: Rule) -> Vec<Value> {
    let one = |key: &str| json!({ "required": [key] });
    let each = |keys: &[&str]| keys.iter().map(|key| one(key)).collect::<Vec<_>>();
    match rule {
        Rule::OneOf(keys) => vec![json!({ "oneOf": each(keys) })],
        Rule::OneOfWith(key, keys) => {
            vec![json!({ "if": one(key), "then": { "oneOf": each(keys) }, "else": true })]
        }
        Rule::AnyOf(keys) => vec![json!({ "anyOf": each(keys) })],
        Rule::AtMostOne(keys) => {
            let pairs = keys.iter().enumerate().flat_map(|(n, a)| {
                keys[..n].iter().map(move |b| json!({ "not": { "required": [a, b] } }))
            });
            pairs.collect()
        }
        Rule::When(when) => vec![condition(when)],
    }
}

fn condition(when: When) -> Value {
    let key = when.key;
    let test = match when.is {
        Is::There => json!({ "required": [key] }),
        Is::True => json!({ "required": [key], "properties": { key: { "const": true } } }),
        Is::Word(words) => json!({ "required": [key], "properties": { key: { "enum": words } } }),
    };
    let follows = |needs: &[&str], forbids: &[&str]| {
        let never: Map<String, Value> =
            forbids.iter().map(|key| ((*key).to_owned(), false.into())).collect();
        json!({ "required": needs, "properties": never })
    };
    json!({
        "if": test,
        "then": follows(when.needs, when.forbids),
        "else": follows(when.else_needs, when.else_forbids),
    })
}

impl Holds {
    /// The units that people usually write, as a sentence lists them; empty without a quantity.
    fn units(self) -> String {
        let quantities: &[Quantity] = match self {
            Self::Quantity(all) | Self::QuantityWordOrTable(all, ..) | Self::Pair(all) => all,
            Self::Several(ref one) | Self::QuantityOrTable(ref one, _) => std::slice::from_ref(one),
            Self::Rows(first, second) if first == second => &[first],
            Self::Rows(first, second) => &[first, second],
            _ => &[],
        };
        let units: Vec<&str> = quantities.iter().map(|one| one.usual_units()).collect();
        units.join("; ")
    }
}
