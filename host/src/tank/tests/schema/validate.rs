//! A validator of the part of JSON Schema that the document uses. A keyword that it does not know
//! is a failure, so that nothing of the document goes unchecked.

use std::cell::RefCell;
use std::collections::HashMap;

use regex::Regex;
use serde_json::{Map, Value};

pub(super) struct Validator {
    root: Value,
    /// Patterns met so far.
    patterns: RefCell<HashMap<String, Regex>>,
}

impl Validator {
    pub(super) fn new(root: Value) -> Self {
        Self { root, patterns: RefCell::default() }
    }

    /// The first place where `value` breaks the schema, or nothing.
    pub(super) fn broken(&self, value: &Value) -> Option<String> {
        self.check(&self.root, value, "")
    }

    /// The same of one schema inside.
    pub(super) fn breaks(&self, schema: &Value, value: &Value) -> bool {
        !self.fits(schema, value)
    }

    fn matches(&self, pattern: &str, text: &str) -> bool {
        let mut patterns = self.patterns.borrow_mut();
        let known = patterns.entry(pattern.to_owned());
        known.or_insert_with(|| Regex::new(pattern).unwrap()).is_match(text)
    }

    fn check(&self, schema: &Value, value: &Value, place: &str) -> Option<String> {
        match schema {
            Value::Bool(true) => None,
            Value::Bool(false) => Some(format!("{place}: may not stand here")),
            Value::Object(schema) => schema
                .iter()
                .find_map(|(keyword, rule)| self.keyword(schema, keyword, rule, value, place)),
            other => panic!("{other} is no schema"),
        }
    }

    fn fits(&self, schema: &Value, value: &Value) -> bool {
        self.check(schema, value, "").is_none()
    }

    fn keyword(
        &self,
        schema: &Map<String, Value>,
        keyword: &str,
        rule: &Value,
        value: &Value,
        place: &str,
    ) -> Option<String> {
        let wrong = |what: String| Some(format!("{place}: {what}"));
        match keyword {
            "$schema" | "$defs" | "title" | "description" | "then" | "else" => None,
            "$ref" => {
                let name = rule.as_str().unwrap().strip_prefix("#/$defs/").unwrap();
                self.check(self.root["$defs"].get(name).unwrap(), value, place)
            }
            "allOf" => {
                rule.as_array().unwrap().iter().find_map(|one| self.check(one, value, place))
            }
            "anyOf" | "oneOf" => {
                let all = rule.as_array().unwrap();
                let count = all.iter().filter(|one| self.fits(one, value)).count();
                let good = if keyword == "anyOf" { count > 0 } else { count == 1 };
                if good { None } else { wrong(format!("{count} of {rule}")) }
            }
            "not" => self.fits(rule, value).then(|| format!("{place}: not {rule}")),
            "if" => {
                let branch = if self.fits(rule, value) { "then" } else { "else" };
                self.check(schema.get(branch).unwrap(), value, place)
            }
            "const" => {
                if rule == value {
                    None
                } else {
                    wrong(format!("not {rule}"))
                }
            }
            "enum" => {
                let found = rule.as_array().unwrap().contains(value);
                if found { None } else { wrong(format!("none of {rule}")) }
            }
            "type" => {
                if is(rule.as_str().unwrap(), value) {
                    None
                } else {
                    wrong(format!("no {rule}"))
                }
            }
            _ => self.of_one_type(schema, keyword, rule, value, place),
        }
    }

    /// Keywords that say nothing about values of other types.
    fn of_one_type(
        &self,
        schema: &Map<String, Value>,
        keyword: &str,
        rule: &Value,
        value: &Value,
        place: &str,
    ) -> Option<String> {
        let wrong = |what: String| Some(format!("{place}: {what}"));
        match (keyword, value) {
            ("pattern", Value::String(text)) => {
                if self.matches(rule.as_str().unwrap(), text) {
                    None
                } else {
                    wrong(format!("{text:?} is not like {rule}"))
                }
            }
            ("minimum", Value::Number(number)) => {
                let below = number.as_f64() < rule.as_f64();
                if below { wrong(format!("below {rule}")) } else { None }
            }
            ("maximum", Value::Number(number)) => {
                let above = number.as_f64() > rule.as_f64();
                if above { wrong(format!("above {rule}")) } else { None }
            }
            ("minItems", Value::Array(items)) => {
                let few = (items.len() as u64) < rule.as_u64().unwrap();
                if few { wrong(format!("fewer than {rule}")) } else { None }
            }
            ("maxItems", Value::Array(items)) => {
                let many = items.len() as u64 > rule.as_u64().unwrap();
                if many { wrong(format!("more than {rule}")) } else { None }
            }
            ("items", Value::Array(items)) => items
                .iter()
                .enumerate()
                .find_map(|(n, item)| self.check(rule, item, &format!("{place}/{n}"))),
            ("required", Value::Object(found)) => {
                let keys = rule.as_array().unwrap().iter().filter_map(Value::as_str);
                let mut absent = keys.filter(|key| !found.contains_key(*key));
                absent.next().and_then(|key| wrong(format!("lacks {key}")))
            }
            ("properties", Value::Object(found)) => found.iter().find_map(|(key, value)| {
                self.check(rule.get(key)?, value, &format!("{place}/{key}"))
            }),
            ("additionalProperties", Value::Object(found)) => {
                assert_eq!(*rule, Value::Bool(false));
                let known = &schema["properties"];
                let mut extra = found.keys().filter(|key| known.get(key).is_none());
                extra.next().and_then(|key| wrong(format!("{key} is not known")))
            }
            (
                "pattern"
                | "minimum"
                | "maximum"
                | "minItems"
                | "maxItems"
                | "items"
                | "required"
                | "properties"
                | "additionalProperties",
                _,
            ) => None,
            _ => panic!("keyword {keyword} is not known"),
        }
    }
}

fn is(kind: &str, value: &Value) -> bool {
    match kind {
        "object" => value.is_object(),
        "array" => value.is_array(),
        "string" => value.is_string(),
        "boolean" => value.is_boolean(),
        "number" => value.is_number(),
        "integer" => value.is_u64() || value.is_i64(),
        _ => panic!("type {kind} is not known"),
    }
}
